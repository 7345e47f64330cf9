"""Tables of the shortlisted designs: what they are built of, component by component, their margins."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

import pandas as pd

from optimizer.charts.quantities import COMPONENT_WORDS
from optimizer.decision.figures import figure
from optimizer.decision.shortlist import Shortlist
from optimizer.decision.wording import requirement_words
from optimizer.report.blocks import Table, first_wide

Row = Mapping[Any, Any]
LABEL_SHARE = 0.28
KINDS = {
    # what: (start and end of the columns, column of the total, digits behind the point)
    "Losses at rated load": ("loss_", "_w", "loss_rated_w", "W"),
    "Volumes": ("volume_", "_l", "volume_l", "l"),
    "Masses": ("mass_", "_kg", "mass_kg", "kg"),
    "Prices": ("price_", "", "price", ""),
}
DECIMALS = {"W": 1, "l": 3, "kg": 2, "": 1}
SIDES = {"inverter_inductor": "inverter-side inductor", "grid_inductor": "grid-side inductor"}


def heads(found: Shortlist) -> tuple[str, ...]:
    """Column heads of the designs: the number on page one and what they are called."""
    return tuple(
        f"{place}  {found.design(row)['design_id']}" for place, row in enumerate(found.rows, start=1)
    )


def component_tables(found: Shortlist) -> tuple[Table, ...]:
    """Losses, volumes, masses and prices by component, with their totals."""
    return tuple(_components(found, title) for title in KINDS)


def components(table: pd.DataFrame, title: str) -> dict[str, str]:
    """Words of the components of a kind by their columns, those that are nothing for every design left out.

    Args:
        table: designs.
        title: one of KINDS.
    """
    start, end, total, _ = KINDS[title]
    names = [
        name
        for name in map(str, table.columns)
        if name.startswith(start)
        and name.endswith(end)
        and name != total
        and not name.endswith(("_percent", "_p05", "_p95"))
    ]
    told = {name: name.removeprefix(start).removesuffix(end) for name in names if (table[name] > 0.0).any()}
    return {name: COMPONENT_WORDS.get(part, part.replace("_", " ")) for name, part in told.items()}


def _components(found: Shortlist, title: str) -> Table:
    _, _, total, unit = KINDS[title]
    decimals = DECIMALS[unit]
    designs = found.table.iloc[found.rows]
    rows = [
        (words, *(_number(value, decimals) for value in designs[name]))
        for name, words in components(designs, title).items()
    ]
    rows.append(("total", *(_number(value, decimals) for value in designs[total])))
    return Table(
        ("component", *heads(found)),
        tuple(rows),
        first_wide(len(designs), LABEL_SHARE),
        frozenset(range(1, len(designs) + 1)),
        frozenset([len(rows) - 1]),
        f"{title} [{unit or found.study.currency}]",
    )


def _number(value: float, decimals: int) -> str:
    return "-" if value != value else f"{value:,.{decimals}f}"


def build_table(found: Shortlist) -> Table:
    """What each design is made of."""
    rows = [(words, *(tell(found.design(row)) for row in found.rows)) for words, tell in BUILD.items()]
    told = [row for row in rows if any(cell != "-" for cell in row[1:])]
    return Table(
        ("", *heads(found)),
        tuple(told),
        first_wide(len(found.rows), LABEL_SHARE),
    )


def _plain(name: str) -> Callable[[Row], str]:
    def tell(row: Row) -> str:
        value = row.get(name)
        return str(value) if value is not None and value == value else "-"

    return tell


def _scaled(name: str, factor: float, digits: int = 3) -> Callable[[Row], str]:
    def tell(row: Row) -> str:
        value = row.get(name)
        return (
            "-" if value is None or value != value or value == 0.0 else figure(factor * float(value), digits)
        )

    return tell


def _inductor(side: str) -> Callable[[Row], str]:
    def tell(row: Row) -> str:
        if not row.get(f"{side.removesuffix('_inductor')}_inductance_h", 0.0) > 0.0:
            return "-"
        stack = f"{row[f'{side}_stack']:.0f} x " if row[f"{side}_stack"] > 1 else ""
        turns = f"{row[f'{side}_turns']:.0f} turns"
        return (
            f"{stack}{row[f'{side}_core']}, {row[f'{side}_core_material']}; {turns} of "
            f"{row[f'{side}_conductor']}, {figure(row[f'{side}_copper_area_mm2'])} mm²"
        )

    return tell


def _dc_link(row: Row) -> str:
    return f"{row['dc_link_series'] * row['dc_link_parallel']:.0f} x {row['dc_link']}"


BUILD: Mapping[str, Callable[[Row], str]] = {
    "concept": _plain("concept"),
    "bridge": _plain("bridge"),
    "device": _plain("device"),
    "modulation": _plain("modulation"),
    "switching frequency [kHz]": _scaled("switching_frequency_hz", 1e-3),
    "die area of a package [mm²]": _scaled("die_area_mm2", 1.0),
    "packages in parallel": _plain("parallel"),
    "inner device": _plain("inner_device"),
    "inner die area [mm²]": _scaled("inner_die_area_mm2", 1.0),
    "inverter-side inductance [µH]": _scaled("inverter_inductance_h", 1e6),
    "inverter-side inductor": _inductor("inverter_inductor"),
    "grid-side inductance [µH]": _scaled("grid_inductance_h", 1e6),
    "grid-side inductor": _inductor("grid_inductor"),
    "filter capacitance [µF]": _scaled("filter_capacitance_f", 1e6),
    "damping resistance [Ω]": _scaled("damping_resistance_ohm", 1.0),
    "damping capacitance [µF]": _scaled("damping_capacitance_f", 1e6),
    "dc link": _dc_link,
    "dc-link life [h]": _scaled("dc_link_life_h", 1.0, 2),
    "cooling": _plain("cooling"),
    "heatsink to ambient [K/W]": _scaled("sink_resistance_k_per_w", 1.0),
    "hottest switch junction [°C]": _scaled("junction_temperature_c", 1.0),
    "hottest diode junction [°C]": _scaled("diode_temperature_c", 1.0),
    "heatsink [°C]": _scaled("sink_temperature_c", 1.0),
    "efficiency at rated load [%]": _scaled("efficiency_rated", 100.0, 4),
    "weighted efficiency [%]": _scaled("efficiency_weighted", 100.0, 4),
    "European efficiency [%]": _scaled("efficiency_european", 100.0, 4),
    "Californian efficiency [%]": _scaled("efficiency_californian", 100.0, 4),
    "distortion of the current [%]": _scaled("current_thd", 100.0, 2),
    "distortion of the voltage [%]": _scaled("voltage_thd", 100.0, 2),
    "energy lost in a year [kWh]": _scaled("lost_energy_kwh_per_year", 1.0, 2),
}


def margin_table(found: Shortlist) -> Table:
    """Margins of all requirements [%], in their order; the tightest of each design is marked."""
    margins = found.margins.iloc[found.rows]
    names = [str(name) for name in margins.columns if name not in ("design_id", "tightest")]
    rows = tuple(
        (
            _title(name),
            *(
                _margin(margins[name].iloc[place], margins["tightest"].iloc[place] == name)
                for place in range(len(margins))
            ),
        )
        for name in names
    )
    return Table(
        ("requirement", *heads(found)),
        rows,
        first_wide(len(margins), 0.36),
        frozenset(range(1, len(margins) + 1)),
        title="Distance to every limit, over the limit [%]; * the tightest",
    )


def _title(name: str) -> str:
    return requirement_words(name)


def _margin(value: float, tightest: bool) -> str:
    if value != value:
        return "-"
    shown = "> 100" if value > 1.0 else f"{100.0 * value:.1f}"
    return f"{shown}{' *' if tightest else ''}"


def words_table(found: Shortlist, numbers: Sequence[str]) -> Table:
    """The words of every design."""
    rows = []
    for number, row in zip(numbers, found.rows, strict=True):
        entries = [entry for entry in found.entries if entry.row == row]
        rules = "; ".join(f"{entry.role}: {entry.rule}" for entry in entries)
        rows.append((number, entries[0].design_id, f"{_capital(rules)}. {' '.join(entries[0].sentences)}"))
    return Table(
        ("no.", "design", "what it is, gains, costs, limits, certainty"), tuple(rows), (0.05, 0.12, 0.83)
    )


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
