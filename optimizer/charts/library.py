"""The chart library's script, which the page carries with it."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager

ASK = "import sys, vl_convert; sys.stdout.buffer.write(vl_convert.javascript_bundle().encode())"
"""Bundling takes over a second and lets no other thread of its process run."""

_kept: list[str] = []


@contextmanager
def library_beside() -> Iterator[Callable[[], str]]:
    """Bundle the script in a process of its own while the charts are laid out; once in a program's life.

    Yields:
        A function that waits for the script; where the process could not do it, it is bundled here.
    """
    if _kept or not sys.executable:
        yield chart_library
        return
    command = [sys.executable, "-P", "-c", ASK]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.DEVNULL) as beside:
        try:
            yield lambda: _received(beside) or chart_library()
        finally:
            beside.kill()


def _received(beside: subprocess.Popen[bytes]) -> str:
    text, _ = beside.communicate()
    if beside.returncode != 0 or not text:
        return ""
    _kept[:] = [text.decode()]
    return _kept[0]


def chart_library() -> str:
    """The script of Vega, Vega-Lite and their embedding as the chart package ships it."""
    if not _kept:
        import vl_convert

        bundle: Callable[..., str] = vl_convert.javascript_bundle
        _kept[:] = [bundle()]
    return _kept[0]
