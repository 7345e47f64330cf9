"""The models and their published sources, gathered from the models' own descriptions."""

from __future__ import annotations

import ast
import re
from collections.abc import Iterator
from functools import cache
from importlib.resources import files
from importlib.resources.abc import Traversable

NAMED = re.compile(r"\bSources?: (.+?)(?=\n\s*\n|\n\s*(?:Args|Returns|Raises|Source):|\Z)", re.DOTALL)
IN_BRACKETS = re.compile(r"\(([A-Z][^()]*\b(?:19|20)\d\d\b[^()]*)\)")
ENDS = re.compile(r"(?<=[\w\])])[.:](?:\s|$)|\n\s*\n")
UNITS = re.compile(r"\s*\[[^\]]*\]|\s*\((?:[nlpqkc]|, )+,?\)|`")


@cache
def model_sources() -> tuple[tuple[str, str], ...]:
    """Pairs of what is modelled and the published source that its description names, in the models' order."""
    return tuple(dict.fromkeys(pair for path in _modules(files("models")) for pair in _of_module(path)))


def _modules(folder: Traversable) -> Iterator[Traversable]:
    for entry in sorted(folder.iterdir(), key=lambda entry: (entry.is_dir(), entry.name)):
        if entry.is_dir() and entry.name != "__pycache__":
            yield from _modules(entry)
        elif entry.name.endswith(".py"):
            yield entry


def _of_module(path: Traversable) -> Iterator[tuple[str, str]]:
    documented = (ast.Module, ast.ClassDef, ast.FunctionDef)
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        text = (ast.get_docstring(node) if isinstance(node, documented) else None) or ""
        for source in NAMED.findall(text) or IN_BRACKETS.findall(text):
            yield _subject(text), _line(source).rstrip(".")


def _subject(text: str) -> str:
    """The first sentence of a description, without units and sources."""
    first = ENDS.split(IN_BRACKETS.sub("", text), maxsplit=1)[0]
    return _line(UNITS.sub("", first)).replace(" ,", ",").replace(" ;", ";")


def _line(text: str) -> str:
    return " ".join(text.split())
