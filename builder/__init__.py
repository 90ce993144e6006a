"""Sparingly: a traceable reference of sparingly soluble salts, built from reviewed constants."""

__version__ = "0.1.0"
