"""The files of a report: all made before the first is written, each written whole or not at all."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from importlib.util import find_spec
from pathlib import Path

from optimizer.errors import InputError, Problem
from optimizer.report.content import Report
from optimizer.runs.run_folder import write_whole

HTML, PDF, SLIDES = "html", "pdf", "pptx"
LIBRARIES = {PDF: ("reportlab", "reportlab"), SLIDES: ("pptx", "python-pptx")}
"""Module and library that a format needs."""
FOLDER, STEM = "report", "report"


def check_libraries(formats: Iterable[str]) -> None:
    """Check that what the formats need is installed.

    Raises:
        InputError: naming each library that is missing and how to install it.
    """
    missing = [
        Problem(
            f"no library {LIBRARIES[name][1]} on this machine",
            "it installed: pip install 'wattfront[report]'",
            key=f"--format {name}",
        )
        for name in formats
        if name in LIBRARIES and find_spec(LIBRARIES[name][0]) is None
    ]
    if missing:
        raise InputError(*missing)


def write_report(content: Report, folder: Path, formats: Iterable[str]) -> list[Path]:
    """Write a report into a folder, which is made where it is not there; return its files.

    Args:
        content: of the report.
        folder: where to.
        formats: out of HTML, PDF, SLIDES.

    Raises:
        InputError: where the folder is a file or cannot be made, or a library is missing.
    """
    wanted = list(dict.fromkeys(formats))
    check_libraries(wanted)
    if folder.exists() and not folder.is_dir():
        raise InputError(Problem("a file", "a folder for the report", file=str(folder)))
    made = {f"{STEM}.{name}": WRITERS[name](content) for name in wanted}
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as trouble:
        given = f"a folder that cannot be made ({trouble.strerror})"
        raise InputError(Problem(given, "a folder for the report", file=str(folder))) from trouble
    for name, data in made.items():
        write_whole(folder / name, data)
    return [folder / name for name in made]


def _html(content: Report) -> bytes:
    from optimizer.report.html_writer import html_page

    return html_page(content).encode()


def _pdf(content: Report) -> bytes:
    from optimizer.report.pdf_writer import pdf_file

    return pdf_file(content)


def _slides(content: Report) -> bytes:
    from optimizer.report.pptx_writer import pptx_file

    return pptx_file(content)


WRITERS: Mapping[str, Callable[[Report], bytes]] = {HTML: _html, PDF: _pdf, SLIDES: _slides}
