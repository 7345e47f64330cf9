"""A SiC bridge that feeds a resistor and an inductor directly, by the curves of its data sheet, all invented.

Losses as a spreadsheet gives them, the spectrum by circuit laws, what does not fit told.
"""

from __future__ import annotations

import math
from pathlib import Path
from typing import Protocol

import numpy as np
import pandas as pd
import pytest
from typer.testing import CliRunner, Result

from optimizer.cli import app
from optimizer.errors import InputError

PART = """
[[devices]]
name = "bench SiC 40 mohm"
based_on = "SiC 1200 V"
sheet_rated_current_a = { value = 40, origin = "data sheet" }
sheet_output_charge_nc = { value = 100, origin = "data sheet, 400 V" }
sheet_gate_charge_nc = { value = 110, origin = "data sheet" }
sheet_junction_case_k_per_w = { value = 0.5, origin = "data sheet" }
dead_time_ns = { value = 300, origin = "as set on the bench" }
[devices.curves]
origin = "data sheet"
on_resistance = { temperature_c = [25, 100, 175], resistance_mohm = [40, 51, 68] }
diode = [
  { temperature_c = 25, current_a = [10, 20, 40, 60], voltage_v = [3.5, 3.9, 4.6, 5.2] },
  { temperature_c = 175, current_a = [10, 20, 40, 60], voltage_v = [3.1, 3.5, 4.2, 4.9] },
]
[[devices.curves.turn_on]]
temperature_c = 25
supply_v = 400
current_a = [5, 10, 20, 30, 40]
energy_uj = [75, 90, 130, 185, 255]

[[devices.curves.turn_on]]
temperature_c = 150
supply_v = 400
current_a = [5, 10, 20, 30, 40]
energy_uj = [70, 83, 118, 167, 228]

[[devices.curves.turn_off]]
temperature_c = 25
supply_v = 400
current_a = [5, 10, 20, 30, 40]
energy_uj = [11, 15, 30, 55, 90]

[[devices.curves.turn_off]]
temperature_c = 150
supply_v = 400
current_a = [5, 10, 20, 30, 40]
energy_uj = [12, 16, 33, 60, 98]
"""
STUDY = """
name = "bare bridge"
[application]
kind = "stand-alone"
phases = 1
apparent_power = "3 kVA"
power_factor = 0.8
ac_voltage = "230 V"
ac_voltage_tolerance = "0 %"
line_frequency = "50 Hz"
dc_voltage = { min = "400 V", nominal = "400 V", max = "400 V" }
ambient = "25 degC"
[bridge]
kind = "single-phase full bridge"
[filter]
kind = "L"
[catalog]
files = ["part.toml"]
"""
DESIGNS = (
    "design_id,device,modulation,switching_frequency_hz,cooling,sink_resistance_k_per_w,parallel,"
    "inverter_inductance_h\nno choke,bench SiC 40 mohm,unipolar,100000,forced,0.1,1,1e-9\n"
)
CURRENT = np.array([0.0, 5.0, 10.0, 20.0, 30.0, 40.0])
LOAD = 230.0**2 / 3e3  # ohm
RMS = 3e3 / 230.0
SINE = math.sqrt(2.0) * RMS * np.sin(np.pi * (np.arange(2000) + 0.5) / 2000)


class Bench(Protocol):
    """Runs `evaluate` on texts; the result and the folder that it wrote to."""

    def __call__(
        self, part: str = PART, study: str = STUDY, designs: str = DESIGNS
    ) -> tuple[Result, Path]: ...


@pytest.fixture(scope="module")
def bench(tmp_path_factory: pytest.TempPathFactory) -> Bench:
    def run(part: str = PART, study: str = STUDY, designs: str = DESIGNS) -> tuple[Result, Path]:
        folder = tmp_path_factory.mktemp("bare")
        for name, text in (("part.toml", part), ("study.toml", study), ("designs.csv", designs)):
            (folder / name).write_text(text, encoding="utf-8")
        arguments = ["evaluate", str(folder / "study.toml"), "--designs", str(folder / "designs.csv")]
        outputs = ["--out", str(folder / "results.csv"), "--spectrum", str(folder / "lines.csv")]
        return CliRunner().invoke(app, [*arguments, *outputs]), folder

    return run


