"""Type of the PDF: a font with the letters of many languages where the machine has one, else the built-in."""

from __future__ import annotations

import unicodedata
from collections.abc import Callable
from functools import cache
from pathlib import Path

FOLDERS = (
    "/usr/share/fonts",
    "/usr/local/share/fonts",
    "/Library/Fonts",
    "/System/Library/Fonts/Supplemental",
    "C:/Windows/Fonts",
)
PAIRS = (
    ("LiberationSans-Regular.ttf", "LiberationSans-Bold.ttf"),
    ("DejaVuSans.ttf", "DejaVuSans-Bold.ttf"),
    ("Arial.ttf", "Arial Bold.ttf"),
    ("arial.ttf", "arialbd.ttf"),
)
BUILT_IN = ("Helvetica", "Helvetica-Bold")
OWN = ("report", "report-bold")


@cache
def pdf_fonts() -> tuple[str, str, Callable[[str], str]]:
    """Names of the regular and the bold font, and what makes a text fit to be set in them."""
    for files in PAIRS:
        found = [_find(name) for name in files]
        if all(found):
            return (*_registered([str(path) for path in found]), str)
    return (*BUILT_IN, latin)


def latin(text: str) -> str:
    """A text in the letters of the built-in fonts; what they lack becomes its nearest, or a question mark."""
    return "".join(map(_latin_letter, text.replace("Ω", "ohm")))


def _latin_letter(letter: str) -> str:
    for candidate in (letter, unicodedata.normalize("NFKD", letter)[0], "?"):
        if candidate.encode("cp1252", "ignore"):
            return candidate
    return "?"


def _find(name: str) -> Path | None:
    folders = (Path(folder) for folder in FOLDERS if Path(folder).is_dir())
    return next((path for folder in folders for path in sorted(folder.rglob(name))), None)


def _registered(paths: list[str]) -> tuple[str, str]:
    from reportlab.pdfbase.pdfmetrics import registerFont
    from reportlab.pdfbase.ttfonts import TTFont

    for name, path in zip(OWN, paths, strict=True):
        registerFont(TTFont(name, path))
    return OWN
