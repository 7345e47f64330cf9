"""A report as slides that can be edited: one for the decision, the appendix behind it, with native tables."""

from __future__ import annotations

from io import BytesIO
from math import ceil
from textwrap import shorten
from typing import Any

from pptx import Presentation
from pptx.dml.color import RGBColor
from pptx.enum.text import MSO_ANCHOR, PP_ALIGN
from pptx.util import Emu, Inches, Pt

from optimizer.charts.look import ALERT, INK, QUIET
from optimizer.report.blocks import Picture, Section, Table, unbroken
from optimizer.report.content import Report
from optimizer.report.html_writer import lettered
from optimizer.report.pictures import as_png

WIDTH, HEIGHT, EDGE = 13.333, 7.5, 0.45  # [in]
ROOM = WIDTH - 2.0 * EDGE
TITLE_ONLY = 5
"""Layout of the library's own template that has a title and nothing else."""
MARKED, PLAIN, RULE = "#eef1ea", "#ffffff", "#e1e3dd"
LETTER = 0.49
"""Mean width of a letter over its size, about: says how many lines a cell takes."""
LONGEST_SUBTITLE = 160
"""Letters of a study's description that fit on one line under the title."""
LEADING, INSET, BOLD = 1.22, 0.03, 1.1
TABLE_TOP = 0.95
LEAST_CHARTS = 1.8
"""Height below which the charts get a slide of their own [in]."""
PLOT = (385, 135)
"""Width and height of the plots on the slide for the decision [px]: their words stay readable there."""
SIZES = (10.0, 9.5, 9.0, 8.5, 8.0)
"""Of the appendix' tables [pt]: the largest that keeps a table on one slide, or the first."""


def pptx_file(content: Report) -> bytes:
    """The report as a file of slides.

    Args:
        content: of the report.
    """
    show = Presentation()
    show.slide_width, show.slide_height = Inches(WIDTH), Inches(HEIGHT)
    show.core_properties.title, show.core_properties.author = content.title, "wattfront"
    _decision(show, content)
    for letter, section in lettered(content.sections):
        _section(show, letter, section)
    stream = BytesIO()
    show.save(stream)
    return stream.getvalue()


def _decision(show: Any, content: Report) -> None:
    """The slide for the decision: question, recommendation, options, charts, assumptions, cautions."""
    slide = _slide(show, content.title, shorten(content.subtitle, LONGEST_SUBTITLE, placeholder=" ..."))
    head, reason = content.recommendation
    y = 0.8
    y += _words(slide, [(content.question, 10.5, False, INK)], (EDGE, y, ROOM))
    recommended = [(f"Recommended: {head}", 12.0, True, INK), (reason, 9.5, False, INK)]
    y += _words(slide, recommended, (EDGE, y, ROOM), ground=MARKED) + 0.06
    place = (EDGE, y, ROOM)
    y += _table(slide, content.options, list(content.options.rows), place, 9.0, content.options.strong) + 0.12
    ground = [("Assumptions", 9.0, True, INK), *((text, 8.0, False, INK) for text in content.assumptions)]
    warned = [("Cautions", 9.0, True, ALERT), *((text, 8.0, False, INK) for text in content.cautions)]
    half = 0.5 * ROOM - 0.1
    floor = HEIGHT - 0.28 - max(_height(ground, half), _height(warned, half))
    if floor - y >= LEAST_CHARTS:
        _pictures(slide, content.pictures, y, floor - y, PLOT)
    else:
        _pictures(_slide(show, content.title, "The options in charts"), content.pictures, 1.2, 4.0, None)
    _words(slide, ground, (EDGE, floor, half))
    _words(slide, warned, (EDGE + half + 0.2, floor, half))
    _foot(slide, content)


def _slide(show: Any, title: str, subtitle: str = "") -> Any:
    slide = show.slides.add_slide(show.slide_layouts[TITLE_ONLY])
    place = slide.shapes.title
    place.left, place.top, place.width, place.height = Inches(EDGE), Inches(0.1), Inches(ROOM), Inches(0.45)
    frame = place.text_frame
    frame.word_wrap, frame.vertical_anchor = True, MSO_ANCHOR.MIDDLE
    _no_margins(frame)
    frame.paragraphs[0].alignment = PP_ALIGN.LEFT
    _write(frame.paragraphs[0], title, 20.0, True, INK)
    if subtitle:
        _words(slide, [(subtitle, 10.5, False, QUIET)], (EDGE, 0.55, ROOM))
    return slide


def _words(
    slide: Any,
    texts: list[tuple[str, float, bool, str]],
    place: tuple[float, float, float],
    ground: str | None = None,
) -> float:
    """Paragraphs (words, size [pt], bold, colour) in a box at (left, top, width) [in]; its height [in]."""
    left, top, width = place
    height = _height(texts, width)
    box = slide.shapes.add_textbox(Inches(left), Inches(top), Inches(width), Inches(height))
    frame = box.text_frame
    frame.word_wrap = True
    _no_margins(frame, 0.05 if ground else 0.0)
    if ground:
        box.fill.solid()
        box.fill.fore_color.rgb = _colour(ground)
    for place_in, (text, size, bold, colour) in enumerate(texts):
        paragraph = frame.paragraphs[0] if place_in == 0 else frame.add_paragraph()
        _write(paragraph, text, size, bold, colour)
    return height


def _height(texts: list[tuple[str, float, bool, str]], width: float) -> float:
    return 0.1 + sum(_lines(text, size, width) * LEADING * size / 72.0 for text, size, *_ in texts)


