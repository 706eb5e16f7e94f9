"""The report as one HTML text: the view placed into the templates, shipped or overlaid by a firm's own."""

from __future__ import annotations

import re
from datetime import datetime
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING

from reporter.errors import OutputError
from reporter.output.phrases import Phrases
from reporter.resources import templates_folder

if TYPE_CHECKING:
    from xml.etree.ElementTree import Element

    from jinja2 import Environment
    from markupsafe import Markup

    from reporter.output.view.model import View

#: The one stylesheet, and the one a firm may add.
STYLE, OWN_STYLE = "style.css", "style_extra.css"
#: What the elements of HTML are, where no style sheet says more.
ELEMENTS = "elements.css"
#: Characters that no document may hold; a workbook's text may have them.
_FORBIDDEN = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
#: Room behind a number [pt]: of the cell, for a digit, for the point, taken back for a closing bracket.
_ROOM, _DIGIT, _POINT, _BRACKET, _MOST_DECIMALS = 7.0, 4.473, 2.237, 2.73, 9
_POWER = re.compile(r"×10\^(−?[0-9]+)")


def page_text(view: View, phrases: Phrases, issued: datetime, overlay: Path | None) -> str:
    """The HTML of the report.

    Raises
    ------
    OutputError
        A template is missing, malformed, or names something the view does not have.
    """
    try:
        template = _environment(overlay).get_template("report.html")
        text = template.render(view=view, words=phrases, issued_at=issued.isoformat(timespec="seconds"))
    except OutputError:
        raise
    except Exception as error:  # whatever a firm's template does
        raise OutputError(*_what_and_where(error)) from None
    return _FORBIDDEN.sub("\ufffd", text)


def _what_and_where(error: Exception) -> tuple[str, str]:
    """What is wrong with a template, and its name and line; no path of this machine."""
    import traceback

    from jinja2 import TemplateNotFound, TemplateSyntaxError

    steps = [step for step in traceback.extract_tb(error.__traceback__) if step.filename.endswith(".html")]
    name, line = (Path(steps[-1].filename).name, steps[-1].lineno) if steps else ("", None)
    words = str(getattr(error, "message", "") or error)
    if isinstance(error, TemplateNotFound):
        words = f"there is no template {error.name}"
    elif isinstance(error, TemplateSyntaxError):
        name, line = Path(error.name or name).name, error.lineno
    where = f"{name}, line {line}" if name and line else name or "templates"
    return f"the templates cannot be filled in: {words}", where


def load_templates() -> None:
    """Compile the shipped templates, which is most of the time of filling them in."""
    environment = _environment(None)
    for name in environment.list_templates(["html"]):
        environment.get_template(name)


def style_text(overlay: Path | None) -> str:
    """The style sheet, with the firm's additions behind it."""
    parts = [_chosen(STYLE, overlay).read_text(encoding="utf-8")]
    if overlay is not None and (overlay / OWN_STYLE).is_file():
        parts.append((overlay / OWN_STYLE).read_text(encoding="utf-8"))
    return "\n".join(parts)


def well_formed(text: str) -> Element | None:
    """The tree of an HTML text that is well-formed XML too, as the shipped templates make it; None where a
    firm's own templates are not, so that the (slower) reader of HTML is needed."""
    from xml.etree.ElementTree import ParseError, fromstring

    try:
        return fromstring(text)
    except ParseError:
        return None


def elements_text() -> str:
    """The rules that make HTML elements blocks, tables or text, the widths of columns in percent, and the room
    behind a number for the decimals it lacks."""
    widths = "".join(f".w{percent} {{ width: {percent}% }}\n" for percent in range(1, 101))
    return (templates_folder() / ELEMENTS).read_text(encoding="utf-8") + widths + _pads()


def _pads() -> str:
    rules = []
    for digits in range(_MOST_DECIMALS):
        for name, point in (("p", 0.0), ("q", _POINT)):
            room = _ROOM + digits * _DIGIT + point
            rules.append(f".{name}{digits} {{ padding-right: {room:.2f}pt }}\n")
            rules.append(f".k{name}{digits} {{ padding-right: {room - _BRACKET:.2f}pt }}\n")
    return "".join(rules)


def _chosen(name: str, overlay: Path | None) -> Path:
    if overlay is not None and (overlay / name).is_file():
        return overlay / name
    return templates_folder() / name


def _refuse_links(overlay: Path) -> None:
    """A link in a firm's folder that leads out of it is refused: nothing outside the folder is read."""
    whole = overlay.resolve()
    for path in overlay.rglob("*"):
        if path.is_symlink() and not path.resolve().is_relative_to(whole):
            raise OutputError("a link in the templates' folder leads out of it", path.name)


@cache
def _shipped() -> Environment:
    return _made(None)


def _environment(overlay: Path | None) -> Environment:
    """Templates of the two folders alone; text is escaped; an unknown name is an error."""
    return _shipped() if overlay is None else _made(overlay)


def _made(overlay: Path | None) -> Environment:
    from jinja2 import FileSystemLoader, StrictUndefined
    from jinja2.sandbox import ImmutableSandboxedEnvironment
    from markupsafe import Markup

    folders = [templates_folder()] if overlay is None else [overlay, templates_folder()]
    if overlay is not None:
        _refuse_links(overlay)
    made = ImmutableSandboxedEnvironment(
        loader=FileSystemLoader(folders),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    made.filters["rich"] = rich
    made.filters["markup"] = Markup
    return made


def rich(text: str) -> str | Markup:
    """A text with the letter of NOx lowered, powers of ten raised, and no break behind a paragraph sign."""
    text = text.replace("§ ", "§\u00a0")
    if "NOx" not in text and "^" not in text:
        return text
    from markupsafe import Markup, escape

    safe = str(escape(text)).replace("NOx", "NO<sub>x</sub>")
    return Markup(_POWER.sub("×10<sup>\\1</sup>", safe))