@pytest.fixture(scope="module")
def found(bench: Bench) -> tuple[pd.Series, pd.DataFrame]:
    result, folder = bench()
    assert result.exit_code == 0, result.output
    return pd.read_csv(folder / "results.csv").iloc[0], pd.read_csv(folder / "lines.csv")


def test_ripple_is_that_of_the_load_inductance(found: tuple[pd.Series, pd.DataFrame]) -> None:
    """Unipolar: V_dc/(8 L f) at most, with L = 0.6 |Z|/omega; its greatest value needs M > 0.5."""
    inductance = 0.6 * LOAD / (2.0 * math.pi * 50.0)
    assert found[0].ripple_peak_to_peak_a == pytest.approx(400.0 / (8.0 * inductance * 100e3), rel=0.01)


def test_losses_by_a_spreadsheet(found: tuple[pd.Series, pd.DataFrame]) -> None:
    """Two channels conduct at any time, two legs switch; the sheet's points joined by straight lines, below
    5 A going on as between 5 and 10 A, at the reported junction temperature.
    """
    row = found[0]
    celsius = row.rated_junction_temperature_c
    resistance = np.interp(celsius, [25.0, 100.0, 175.0], [0.040, 0.051, 0.068])
    assert row.loss_conduction_w == pytest.approx(2.0 * resistance * RMS**2, rel=0.03)

    def energy(cold: list[float], hot: list[float]) -> float:
        points = np.array(cold) + (np.array(hot) - np.array(cold)) * (celsius - 25.0) / 125.0
        start = 2.0 * points[0] - points[1]
        return 1e-6 * float(np.interp(SINE, CURRENT, [start, *points]).mean())

    on = energy([75, 90, 130, 185, 255], [70, 83, 118, 167, 228])
    off = energy([11, 15, 30, 55, 90], [12, 16, 33, 60, 98])
    assert row.loss_output_charge_w == pytest.approx(2.0 * 100e3 * 100e-9 * 400.0, rel=1e-3)
    together = row.loss_switching_w + row.loss_output_charge_w  # the sheet's turn-on contains the charge
    assert together == pytest.approx(2.0 * 100e3 * (on + off), rel=0.04)
    mean, slope = float(np.mean(SINE)), (4.6 - 3.5) / 30.0
    drop = (3.5 - 10.0 * slope) * mean + slope * RMS**2
    assert row.loss_dead_time_w == pytest.approx(2.0 * 2.0 * 300e-9 * 100e3 * drop, rel=0.03)
    swing = 110e-9 * 100e3 * 4.0
    assert 12.0 * swing < row.loss_gate_drive_w < 27.0 * swing  # gate swings of SiC parts, V
    assert row.loss_recovery_w == 0.0


def test_temperature_by_a_spreadsheet(found: tuple[pd.Series, pd.DataFrame]) -> None:
    """Heatsink 0.1 K/W in a fan's air for all four switches, each 0.5 K/W to its case and 0 to 1.5 K/W on."""
    row = found[0]
    parts = ("conduction", "switching", "output_charge", "dead_time", "recovery")
    heat = sum(row[f"loss_{name}_w"] for name in parts)
    assert row.rated_sink_temperature_c == pytest.approx(25.0 + 0.1 * heat, rel=0.02)
    rise = row.rated_junction_temperature_c - row.rated_sink_temperature_c
    assert 0.5 * heat / 4.0 < rise < (0.5 + 1.5) * heat / 4.0


