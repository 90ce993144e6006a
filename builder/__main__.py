"""`python -m builder` is the command `sparingly`."""

from builder.commands.main import entry

if __name__ == "__main__":
    entry()