def _lines(text: str, size: float, width: float) -> int:
    """Lines that a text takes in a width [in]."""
    room = max((width - 2.0 * INSET) * 72.0 / (LETTER * size), 1.0)
    longest = max((len(word) for word in text.split()), default=0)
    return max(1, ceil(len(text) / room)) if longest <= room else ceil(1.3 * len(text) / room)


def _write(paragraph: Any, text: str, size: float, bold: bool, colour: str) -> None:
    run = paragraph.add_run()
    run.text = unbroken(text) or "\u00a0"  # an empty one would fall back to the size of the template
    run.font.size, run.font.bold, run.font.name = Pt(size), bold, "Arial"
    run.font.color.rgb = _colour(colour)


def _colour(text: str) -> RGBColor:
    return RGBColor.from_string(text.removeprefix("#").upper())


def _no_margins(frame: Any, edge: float = 0.0) -> None:
    for name in ("margin_left", "margin_right", "margin_top", "margin_bottom"):
        setattr(frame, name, Inches(edge))


def _pictures(
    slide: Any, pictures: tuple[Picture, ...], top: float, height: float, plot: tuple[int, int] | None
) -> None:
    """Charts in a row, each under its title, as large as the height allows."""
    step = ROOM / len(pictures)
    for place, picture in enumerate(pictures):
        left = EDGE + place * step
        _words(slide, [(picture.title, 11.0, True, INK)], (left, top, step))
        size = {"height": Inches(height - 0.3)}
        shape = slide.shapes.add_picture(
            BytesIO(as_png(picture, 3.0, plot)), Inches(left), Inches(top + 0.25), **size
        )
        if shape.width > Inches(step - 0.1):
            shape.height = Emu(int(shape.height * Inches(step - 0.1) / shape.width))
            shape.width = Inches(step - 0.1)
        shape._element.nvPicPr.cNvPr.set("descr", picture.words)


def _section(show: Any, letter: str, section: Section) -> None:
    """A section's tables, each on as many slides as it takes."""
    head = f"Appendix {letter}  {section.title}"
    words = " ".join(section.paragraphs)
    if not section.on_slides:
        slide = _slide(show, head, words)
        named = "\n".join(f"{table.title} ({len(table.rows)} values)" for table in section.tables)
        told = f"In full in the report as PDF or HTML:\n{named}"
        _words(slide, [(line, 11.0, False, INK) for line in told.split("\n")], (EDGE, 1.1, ROOM))
        return
    for table in section.tables:
        size = next((size for size in SIZES if len(_pages(table, size)) == 1), SIZES[0])
        first = 0
        for rows in _pages(table, size):
            slide = _slide(show, head, f"{table.title or words}{', continued' if first else ''}")
            strong = frozenset(row - first for row in table.strong)
            _table(slide, table, rows, (EDGE, TABLE_TOP, ROOM), size, strong)
            first += len(rows)


def _pages(table: Table, size: float) -> list[list[tuple[str, ...]]]:
    """The rows that fit on a slide each."""
    head = _row_height(table.columns, table, size, ROOM)
    pages: list[list[tuple[str, ...]]] = [[]]
    used = head
    for row in table.rows:
        needed = _row_height(row, table, size, ROOM)
        if pages[-1] and used + needed > HEIGHT - TABLE_TOP - 0.2:
            pages.append([])
            used = head
        pages[-1].append(row)
        used += needed
    return pages


def _row_height(cells: tuple[str, ...], table: Table, size: float, width: float, bold: bool = False) -> float:
    letters = BOLD * size if bold else size
    lines = max(_lines(text, letters, share * width) for text, share in zip(cells, table.shares, strict=True))
    return lines * LEADING * size / 72.0 + 2.0 * INSET


def _table(
    slide: Any,
    table: Table,
    rows: list[tuple[str, ...]],
    place: tuple[float, float, float],
    size: float,
    strong: frozenset[int],
) -> float:
    """A native table at (left, top, width) [in]; its height [in]."""
    left, top, width = place
    cells = [table.columns, *rows]
    heights = [
        _row_height(row, table, size, width, bold=place_in - 1 in strong)
        for place_in, row in enumerate(cells)
    ]
    shape = slide.shapes.add_table(
        len(cells), len(table.columns), Inches(left), Inches(top), Inches(width), Inches(sum(heights))
    )
    grid = shape.table
    grid.first_row, grid.horz_banding = True, False
    for column, share in zip(grid.columns, table.shares, strict=True):
        column.width = Inches(share * width)
    for place_in, (row, height) in enumerate(zip(cells, heights, strict=True)):
        grid.rows[place_in].height = Inches(height)
        for column, text in enumerate(row):
            marked = place_in - 1 in strong
            _cell(grid.cell(place_in, column), text, size, column in table.figures, place_in == 0, marked)
    return sum(heights)


def _cell(cell: Any, text: str, size: float, right: bool, head: bool, marked: bool) -> None:
    cell.margin_left = cell.margin_right = cell.margin_top = cell.margin_bottom = Inches(INSET)
    cell.fill.solid()
    cell.fill.fore_color.rgb = _colour(RULE if head else MARKED if marked else PLAIN)
    paragraph = cell.text_frame.paragraphs[0]
    paragraph.alignment = PP_ALIGN.RIGHT if right else PP_ALIGN.LEFT
    _write(paragraph, text, size, marked, INK)


def _foot(slide: Any, content: Report) -> None:
    _words(slide, [(content.origin, 8.0, False, QUIET)], (EDGE, HEIGHT - 0.28, ROOM))
