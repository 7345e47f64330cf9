"""Which leg loses least over switching frequency: two-level, T-type or neutral-point clamped.

Source: Schweizer & Kolar, Design and Implementation of a Highly Efficient Three-Level T-Type Converter for
Low-Voltage Applications, IEEE Trans. Power Electron. 28(2), 2013 (from memory): with silicon IGBT of 1200 V
and 600 V on a low-voltage three-phase grid of 10 kVA the two-level bridge is best at a few kilohertz, the
T-type from about 4 to 30 kHz, the clamped leg above. Only the order and the order of magnitude of the
crossings are tested: their parts are not ours.
"""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray
from probe_device import At

from models.catalog import Catalog
from models.catalog.clamp_diode import diode_of
from models.catalog.gathered import Gathered
from models.catalog.part_table import PartTable
from models.semiconductors.bridge_losses import Cooling, bridge_losses
from models.semiconductors.packages import Packages
from models.waveforms.bridges import BRIDGES
from models.waveforms.leg_commutations import CLAMP, INNER, OUTER, ROLES, blocking_shares

FREQUENCY = np.geomspace(500.0, 100e3, 60)
RATED = 25.0  # A, every die is sized for it
PARTS = {OUTER: "IGBT 1200 V low-loss", INNER: "IGBT 650 V low-loss", CLAMP: "diode of IGBT 650 V low-loss"}
LEGS = {
    "two-level": ("three-phase six-switch bridge", "centred space vector"),
    "T-type": ("three-phase bridge, T-type", "phase disposition with common-mode injection"),
    "clamped": ("three-phase bridge, neutral-point clamped", "phase disposition with common-mode injection"),
}


@pytest.fixture(scope="module")
def heat(catalog: Catalog) -> dict[str, NDArray[np.float64]]:
    """Loss of the bridge at 10 kVA, 400 V, 650 V dc and unity power factor over FREQUENCY [W]."""
    found = {}
    diodes = PartTable(tuple(diode_of(device) for device in catalog.devices if not device.shared_die))
    count = len(FREQUENCY)
    for leg, (bridge, scheme) in LEGS.items():
        at = At(bridge, scheme, 0.98, 0.0, peak=14.4 * np.sqrt(2.0), dc_voltage=650.0)
        entry = BRIDGES[bridge]
        roles = list(ROLES[entry.leg_type].values())
        packages = []
        for role, share in blocking_shares(entry.leg_type).items():
            table = diodes if role == CLAMP else catalog.devices
            name = PARTS[INNER] if leg == "clamped" and role == OUTER else PARTS[role]
            part = Gathered(table, np.full(count, table.index(name)), 1)
            area = RATED / part.reference_current_density_a_per_m2[:, 0]
            packages.append(
                Packages(role, part, np.ones(count), area, roles.count(role) * entry.leg_copies, share)
            )
        cooling = Cooling(60.0, lambda power, rows: 0.02 * power)
        losses = bridge_losses(
            tuple(packages), FREQUENCY, entry, at.tables, at.state(count), np.array([650.0]), cooling
        )
        found[leg] = losses.heat[:, 0]
    return found


def crossing(first: NDArray[np.float64], second: NDArray[np.float64]) -> float:
    """Frequency up to which the first loses less; it must be one crossing."""
    better = first < second
    assert better[0]
    assert not better[-1]
    assert np.sum(better[1:] != better[:-1]) == 1
    return float(FREQUENCY[np.argmin(better)])


def test_two_level_then_t_type_then_clamped(heat: dict[str, NDArray[np.float64]]) -> None:
    order = ["two-level", "T-type", "clamped"]
    best = np.argmin([heat[leg] for leg in order], axis=0)
    assert np.all(np.diff(best) >= 0)
    assert set(best.tolist()) == {0, 1, 2}


def test_crossings_are_of_the_published_order(heat: dict[str, NDArray[np.float64]]) -> None:
    """About 4 kHz and 30 kHz there; within a factor of three."""
    assert 4e3 / 3.0 < crossing(heat["two-level"], heat["T-type"]) < 4e3 * 3.0
    assert 30e3 / 3.0 < crossing(heat["T-type"], heat["clamped"]) < 30e3 * 3.0


def test_conduction_rules_the_low_end_and_switching_the_high_end(
    heat: dict[str, NDArray[np.float64]],
) -> None:
    """Two positions in series conduct in a clamped leg, one or two in a T-type, one in two levels; they
    commutate half of the dc voltage.
    """
    assert heat["two-level"][0] < heat["T-type"][0] < heat["clamped"][0]
    slope = {leg: loss[-20] - loss[0] for leg, loss in heat.items()}
    assert slope["two-level"] > 2.0 * slope["T-type"] > 2.0 * slope["clamped"]
