"""The dossier as one HTML file: no request leaves it, nothing of a user's runs in it."""

from __future__ import annotations

import base64
import hashlib
import json
from collections.abc import Mapping
from importlib import resources
from typing import Any

from crosscheck.dossier.content import Dossier
from crosscheck.dossier.equations import EQUATIONS


def page_bytes(dossier: Dossier, equations: Mapping[str, bytes]) -> bytes:
    """The page; text is escaped, pictures and equations are inside, only our own script may run.

    Parameters
    ----------
    dossier : Dossier
        What it says.
    equations : mapping of name to bytes
        SVG of every equation.

    Raises
    ------
    ModuleNotFoundError
        Where jinja2 is not installed.
    """
    import jinja2
    from markupsafe import Markup

    environment = jinja2.Environment(autoescape=True, undefined=jinja2.StrictUndefined, trim_blocks=True)
    environment.filters["kind"] = lambda block: type(block).__name__
    environment.filters["picture"] = _picture
    environment.filters["data"] = lambda value: Markup(_data(value))
    style, script = _own("page.css"), _own("page.js")
    text = environment.from_string(_own("page.html.jinja")).render(
        dossier=dossier,
        equations=equations,
        words=EQUATIONS,
        style=style,
        script=script,
        style_source=Markup(_source(style)),
        script_source=Markup(_source(script)),
    )
    return text.encode()


def _own(name: str) -> str:
    """A file of ours beside this one."""
    return (resources.files("crosscheck.dossier") / name).read_text(encoding="utf-8")


def _source(text: str) -> str:
    """What a content security policy calls exactly this text."""
    return f"'sha256-{base64.b64encode(hashlib.sha256(text.encode()).digest()).decode()}'"


def _picture(svg: bytes) -> str:
    """A picture as an address that holds it."""
    return f"data:image/svg+xml;base64,{base64.b64encode(svg).decode()}"


def _data(value: Any) -> str:
    """JSON that cannot end the script element it stands in."""
    text = json.dumps(value, ensure_ascii=True)
    return text.replace("<", "\\u003c").replace(">", "\\u003e").replace("&", "\\u0026")
