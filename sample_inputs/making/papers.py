"""The attachments of the first sample: one-page papers, each marked as an invented example."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping, Sequence
from html import escape
from pathlib import Path
from typing import Any

MARK = "Invented example: no real person, firm, place or permit"
PAPERS = Path(__file__).with_name("papers.toml")
STYLE = """
@page { size: letter; margin: 0.9in; }
@font-face { font-family: "Sample Sans"; src: url("%s"); }
html { font: 10.5pt "Sample Sans"; color: #222; }
h1 { font-size: 17pt; font-weight: 400; margin: 0 0 2pt; }
p.mark { border: 1.2pt solid #8a3b00; color: #8a3b00; padding: 3pt 6pt; display: inline-block; }
table { border-collapse: collapse; width: 100%%; margin: 8pt 0; }
th, td { border-bottom: 0.5pt solid #999; text-align: left; padding: 3pt 6pt 3pt 0; font-weight: normal; }
th { color: #555; }
p.sign { margin-top: 36pt; }
"""


def load() -> Mapping[str, Mapping[str, Any]]:
    """The papers as data: file name without ending, and what stands on it."""
    with PAPERS.open("rb") as file:
        return tomllib.load(file)


def page(paper: Mapping[str, Any]) -> str:
    """One paper as HTML."""
    facts = _table((), paper["facts"])
    table = _table(paper["columns"], paper["rows"]) if "rows" in paper else ""
    text = "".join(f"<p>{escape(line)}</p>" for line in paper.get("text", []))
    title, signature = escape(paper["title"]), escape(paper["signature"])
    return (
        f'<!doctype html><html lang="en"><head><title>{title}</title></head><body>'
        f'<h1>{title}</h1><p class="mark">{MARK}</p>'
        f'{facts}{table}{text}<p class="sign">{signature}</p></body></html>'
    )


def _table(head: Sequence[str], rows: Sequence[Sequence[str]]) -> str:
    def cells(row: Sequence[str], tag: str) -> str:
        return "".join(f"<{tag}>{escape(cell)}</{tag}>" for cell in row)

    top = f"<thead><tr>{cells(head, 'th')}</tr></thead>" if head else ""
    body = "".join(f"<tr>{cells(row, 'td')}</tr>" for row in rows)
    return f"<table>{top}<tbody>{body}</tbody></table>"


def render(paper: Mapping[str, Any]) -> bytes:
    """One paper as an archivable PDF with its font inside, the same bytes each time."""
    import font_source_sans_pro  # type: ignore[import-untyped]
    from weasyprint import CSS, HTML
    from weasyprint.text.fonts import FontConfiguration

    font = Path(font_source_sans_pro.SourceSansPro).as_uri()
    fonts = FontConfiguration()
    style = CSS(string=STYLE % font, font_config=fonts)
    document = HTML(string=page(paper)).render(stylesheets=[style], font_config=fonts)
    content: bytes = document.write_pdf(pdf_variant="pdf/a-3u", pdf_identifier=paper["title"].encode())
    return content


def write_all(folder: Path) -> None:
    """Write every paper to a folder."""
    folder.mkdir(parents=True, exist_ok=True)
    for name, paper in load().items():
        (folder / f"{name}.pdf").write_bytes(render(paper))
