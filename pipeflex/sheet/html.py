"""Templates to HTML: everything that is not ours is escaped, in CSS strings as well."""

from functools import cache
from pathlib import Path
from typing import Any, Final

from jinja2 import Environment, FileSystemLoader, StrictUndefined
from markupsafe import Markup, escape

from pipeflex.sheet.expression import Expression

_TEMPLATES: Final = Path(__file__).parent / "templates"
PARTS: Final = (
    "verdict", "drawing", "inputs", "checks", "loads", "ladder", "turns", "ledger", "sources", "cautions", "design",
)  # fmt: skip


def css_string(text: str) -> Markup:
    """A text as the inside of a CSS string: all but letters and digits as escapes."""
    return Markup("".join(c if c.isascii() and c.isalnum() else f"\\{ord(c):06x} " for c in text))


def exact_text(text: str) -> Markup:
    """A text whose every character a reader of HTML gets back, line ends included."""
    return Markup(str(escape(text)).replace("\r", "&#13;"))


@cache
def _environment() -> Environment:
    made = Environment(
        loader=FileSystemLoader(_TEMPLATES),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    made.filters["css_string"] = css_string
    made.filters["exact"] = exact_text
    made.filters["math"] = _math
    return made


def _math(expression: Expression) -> Markup:
    return Markup(expression.math)


@cache
def _css(name: str) -> Markup:
    return Markup((_TEMPLATES / name).read_text("utf-8"))


def page(view: Any) -> str:
    """The offline page of a view of a sheet."""
    return _environment().get_template("page.html.j2").render(s=view, css=_css("sheet.css"), page_css=_css("page.css"))


def fragment(view: Any) -> str:
    """The fragment for a notebook."""
    return _environment().get_template("fragment.html.j2").render(s=view, css=_css("sheet.css"))


def part(name: str, view: Any) -> str:
    """One part alone, without its heading."""
    module = _environment().get_template("parts.html.j2").make_module({})
    return str(getattr(module, name)(view))


def style() -> str:
    """The style sheet that parts need; they stand inside an element of class `pipeflex`."""
    return str(_css("sheet.css"))
