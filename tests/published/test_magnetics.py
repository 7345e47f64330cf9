"""Published core-loss ratios, winding resistances, inductance factors. Ids, sources and tolerances are the
rows'.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from check_rows import CHECKS, assert_meets, params, starting
from scipy.constants import mu_0
from scipy.optimize import minimize_scalar

from models.catalog import Catalog
from models.magnetics.core_loss import igse_factor, piecewise_linear_loss, steinmetz_loss
from models.magnetics.gap import fringing_factor, gapped_inductance, powder_inductance
from models.magnetics.winding import (
    COPPER_COEFFICIENT_20,
    copper_resistivity,
    dowell_ratio,
    litz_ratio,
    round_wire_skin_ratio,
    skin_depth,
)

ONE = np.array(1.0)
GAUGE_RESISTANCE = [name for name in starting("MAG-AWG") if name.endswith("-R")]
GAUGE_SIZE = [
    name for name in starting("MAG-AWG") if name.endswith(("-A", "-d")) and f"{name[:-2]}-R" in CHECKS
]
SKIN = starting("MAG-SK-")
DOWELL = starting("MAG-DOW-")
OPTIMUM = starting("MAG-DOPT-")
ROUND = starting("MAG-RW-")
FACTOR = starting("MAG-IGSE-k-")
TRIANGLE = starting("MAG-IGSE-t-", "MAG-IGSE-d-")
GAPPED = starting("MAG-E65-AL-")
UNGAPPED = ["MAG-E65-AL0", "MAG-ETD29-AL"]
WHOLE_TURNS = starting("MAG-LI2-")
BOUNDS = ["MAG-E65-N87", *(name for name in starting("MAG-ETD29-3"))]
SINGLE = [
    "MAG-CU1",
    "MAG-CU2",
    "MAG-CU4",
    "MAG-DSER",
    "MAG-LITZ",
    "MAG-LITZR",
    "MAG-STM-UNIT",
    "MAG-GAP1",
    "MAG-GAP2",
]
TESTED = {
    *GAUGE_RESISTANCE,
    *GAUGE_SIZE,
    *SKIN,
    *DOWELL,
    *OPTIMUM,
    *ROUND,
    *FACTOR,
    *TRIANGLE,
    *GAPPED,
    *UNGAPPED,
    *WHOLE_TURNS,
    *BOUNDS,
    *SINGLE,
}


def resistivity(temperature: float) -> float:
    return float(copper_resistivity(np.array(temperature)))


@pytest.mark.parametrize("row", params(GAUGE_RESISTANCE))
def test_wire_table_resistance(row: dict[str, Any]) -> None:
    """The standard's own diameter formula d = 0.127 mm x 92^((36 - n)/39) with our resistivity."""
    diameter = 0.127e-3 * 92.0 ** ((36 - row["inputs"]["AWG"]) / 39.0)
    assert_meets(row, 1e3 * resistivity(20.0) / (0.25 * math.pi * diameter**2))


@pytest.mark.parametrize("row", params(GAUGE_SIZE))
def test_wire_table_size_gives_the_listed_resistance(row: dict[str, Any]) -> None:
    size = row["expected"]
    area = size * 1e-6 if row["id"].endswith("-A") else 0.25 * math.pi * (size * 1e-3) ** 2
    listed = CHECKS[f"{row['id'][:-2]}-R"]
    assert_meets(listed, 1e3 * resistivity(20.0) / area)


def test_copper() -> None:
    assert_meets(CHECKS["MAG-CU1"], resistivity(20.0))
    assert_meets(CHECKS["MAG-CU2"], resistivity(21.0) / resistivity(20.0) - 1.0)
    assert_meets(CHECKS["MAG-CU2"], COPPER_COEFFICIENT_20)
    assert_meets(CHECKS["MAG-CU4"], resistivity(125.0) / resistivity(25.0))


