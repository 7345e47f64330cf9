"""What a report is made of, whatever it is written as: tables, charts, sections."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

BEFORE_UNIT = re.compile(r"(?<=[\d.]) (?=(?:%|l|kg|kHz|kVA|kW|°C|µH|µF|V|A|W|K|h)(?![\w]))")


@dataclass(frozen=True)
class Table:
    """A table of texts.

    Attributes:
        columns: heads.
        rows: cells, as many as columns.
        shares: width of each column over the whole [-].
        figures: columns that stand right-aligned.
        strong: rows that stand out, such as totals.
        title: heading; "" for none.
    """

    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    shares: tuple[float, ...]
    figures: frozenset[int] = frozenset()
    strong: frozenset[int] = frozenset()
    title: str = ""


@dataclass(frozen=True)
class Picture:
    """A chart of a report.

    Attributes:
        title: heading.
        words: what it shows, for readers who cannot see it.
        spec: Vega-Lite specification.
    """

    title: str
    words: str
    spec: dict[str, Any]


@dataclass(frozen=True)
class Section:
    """A part of the appendix.

    Attributes:
        title: heading.
        paragraphs: before the tables.
        tables: of the section.
        on_slides: whether slides have it too; what only fills pages is left to the other forms.
    """

    title: str
    paragraphs: tuple[str, ...]
    tables: tuple[Table, ...]
    on_slides: bool = True


def first_wide(count: int, first: float) -> tuple[float, ...]:
    """Shares of a first column and `count` equal ones beside it."""
    return (first, *([(1.0 - first) / count] * count))


def unbroken(text: str) -> str:
    """A text whose figures stay on one line with their units."""
    return BEFORE_UNIT.sub("\u00a0", text)
