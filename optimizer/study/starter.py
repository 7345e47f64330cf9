"""The commented starter study, and the blocks in it that are written out of their declarations.

The blocks stand in starter.toml as these functions return them; a test fails where a declaration has changed
since, and its message shows the block to paste.
"""

from __future__ import annotations

from dataclasses import fields
from importlib.resources import files

from models.ownership import EnergyTerms
from models.specification import DesignRules
from models.uncertainty import Uncertainty
from optimizer.study.quantity import written
from optimizer.study.ranges import RANGES
from optimizer.study.schema import CURRENCY

DEFAULTS, TERMS, UNCERTAINTY = DesignRules(), EnergyTerms(), Uncertainty()


def starter_text() -> str:
    """Return the starter study as it lies beside this module."""
    return (files("optimizer.study") / "starter.toml").read_text(encoding="utf-8")


def ranges_block() -> str:
    """Return the lines of [search.ranges], each commented out and with its default, unit and meaning."""
    entries = []
    for entry in RANGES:
        low, high = (_toml(entry.kind.read(end), entry.unit) for end in entry.default)
        entries.append((f"{entry.name} = {{ min = {low}, max = {high} }}", entry.meaning))
    return _commented_out(entries)


def rules_block() -> str:
    """Return the lines of [rules], each commented out and with its default, unit and meaning."""
    return _commented_out(
        [
            (
                f"{rule.name} = {_toml(getattr(DEFAULTS, rule.name), rule.metadata['unit'])}",
                rule.metadata["meaning"],
            )
            for rule in fields(DEFAULTS)
        ]
    )


def uncertainty_block() -> str:
    """Return the lines of [uncertainty], each commented out: its default, what it is, where it is from."""
    return _commented_out(
        [
            (
                f"{one.name} = {_toml(getattr(UNCERTAINTY, one.name), one.metadata['unit'])}",
                f"{one.metadata['law']}: {one.metadata['meaning']}; {one.metadata['source']}",
            )
            for one in fields(UNCERTAINTY)
        ]
    )


def energy_block() -> str:
    """Return the lines of [energy], each commented out and with its default and meaning."""
    entries = [
        (f"{term.name} = {_plain(getattr(TERMS, term.name))}", term.metadata["meaning"])
        for term in fields(TERMS)
    ]
    return _commented_out([*entries, (f'currency = "{CURRENCY}"', "what prices and costs are counted in")])


def _plain(value: float | str) -> str:
    return f'"{value}"' if isinstance(value, str) else written(value, "")


def _toml(value: float, unit: str) -> str:
    return f'"{written(value, unit)}"' if unit else written(value, unit)


def _commented_out(entries: list[tuple[str, str]]) -> str:
    width = max(len(assignment) for assignment, _ in entries)
    return "".join(f"# {assignment:<{width}}  # {meaning}\n" for assignment, meaning in entries)