def test_copper_of_the_litz_method() -> None:
    row = CHECKS["MAG-LITZR"]
    assert_meets(row, resistivity(20.0), 0)
    assert_meets(row, resistivity(60.0), 1)


@pytest.mark.parametrize("row", params(SKIN))
def test_skin_depth(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    assert_meets(
        row, 1e3 * float(skin_depth(np.array(asked["f_Hz"]), copper_resistivity(np.array(asked["T_C"]))))
    )


@pytest.mark.parametrize("row", params(DOWELL))
def test_foil_winding(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    assert_meets(row, float(dowell_ratio(np.array(asked["thickness_over_delta"]), np.array(asked["layers"]))))


@pytest.mark.parametrize("row", params(OPTIMUM))
def test_foil_thickness_of_least_resistance(row: dict[str, Any]) -> None:
    layers = np.array(row["inputs"]["layers"])
    # dc resistance goes as 1/thickness, so that the ac resistance goes as ratio over thickness
    found = minimize_scalar(
        lambda depth: float(dowell_ratio(np.array(depth), layers)) / depth, bounds=(0.1, 4.0)
    )
    assert_meets(row, found.x)


def test_small_thickness_series() -> None:
    row = CHECKS["MAG-DSER"]
    assert_meets(row, float(dowell_ratio(np.array(row["inputs"]["D"]), np.array(row["inputs"]["p"]))))


@pytest.mark.parametrize("row", params(ROUND))
def test_isolated_round_wire(row: dict[str, Any]) -> None:
    assert_meets(row, float(round_wire_skin_ratio(np.array(row["inputs"]["d_over_delta"]))))


def test_litz_winding() -> None:
    row = CHECKS["MAG-LITZ"]
    asked = row["inputs"]
    found = litz_ratio(
        np.array(asked["f_Hz"]),
        np.array(asked["strands"]),
        np.array(asked["turns"]),
        np.array(asked["strand_d_mm"] * 1e-3),
        np.array(asked["window_breadth_mm"] * 1e-3),
        np.array(asked["rho"]),
    )
    assert_meets(row, float(found))


@pytest.mark.parametrize("row", params(FACTOR))
def test_constant_of_the_improved_steinmetz_equation(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    assert_meets(row, float(igse_factor(np.array(1.0), np.array(asked["alpha"]), np.array(asked["beta"]))))


@pytest.mark.parametrize("row", params(TRIANGLE))
@pytest.mark.parametrize(("frequency", "peak"), [(1.0, 1.0), (40e3, 0.08)])
def test_triangular_over_sinusoidal_flux(row: dict[str, Any], frequency: float, peak: float) -> None:
    asked = row["inputs"]
    alpha, beta = np.array(asked["alpha"]), np.array(asked["beta"])
    duty = asked.get("D", 0.5)
    times = np.array([0.0, duty, 1.0]) / frequency
    triangle = piecewise_linear_loss(np.array(3.0), alpha, beta, np.array([-peak, peak, -peak]), times)
    sine = steinmetz_loss(np.array(3.0), alpha, beta, np.array(frequency), np.array(peak))
    assert_meets(row, float(triangle / sine))


def test_sinusoidal_flux_gives_back_the_steinmetz_equation() -> None:
    row = CHECKS["MAG-STM-UNIT"]
    alpha, beta = np.array(row["inputs"]["alpha"]), np.array(row["inputs"]["beta"])
    times = np.linspace(0.0, 1e-5, 4001)
    found = piecewise_linear_loss(np.array(7.0), alpha, beta, 0.1 * np.sin(2e5 * np.pi * times), times)
    assert_meets(row, float(found / steinmetz_loss(np.array(7.0), alpha, beta, np.array(1e5), np.array(0.1))))


@pytest.mark.parametrize("row", params(GAPPED))
def test_inductance_factor_of_a_gapped_core(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    found = gapped_inductance(
        np.array(1.0),
        np.array(asked["gap_mm"] * 1e-3),
        np.array(asked["Ae_mm2"] * 1e-6),
        np.array(asked["le_mm"] * 1e-3),
        np.array(asked["mu_e_ungapped"]),
        np.array(asked["window_height_mm"] * 1e-3),
        ONE,
    )
    assert_meets(row, 1e9 * float(found))


@pytest.mark.parametrize("row", params(UNGAPPED))
def test_inductance_factor_of_an_ungapped_core(row: dict[str, Any]) -> None:
    asked = row["inputs"]
    area, path = np.array(asked["Ae_mm2"] * 1e-6), np.array(asked["le_mm"] * 1e-3)
    found = gapped_inductance(
        np.array(1.0), np.array(0.0), area, path, np.array(asked["mu_e"]), np.array(0.03), ONE
    )
    assert_meets(row, 1e9 * float(found))


def test_ideal_gap_stores_the_energy_at_the_flux_limit() -> None:
    """The published turns and gap, without fringing (no window beside the gap), give inductance and flux
    back.
    """
    row = CHECKS["MAG-GAP1"]
    asked = row["inputs"]
    turns, gap = row["expected"]
    area = asked["Ae_m2"]
    found = gapped_inductance(
        np.array(turns),
        np.array(gap * 1e-3),
        np.array(area),
        np.array(0.05),
        np.array(1e12),
        np.array(1e-9),
        ONE,
    )
    assert float(found) == pytest.approx(asked["L_H"], rel=row["tolerance"]["rel"])
    assert float(found) * asked["I_peak_A"] / (turns * area) == pytest.approx(
        asked["B_max_T"], rel=row["tolerance"]["rel"]
    )


def test_fringing() -> None:
    row = CHECKS["MAG-GAP2"]
    asked = row["inputs"]
    gap, area, breadth = asked["lg_cm"] * 1e-2, asked["Ac_cm2"] * 1e-4, asked["G_cm"] * 1e-2
    assert_meets(row, float(fringing_factor(np.array(gap), np.array(area), np.array(breadth))))


@pytest.mark.parametrize("row", params(WHOLE_TURNS))
def test_whole_turns_for_an_inductance(row: dict[str, Any]) -> None:
    """The published number of turns reaches the inductance, and one turn less does not."""
    asked = row["inputs"]
    area, path = 1e-4, 0.1
    permeability = asked["AL_nH"] * 1e-9 * path / (mu_0 * area)

    def inductance(turns: int) -> float:
        core = (np.array(area), np.array(path), np.array(permeability), np.array(np.inf), np.array(2.0))
        return float(powder_inductance(np.array(turns), np.array(0.0), *core))

    assert inductance(row["expected"]) >= asked["L_H"] * (1.0 - 1e-9)
    assert inductance(row["expected"] - 1) < asked["L_H"]


@pytest.mark.parametrize("row", params(BOUNDS))
def test_typical_loss_lies_below_a_guaranteed_maximum(row: dict[str, Any], catalog: Catalog) -> None:
    """An upper bound of one grade; the catalogue's typical value of the like class at the same point must
    not exceed it.
    """
    peak = 0.2 if "200 mT" in row["quantity"] else 0.1
    typical = []
    for material in catalog.core_materials:
        if material.name.startswith("MnZn ferrite"):
            inside = [
                low <= 100e3 <= high
                for low, high in zip(material.band_min_hz, material.band_max_hz, strict=True)
            ]
            if any(inside):
                band = inside.index(True)
                constants = (
                    material.steinmetz_k[band],
                    material.steinmetz_alpha[band],
                    material.steinmetz_beta[band],
                )
                typical.append(
                    float(
                        steinmetz_loss(
                            *(np.array(value) for value in constants), np.array(1e5), np.array(peak)
                        )
                    )
                )
    assert typical
    assert min(typical) * 1e-3 < row["expected"]
