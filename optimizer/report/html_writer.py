"""A report as one page of HTML that opens without a network."""

from __future__ import annotations

from base64 import b64encode
from collections.abc import Iterable
from html import escape
from importlib.resources import files
from string import Template

from optimizer.report.blocks import Picture, Section, Table, unbroken
from optimizer.report.content import Report
from optimizer.report.pictures import as_svg


def html_page(content: Report) -> str:
    """The whole page; nothing in it is fetched from anywhere, no text in it can become markup.

    Args:
        content: of the report.
    """
    head, reason = content.recommendation
    return Template(_part("page.html")).substitute(
        style=_part("page.css"),
        title=escape(content.title),
        subtitle=escape(content.subtitle),
        question=escape(unbroken(content.question)),
        head=escape(head),
        reason=escape(unbroken(reason)),
        options=table_html(content.options),
        gains="".join(
            f"<li><b>{escape(number)}</b> {escape(unbroken(words))}</li>" for number, words in content.gains
        ),
        pictures="".join(picture_html(picture) for picture in content.pictures),
        assumptions=_items(content.assumptions),
        cautions=_items(content.cautions),
        appendix="".join(_section(letter, section) for letter, section in lettered(content.sections)),
        origin=escape(content.origin),
    )


def lettered(sections: Iterable[Section]) -> list[tuple[str, Section]]:
    """Sections with the letters of an appendix."""
    return [(chr(ord("A") + place), section) for place, section in enumerate(sections)]


def table_html(table: Table) -> str:
    """A table as HTML."""
    head = "".join(_cell("th", place, text, table) for place, text in enumerate(table.columns))
    rows = (
        ('<tr class="strong">' if place in table.strong else "<tr>")
        + "".join(_cell("td", column, text, table) for column, text in enumerate(row))
        + "</tr>"
        for place, row in enumerate(table.rows)
    )
    widths = "".join(f'<col style="width:{100.0 * share:.1f}%">' for share in table.shares)
    caption = f"<caption>{escape(table.title)}</caption>" if table.title else ""
    return (
        f'<div class="wide"><table>{caption}<colgroup>{widths}</colgroup><thead><tr>{head}</tr></thead>'
        f"<tbody>{''.join(rows)}</tbody></table></div>"
    )


def _cell(tag: str, column: int, text: str, table: Table) -> str:
    kind = ' class="figure"' if column in table.figures else ""
    return f"<{tag}{kind}>{escape(text)}</{tag}>"


def picture_html(picture: Picture) -> str:
    """A chart as HTML: its drawing stands in the page itself, as an image that can run nothing."""
    drawing = b64encode(as_svg(picture).encode()).decode()
    return (
        f"<figure><figcaption>{escape(picture.title)}</figcaption>"
        f'<img alt="{escape(picture.words)}" src="data:image/svg+xml;base64,{drawing}"></figure>'
    )


def _section(letter: str, section: Section) -> str:
    words = "".join(f"<p>{escape(text)}</p>" for text in section.paragraphs)
    tables = "".join(table_html(table) for table in section.tables)
    return f"<section><h2>{letter}  {escape(section.title)}</h2>{words}{tables}</section>"


def _items(texts: Iterable[str]) -> str:
    return "".join(f"<p>{escape(unbroken(text))}</p>" for text in texts)


def _part(name: str) -> str:
    return files("optimizer.report").joinpath(name).read_text(encoding="utf-8")
