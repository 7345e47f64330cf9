"""A report as PDF: page one for the decision, the appendix behind it, A4 upright."""

from __future__ import annotations

from collections.abc import Iterable
from html import escape
from io import BytesIO
from typing import Any

from reportlab.lib.colors import HexColor
from reportlab.lib.enums import TA_RIGHT
from reportlab.lib.pagesizes import A4
from reportlab.lib.styles import ParagraphStyle
from reportlab.lib.units import mm
from reportlab.platypus import (
    BaseDocTemplate,
    CondPageBreak,
    Flowable,
    Frame,
    Image,
    KeepInFrame,
    LongTable,
    PageBreak,
    PageTemplate,
    Paragraph,
    Spacer,
    TableStyle,
)
from reportlab.platypus import Table as Grid

from optimizer.charts.look import ALERT, FAINT, HAIRLINE, INK, QUIET
from optimizer.report.blocks import Picture, Section, Table, unbroken
from optimizer.report.content import Report
from optimizer.report.fonts import pdf_fonts
from optimizer.report.html_writer import lettered
from optimizer.report.pictures import as_png

MARGIN, FOOT = 14.0 * mm, 15.0 * mm
WIDTH, HEIGHT = A4[0] - 2.0 * MARGIN, A4[1] - MARGIN - FOOT
MARKED = "#eef1ea"
GAP = 3.0 * mm
LEAST_ROOM = 45.0 * mm
"""Height below which no table starts on a page."""


def pdf_file(content: Report) -> bytes:
    """The report as a PDF file.

    Args:
        content: of the report.
    """
    stream = BytesIO()
    document = BaseDocTemplate(
        stream, pagesize=A4, title=content.title, subject=content.subtitle, author="wattfront", invariant=1
    )
    frame = Frame(MARGIN, FOOT, WIDTH, HEIGHT, 0, 0, 0, 0)
    foot = _set(f"{content.title}. {content.origin}")
    template = PageTemplate("all", [frame], onPage=lambda canvas, page: _footer(canvas, page.page, foot))
    document.addPageTemplates([template])
    first = KeepInFrame(WIDTH, HEIGHT - 1.0, _decision(content), mode="shrink")
    document.build([first, PageBreak(), *_appendix(content)])
    return stream.getvalue()


def _style(size: float, *, bold: bool = False, colour: str = INK, **more: Any) -> ParagraphStyle:
    regular, strong, _ = pdf_fonts()
    return ParagraphStyle(
        f"{size}{bold}{colour}{sorted(more.items())}",
        fontName=strong if bold else regular,
        fontSize=size,
        leading=1.25 * size,
        textColor=HexColor(colour),
        **more,
    )


def _set(text: str) -> str:
    return pdf_fonts()[2](text)


def _text(words: str, style: ParagraphStyle) -> Paragraph:
    """Words as a paragraph; nothing in them is taken for markup."""
    return Paragraph(escape(_set(unbroken(words)), quote=False), style)


def _decision(content: Report) -> list[Flowable]:
    """Page one."""
    head, reason = content.recommendation
    small = _style(8.0)
    return [
        _text(content.title, _style(17.0, bold=True)),
        *([_text(content.subtitle, _style(9.0, colour=QUIET))] if content.subtitle else []),
        Spacer(0, 2.5 * mm),
        _text(content.question, _style(9.5)),
        Spacer(0, GAP),
        _boxed(
            [_text(f"Recommended: {head}", _style(10.5, bold=True)), _text(reason, _style(8.5))], INK, MARKED
        ),
        Spacer(0, GAP),
        _grid(content.options, 8.0),
        Spacer(0, 2.0 * mm),
        *(_text(f"{number}:  {words}", small) for number, words in content.gains),
        Spacer(0, GAP),
        _side_by_side([_drawn(picture) for picture in content.pictures]),
        Spacer(0, GAP),
        _text("Assumptions", _style(9.0, bold=True)),
        *(_text(words, small) for words in content.assumptions),
        Spacer(0, GAP),
        _boxed(
            [_text("Cautions", _style(9.0, bold=True)), *(_text(words, small) for words in content.cautions)],
            ALERT,
        ),
    ]


