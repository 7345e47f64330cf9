"""A measured bridge by its data sheet, as studies/bench shows it: losses as a spreadsheet gives them."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from typer.testing import CliRunner

from optimizer.cli import app

BENCH = Path(__file__).parents[3] / "studies" / "bench"


@pytest.fixture(scope="module")
def found(tmp_path_factory: pytest.TempPathFactory) -> tuple[pd.DataFrame, pd.DataFrame, str]:
    folder = tmp_path_factory.mktemp("bench")
    out, lines = folder / "results.csv", folder / "lines.csv"
    result = CliRunner().invoke(
        app,
        ["evaluate", str(BENCH / "bench_10kva.toml"), "--designs", str(BENCH / "bridges.csv"),
         "--out", str(out), "--spectrum", str(lines)],
    )  # fmt: skip
    assert result.exit_code == 0, result.output
    return pd.read_csv(out), pd.read_csv(lines), result.output + result.stderr


def test_what_is_left_out_is_said(found: tuple[pd.DataFrame, pd.DataFrame, str]) -> None:
    for words in ("die area: that of the data sheet's part", "dc link: ", "inverter-side inductor: sized"):
        assert f"Left out of bridges.csv, {words}" in found[2]


def test_losses_of_the_module_by_a_spreadsheet(found: tuple[pd.DataFrame, pd.DataFrame, str]) -> None:
    """Read off the data sheet's points by hand: straight lines through 10 A and 50 A, energies interpolated
    between the points over the line angle, both brought to the reported junction temperatures; ripple left
    out. A spreadsheet of this kind is good to some 6 %.
    """
    row = found[0].set_index("design_id").loc["16 kHz"]
    peak = math.sqrt(2.0) * 10e3 / (3.0 * 350.0 / math.sqrt(3.0))
    index = 350.0 * math.sqrt(2.0 / 3.0) / 300.0  # the filter's drop left out
    share = (row.junction_temperature_c - 25.0) / 125.0
    diode_share = (row.diode_temperature_c - 25.0) / 125.0

    def between(cold: float, hot: float, at: float) -> float:
        return cold + (hot - cold) * at

    slope = between((1.85 - 1.10) / 40.0, (2.15 - 1.05) / 40.0, share)
    threshold = between(1.10 - 10.0 * 0.75 / 40.0, 1.05 - 10.0 * 1.10 / 40.0, share)
    diode_slope = between((1.70 - 1.30) / 40.0, (1.65 - 1.00) / 40.0, diode_share)
    diode_threshold = between(1.30 - 10.0 * 0.40 / 40.0, 1.00 - 10.0 * 0.65 / 40.0, diode_share)
    active = index * 0.85
    switch = threshold * peak * (1 / (2 * math.pi) + active / 8) + slope * peak**2 * (
        1 / 8 + active / (3 * math.pi)
    )
    diode = diode_threshold * peak * (1 / (2 * math.pi) - active / 8) + diode_slope * peak**2 * (
        1 / 8 - active / (3 * math.pi)
    )
    assert row.loss_conduction_at_100_percent_w == pytest.approx(6.0 * (switch + diode), rel=0.06)

    current = peak * np.sin(np.pi * (np.arange(1000) + 0.5) / 1000)

    def energy(cold: list[float], hot: list[float], at: float) -> float:
        """Mean over the half wave [J]; below 10 A the first two points' line goes on."""
        points = np.array([between(one, other, at) for one, other in zip(cold, hot, strict=True)])
        start = max(points[0] - (points[1] - points[0]) * 10.0 / 15.0, 0.0)
        return 1e-3 * float(np.interp(current, [0, 10, 25, 50, 75], [start, *points]).mean())

    switching = energy([0.8, 1.9, 4.2, 7.2], [1.3, 2.9, 6.2, 10.6], share)
    switching += energy([0.9, 1.8, 3.2, 4.6], [1.4, 2.7, 4.9, 7.0], share)
    assert row.loss_switching_at_100_percent_w == pytest.approx(3.0 * 16e3 * switching, rel=0.06)
    recovery = energy([0.7, 1.2, 1.8, 2.2], [1.6, 2.6, 3.9, 4.7], diode_share)
    assert row.loss_recovery_at_100_percent_w == pytest.approx(3.0 * 16e3 * recovery, rel=0.10)


def test_twice_the_frequency_doubles_what_switches(found: tuple[pd.DataFrame, pd.DataFrame, str]) -> None:
    """Same ripple (half the inductance): switching losses double but for the warmer junctions."""
    table = found[0].set_index("design_id")
    ratio = (
        table.loc["16 kHz"].loss_switching_at_100_percent_w
        / table.loc["8 kHz"].loss_switching_at_100_percent_w
    )
    assert 2.0 < ratio < 2.3
    for row in ("8 kHz", "16 kHz"):
        parts = [name for name in table if name.startswith("loss_") and name.endswith("_at_50_percent_w")]
        parts.remove("loss_at_50_percent_w")
        assert table.loc[row, parts].sum() == pytest.approx(table.loc[row].loss_at_50_percent_w)


def test_spectrum_of_the_bridge(found: tuple[pd.DataFrame, pd.DataFrame, str]) -> None:
    """Sidebands around multiples of the carrier. The phase voltage of a six-switch bridge has the mean square
    M V_dc^2/(sqrt 3 pi) with any zero sequence (rms identity); the listed lines hold most of what the
    fundamental leaves of it.
    """
    lines = found[1][(found[1].design_id == "16 kHz") & (found[1].order > 50.0)]
    off = (lines.frequency_hz - 16e3 * np.rint(lines.frequency_hz / 16e3)).abs()
    assert off.max() <= 24 * 50.0
    index = found[0].set_index("design_id").loc["16 kHz"].modulation_index_rated
    whole = index * 600.0**2 / (math.sqrt(3.0) * math.pi)
    rest = whole - (index * 300.0) ** 2 / 2.0
    assert 0.6 * rest < (lines.bridge_voltage_v**2).sum() <= rest * 1.01