def test_lines_by_circuit_laws(found: tuple[pd.Series, pd.DataFrame]) -> None:
    """Fundamental as asked for; every other current the voltage over |R + j h X|; mean square of the bridge
    voltage 2 M V_dc^2/pi in all, whose listed lines hold most of what the fundamental leaves.
    """
    row, lines = found
    first, others = lines.iloc[0], lines.iloc[1:]
    assert first.frequency_hz == 50.0
    assert first.bridge_voltage_v == pytest.approx(230.0, rel=1e-3)
    assert first.output_current_a == pytest.approx(RMS, rel=1e-6)
    impedance = np.abs(LOAD * (0.8 + 0.6j * others.order))
    for name in ("inverter_current_a", "output_current_a"):
        assert others[name].to_numpy() == pytest.approx(
            (others.bridge_voltage_v / impedance).to_numpy(), rel=1e-3
        )
    assert others.output_voltage_v.to_numpy() == pytest.approx(others.bridge_voltage_v.to_numpy(), rel=1e-3)
    switched = others[others.order > 50.0]
    rest = 2.0 * row.modulation_index_rated * 400.0**2 / math.pi - first.bridge_voltage_v**2
    assert 0.7 * rest < (switched.bridge_voltage_v**2).sum() <= 1.01 * rest


def test_a_choke_before_the_load_takes_its_share(bench: Bench, found: tuple[pd.Series, pd.DataFrame]) -> None:
    """As much inductance again halves the ripple; the fundamental current stays, semiconductors hardly
    change.
    """
    own = 0.6 * LOAD / (2.0 * math.pi * 50.0)
    study = STUDY.replace('"400 V"', '"480 V"')
    results = []
    for inductance in (1e-9, own):
        result, folder = bench(study=study, designs=DESIGNS.replace("1e-9", f"{inductance:.9g}"))
        assert result.exit_code == 0, result.output
        results.append(pd.read_csv(folder / "results.csv").iloc[0])
    without, with_choke = results
    assert with_choke.ripple_peak_to_peak_a == pytest.approx(0.5 * without.ripple_peak_to_peak_a, rel=0.02)
    assert with_choke.loss_conduction_w == pytest.approx(without.loss_conduction_w, rel=0.02)
    assert with_choke.loss_switching_w == pytest.approx(without.loss_switching_w, rel=0.02)


@pytest.mark.parametrize(
    ("old", "new", "told"),
    [
        ("energy_uj = [75, 90, 130", "energy_uj = [75, 60, 130",
         ["part.toml", "part 'bench SiC 40 mohm'", "turn_on[0].energy_j must not fall", "got 7.5e-05, 6"]),
        ("resistance_mohm = [40, 51, 68]", "resistance_mohm = [40, 51]",
         ["on_resistance: temperature_c and resistance_ohm must have the same number", "got 3 and 2"]),
    ],
)  # fmt: skip
def test_bad_curves_end_with_code_2(bench: Bench, old: str, new: str, told: list[str]) -> None:
    assert old in PART
    result, _ = bench(part=PART.replace(old, new))
    assert isinstance(result.exception, InputError)
    assert result.exception.exit_code == 2
    for words in told:
        assert words in str(result.exception)


def test_another_die_area_than_the_part_has(bench: Bench) -> None:
    designs = DESIGNS.replace("parallel,", "parallel,die_area_mm2,").replace(",1,1e-9", ",1,25,1e-9")
    result, _ = bench(designs=designs)
    assert "die_area_mm2: given 25, expected 9.5, the one size of bench SiC 40 mohm" in str(result.exception)


def test_losses_at_every_load_level_add_up(found: tuple[pd.Series, pd.DataFrame]) -> None:
    row = found[0]
    for level in (5, 20, 100):
        ending = f"_at_{level}_percent_w"
        parts = [name for name in row.index if name.startswith("loss_") and name.endswith(ending)]
        parts.remove(f"loss{ending}")
        assert len(parts) >= 10
        assert row[parts].sum() == pytest.approx(row[f"loss{ending}"])
        active = 3e3 * 0.8 * level / 100.0
        assert row[f"efficiency_at_{level}_percent"] == pytest.approx(
            active / (active + row[f"loss{ending}"])
        )
