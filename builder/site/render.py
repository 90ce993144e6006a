"""One page, one file: template, style, scripts and data put together under a strict policy.

The Content-Security-Policy allows exactly the inline style and scripts of the page, by hash, and
nothing else: no request leaves the page. Data travel in a JSON block, which no policy governs and
nothing executes.
"""

from __future__ import annotations

import base64
import hashlib
import json
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import jinja2
from markupsafe import Markup

from builder.chem.formula import to_html
from builder.chem.rounding import display


@dataclass(frozen=True)
class Renderer:
    """Templates of one folder, ready to render."""

    environment: jinja2.Environment
    folder: Path

    @classmethod
    def from_folder(cls, folder: Path) -> Renderer:
        environment = jinja2.Environment(
            loader=jinja2.FileSystemLoader(folder),
            autoescape=True,
            undefined=jinja2.StrictUndefined,
            trim_blocks=True,
            lstrip_blocks=True,
            keep_trailing_newline=True,
        )
        environment.filters["formula"] = formula_html
        environment.filters["number"] = display
        environment.filters["minus"] = minus
        return cls(environment, folder)

    def text(self, name: str) -> str:
        return (self.folder / name).read_text(encoding="utf-8")

    def page(
        self,
        template: str,
        context: Mapping[str, Any],
        scripts: Sequence[str] = (),
        data: Mapping[str, Any] | None = None,
    ) -> bytes:
        """The bytes of a page. scripts: file names in order; data: JSON for the scripts."""
        style = self.text("style.css")
        code = [self.text("first.js"), "\n".join(self.text(name) for name in scripts)]
        code = [c for c in code if c]
        policy = (
            "default-src 'none'; "
            f"script-src {' '.join(_hash(c) for c in code)}; style-src {_hash(style)}; "
            "img-src data:; base-uri 'none'; form-action 'none'"
        )
        return (
            self.environment.get_template(template)
            .render(
                **context,
                policy=policy,
                style=Markup(style),
                first_script=Markup(code[0]),
                script=Markup(code[1]) if len(code) > 1 else Markup(""),
                data=Markup(json_block(data)) if data is not None else None,
            )
            .encode("utf-8")
        )


def _hash(text: str) -> str:
    digest = hashlib.sha256(text.encode("utf-8")).digest()
    return f"'sha256-{base64.b64encode(digest).decode('ascii')}'"


def json_block(data: Mapping[str, Any]) -> str:
    """JSON that can stand inside a script element whatever text it holds; NaN is refused."""
    text = json.dumps(data, ensure_ascii=False, allow_nan=False, separators=(",", ":"))
    return text.replace("<", "\\u003c").replace(">", "\\u003e").replace("&", "\\u0026")


def minus(text: str) -> str:
    """Hyphens that stand for a minus sign made one (U+2212); those inside words stay."""
    return _MINUS.sub("\u2212", text)


_MINUS = re.compile(r"(?<![A-Za-z0-9])-(?=[0-9(ΔA-Z])|(?<=[ )])-(?= )|(?<=e)-(?=[0-9])")


def formula_html(text: str) -> Markup:
    """A formula or reaction with real sub- and superscripts, escaped."""
    parts = [
        Markup("{}").format(chars)
        if kind == "text"
        else Markup(f"<{kind}>{{}}</{kind}>").format(chars)
        for kind, chars in to_html(text)
    ]
    return Markup("").join(parts)