def _boxed(inside: list[Flowable], edge: str, ground: str | None = None) -> Grid:
    box = Grid([[inside]], colWidths=[WIDTH], hAlign="LEFT")
    style: list[tuple[Any, ...]] = [
        ("LINEBEFORE", (0, 0), (0, -1), 2.0, HexColor(edge)),
        ("LEFTPADDING", (0, 0), (-1, -1), 8),
        ("TOPPADDING", (0, 0), (-1, -1), 3),
        ("BOTTOMPADDING", (0, 0), (-1, -1), 4),
    ]
    if ground:
        style.append(("BACKGROUND", (0, 0), (-1, -1), HexColor(ground)))
    box.setStyle(TableStyle(style))
    return box


def _drawn(picture: Picture) -> list[Flowable]:
    width = WIDTH / 3.0 - 2.0 * mm
    image = Image(BytesIO(as_png(picture)))
    image.drawHeight, image.drawWidth = image.imageHeight * width / image.imageWidth, width
    return [_text(picture.title, _style(8.5, bold=True)), image]


def _side_by_side(cells: list[list[Flowable]]) -> Grid:
    grid = Grid([cells], colWidths=[WIDTH / len(cells)] * len(cells), hAlign="LEFT")
    edges = (("LEFTPADDING", 0), ("RIGHTPADDING", 4), ("TOPPADDING", 0), ("BOTTOMPADDING", 0))
    grid.setStyle(
        TableStyle(
            [("VALIGN", (0, 0), (-1, -1), "TOP"), *((name, (0, 0), (-1, -1), size) for name, size in edges)]
        )
    )
    return grid


def _grid(table: Table, size: float) -> LongTable:
    """A table whose head comes again on every page."""
    cells = [_cells(table.columns, table, size, QUIET)]
    cells += [
        _cells(row, table, size, INK, bold=place in table.strong) for place, row in enumerate(table.rows)
    ]
    grid = LongTable(cells, colWidths=[share * WIDTH for share in table.shares], repeatRows=1, hAlign="LEFT")
    style: list[tuple[Any, ...]] = [
        ("VALIGN", (0, 0), (-1, -1), "TOP"),
        ("VALIGN", (0, 0), (-1, 0), "BOTTOM"),
        ("LINEBELOW", (0, 0), (-1, 0), 0.7, HexColor(FAINT)),
        ("LINEBELOW", (0, 1), (-1, -1), 0.4, HexColor(HAIRLINE)),
        ("LEFTPADDING", (0, 0), (-1, -1), 2),
        ("RIGHTPADDING", (0, 0), (-1, -1), 4),
        ("TOPPADDING", (0, 0), (-1, -1), 1.5),
        ("BOTTOMPADDING", (0, 0), (-1, -1), 2),
    ]
    style += [("BACKGROUND", (0, row + 1), (-1, row + 1), HexColor(MARKED)) for row in table.strong]
    grid.setStyle(TableStyle(style))
    return grid


def _cells(
    texts: Iterable[str], table: Table, size: float, colour: str, *, bold: bool = False
) -> list[Paragraph]:
    left = _style(size, bold=bold, colour=colour, splitLongWords=1)
    right = _style(size, bold=bold, colour=colour, alignment=TA_RIGHT)
    return [_text(text, right if place in table.figures else left) for place, text in enumerate(texts)]


def _appendix(content: Report) -> list[Flowable]:
    parts: list[Flowable] = [_text("Appendix for engineers", _style(14.0, bold=True)), Spacer(0, GAP)]
    for letter, section in lettered(content.sections):
        parts += _section(letter, section)
    return parts


def _section(letter: str, section: Section) -> list[Flowable]:
    """A heading stays with the first lines of its table, which may go on over pages."""
    parts: list[Flowable] = [
        CondPageBreak(LEAST_ROOM),
        Spacer(0, 2.0 * mm),
        _text(f"{letter}  {section.title}", _style(11.0, bold=True, spaceAfter=2)),
        *(_text(words, _style(8.5)) for words in section.paragraphs),
    ]
    for table in section.tables:
        heading = _style(8.5, bold=True, spaceBefore=7, spaceAfter=2)
        titles = [CondPageBreak(LEAST_ROOM), _text(table.title, heading)] if table.title else []
        parts += [*titles, _grid(table, 7.5), Spacer(0, GAP)]
    return parts


def _footer(canvas: Any, page: int, words: str) -> None:
    canvas.saveState()
    canvas.setFont(pdf_fonts()[0], 7)
    canvas.setFillColor(HexColor(QUIET))
    canvas.drawString(MARGIN, FOOT - 6.0 * mm, words[:150])
    canvas.drawRightString(A4[0] - MARGIN, FOOT - 6.0 * mm, str(page))
    canvas.restoreState()
