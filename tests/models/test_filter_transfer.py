"""The output filter by a nodal solution and by a circuit simulator: phasors, transfers, resonance."""

from __future__ import annotations

import shutil
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.linalg import expm

from models.output_filter import (
    Filter,
    grid_transfer,
    line_phasors,
    loaded_transfer,
    open_circuit_transfer,
    output_impedance,
    resonance_hz,
)

sys.path.insert(0, str(Path(__file__).parent / "waveforms"))
from oracle import SCHEMES, LinePeriod  # noqa: E402

Array = NDArray[np.float64]
HENRY, FARAD, OHM = st.floats(1e-5, 1e-2), st.floats(1e-7, 1e-4), st.floats(1e-3, 50.0)


def circuit(first: float, second: float, capacitance: float, damping: float) -> Filter:
    return Filter(*(np.array([value]) for value in (first, second, capacitance, damping)))


def nodal(
    first: float, second: float, capacitance: float, damping: float, hertz: float
) -> dict[str, complex]:
    """One volt of bridge voltage into a shorted output: node equations of the capacitor's branch, by
    elimination.
    """
    s = 2j * np.pi * hertz
    admittances = np.array([1.0 / (s * first), 1.0 / (s * second), 1.0 / (damping + 1.0 / (s * capacitance))])
    node = admittances[0] / admittances.sum()
    return {
        "output_current": node * admittances[1],
        "inverter_current": (1.0 - node) * admittances[0],
        "capacitor_current": node * admittances[2],
        "capacitor_voltage": node,
    }


@given(HENRY, HENRY, FARAD, OHM, st.floats(40.0, 2e6))
def test_grid_transfer_is_the_nodal_solution(
    first: float, second: float, capacitance: float, damping: float, hertz: float
) -> None:
    found = grid_transfer(circuit(first, second, capacitance, damping).columns(), np.array([[hertz]]))
    for name, expected in nodal(first, second, capacitance, damping, hertz).items():
        assert getattr(found, name)[0, 0] == pytest.approx(abs(expected), rel=1e-6), name


@given(HENRY, HENRY, FARAD, OHM, st.floats(0.1, 100.0), st.floats(-100.0, 100.0), st.floats(40.0, 2e6))
def test_loaded_transfer_is_the_nodal_solution(
    first: float,
    second: float,
    capacitance: float,
    damping: float,
    load: float,
    reactance: float,
    hertz: float,
) -> None:
    """Two node equations, at the capacitor's branch and at the load, solved as a matrix."""
    s, impedance = 2j * np.pi * hertz, load + 1j * reactance
    one, two, branch = 1.0 / (s * first), 1.0 / (s * second), 1.0 / (damping + 1.0 / (s * capacitance))
    matrix = np.array([[one + two + branch, -two], [-two, two + 1.0 / impedance]])
    middle, end = np.linalg.solve(matrix, np.array([one, 0.0]))
    (inverter, output), voltage = loaded_transfer(
        circuit(first, second, capacitance, damping).columns(), np.array([[impedance]]), np.array([[hertz]])
    )
    assert inverter[0, 0] == pytest.approx(abs((1.0 - middle) * one), rel=1e-6)
    assert output[0, 0] == pytest.approx(abs(end / impedance), rel=1e-6)
    assert voltage[0, 0] == pytest.approx(abs(end), rel=1e-6)


@given(HENRY, FARAD, OHM, st.floats(40.0, 2e6))
def test_filter_without_grid_inductance(
    first: float, capacitance: float, damping: float, hertz: float
) -> None:
    """An LC filter on a stiff grid: the whole bridge voltage lies across L1, and the open circuit is a
    divider.
    """
    one = circuit(first, 0.0, capacitance, damping).columns()
    assert grid_transfer(one, np.array([[hertz]])).output_current[0, 0] == pytest.approx(
        1.0 / (2.0 * np.pi * hertz * first), rel=1e-6
    )
    s = 2j * np.pi * hertz
    branch = damping + 1.0 / (s * capacitance)
    open_ended = open_circuit_transfer(one, np.array([[hertz]]))
    assert open_ended.capacitor_voltage[0, 0] == pytest.approx(abs(branch / (branch + s * first)), rel=1e-6)
    assert output_impedance(one, np.array([[hertz]]))[0, 0] == pytest.approx(
        abs(branch * s * first / (branch + s * first)), rel=1e-6
    )


@given(HENRY, HENRY, FARAD, OHM, st.floats(-1.0, 1.0), st.floats(0.1, 50.0))
@settings(max_examples=60)
def test_line_phasors_obey_kirchhoff_and_conserve_power(
    first: float, second: float, capacitance: float, damping: float, angle: float, current: float
) -> None:
    wanted = np.array([current * np.exp(1j * angle)])
    found = line_phasors(circuit(first, second, capacitance, damping), 50.0, np.array([230.0]), wanted)
    omega = 2.0 * np.pi * 50.0
    assert found.inverter_current == pytest.approx(found.output_current + found.capacitor_current)
    assert found.bridge_voltage - found.capacitor_voltage == pytest.approx(
        1j * omega * first * found.inverter_current
    )
    assert found.capacitor_voltage - 230.0 == pytest.approx(1j * omega * second * found.output_current)
    given_power = np.real(found.bridge_voltage * np.conj(found.inverter_current))
    damped = damping * np.abs(found.capacitor_current) ** 2
    assert given_power == pytest.approx(230.0 * np.real(wanted) + damped, rel=1e-9, abs=1e-9)


def test_displacement_is_the_lag_of_the_bridge_current() -> None:
    lagging = np.array([10.0 * np.exp(-0.5j)])
    found = line_phasors(circuit(1e-9, 0.0, 1e-12, 0.0), 50.0, np.array([230.0]), lagging)
    assert found.displacement == pytest.approx(0.5, abs=1e-6)


@given(HENRY, HENRY, FARAD)
def test_transfer_peaks_at_the_resonance(first: float, second: float, capacitance: float) -> None:
    one = circuit(first, second, capacitance, 1e-6).columns()
    at = float(resonance_hz(one)[0, 0])
    around = at * np.array([[0.9, 0.99, 1.0, 1.01, 1.1]])
    assert np.argmax(grid_transfer(one, around).output_current) == 2


def test_third_order_fall_above_the_resonance() -> None:
    """60 dB a decade while the damping resistor is small against the capacitor's reactance."""
    one = circuit(2e-3, 1e-3, 1e-5, 1e-4).columns()
    found = grid_transfer(one, np.array([[20e3, 200e3]])).output_current[0]
    assert found[0] / found[1] == pytest.approx(1000.0, rel=0.03)


def test_arrays_equal_scalars() -> None:
    rng = np.random.default_rng(4)
    values = [
        rng.uniform(low, high, 5) for low, high in ((1e-4, 2e-3), (1e-5, 1e-3), (1e-6, 1e-5), (0.1, 5.0))
    ]
    hertz = rng.uniform(1e3, 1e5, (5, 3))
    together = grid_transfer(Filter(*values).columns(), hertz).output_current
    for row in range(5):
        alone = grid_transfer(
            Filter(*(value[row : row + 1] for value in values)).columns(), hertz[row : row + 1]
        )
        assert alone.output_current[0] == pytest.approx(together[row], rel=1e-12)


SIMULATOR = shutil.which("ngspice")
ELEMENTS = (1.2e-3, 0.3e-3, 4.7e-6, 3.3)
NETS = {
    "grid": ("V1 in 0 dc 0 ac 1\nVout out 0 dc 0", "L2 x mid {l2}\nR2 mid out 1n", "i(Vout) i(V1) v(x)"),
    "open": ("V1 in 0 dc 0 ac 1", "", "i(V1) v(x)"),
    "impedance": ("V1 in 0 dc 0\nI1 0 x dc 0 ac 1", "", "v(x)"),
}


def simulated(net: str, folder: Path) -> tuple[Array, list[Array]]:
    """Frequencies and magnitudes of the asked quantities from the simulator's small-signal analysis."""
    first, second, capacitance, damping = ELEMENTS
    source, grid, asked = NETS[net]
    magnitudes = " ".join(f"mag({quantity})" for quantity in asked.split())
    (folder / "net.cir").write_text(
        f"output filter\n{source}\nR1 in a 1n\nL1 a x {first}\nRd x c {damping}\nC1 c 0 {capacitance}\n"
        f"{grid.format(l2=second)}\n.ac dec 5 100 1meg\n.control\nset noaskquit\nset wr_singlescale\n"
        f"set numdgt=12\nrun\nwrdata out.txt {magnitudes}\nquit\n.endc\n.end\n",
        encoding="ascii",
    )
    assert SIMULATOR is not None
    subprocess.run([SIMULATOR, "-b", "net.cir"], cwd=folder, check=True, capture_output=True, timeout=60)
    columns = np.loadtxt(folder / "out.txt").T
    return columns[0], list(columns[1:])


@pytest.mark.skipif(
    SIMULATOR is None, reason="no ngspice here: the circuit simulator is the second road of this test"
)
def test_transfers_against_a_circuit_simulator(tmp_path: Path) -> None:
    one = circuit(*ELEMENTS).columns()
    hertz, (output, inverter, voltage) = simulated("grid", tmp_path)
    assert len(hertz) >= 20
    found = grid_transfer(one, hertz[None])
    assert found.output_current[0] == pytest.approx(output, rel=1e-5)
    assert found.inverter_current[0] == pytest.approx(inverter, rel=1e-5)
    assert found.capacitor_voltage[0] == pytest.approx(voltage, rel=1e-5)
    lone = circuit(ELEMENTS[0], 0.0, *ELEMENTS[2:]).columns()
    hertz, (current, voltage) = simulated("open", tmp_path)
    ended = open_circuit_transfer(lone, hertz[None])
    assert ended.inverter_current[0] == pytest.approx(current, rel=1e-5)
    assert ended.capacitor_voltage[0] == pytest.approx(voltage, rel=1e-5)
    hertz, (impedance,) = simulated("impedance", tmp_path)
    assert output_impedance(lone, hertz[None])[0] == pytest.approx(impedance, rel=1e-5)


@given(HENRY, HENRY, FARAD, OHM, st.floats(0.2, 4.0), st.floats(40.0, 2e6))
def test_parallel_damping_branch(
    first: float, second: float, capacitance: float, damping: float, ratio: float, hertz: float
) -> None:
    """Capacitor beside resistor and capacitor in series: the ladder solved with complex impedances."""
    values = (first, second, capacitance, damping, ratio * capacitance)
    one = Filter(*(np.array([value]) for value in values)).columns()
    s = 2j * np.pi * hertz
    branch = 1.0 / (s * capacitance + 1.0 / (damping + 1.0 / (s * ratio * capacitance)))
    beside = branch * s * second / (branch + s * second)
    expected = abs(beside / (beside + s * first) / (s * second))
    found = grid_transfer(one, np.array([[hertz]])).output_current[0, 0]
    assert found == pytest.approx(expected, rel=1e-9)


def test_a_filter_of_inductance_alone() -> None:
    """V/(omega L) into a stiff grid, nothing in the capacitor."""
    one = circuit(2e-3, 0.0, 0.0, 0.0).columns()
    hertz = np.array([[50.0, 1e3, 50e3]])
    found = grid_transfer(one, hertz)
    assert found.output_current[0] == pytest.approx(1.0 / (2.0 * np.pi * hertz[0] * 2e-3), rel=1e-6)
    assert np.all(found.capacitor_current < 1e-9 * found.output_current)


def test_the_grid_adds_to_the_grid_side() -> None:
    one = circuit(1e-3, 3e-4, 5e-6, 1.0)
    weak, stronger = (float(resonance_hz(one.behind(grid))[0]) for grid in (1e-3, 1e-4))
    assert weak < stronger < float(resonance_hz(one)[0])
    assert float(one.behind(2e-4).grid_inductance[0]) == pytest.approx(5e-4)


@pytest.mark.parametrize("damping_capacitance", [0.0, 6e-6])
@pytest.mark.parametrize("scheme", ["unipolar", "bipolar"])
def test_harmonic_currents_against_the_steady_state_in_time(scheme: str, damping_capacitance: float) -> None:
    """The switched voltage of a line period through the filter's state equations, solved exactly from edge
    to edge by the matrix exponential, steady state by its fixed point: every harmonic current above 0.05 % of
    the base current within 1 % of its own value.
    """
    ratio, line, volts = 63, 50.0, 400.0
    l1, l2, c, rd, cd = 1.2e-3, 4e-4, 6e-6, 3.0, damping_capacitance
    exact = LinePeriod(SCHEMES[scheme], 0.8, ratio)
    edges, levels = exact.edges / (2.0 * np.pi * line), volts * exact.voltage()
    # states: i1, i2, v_c and, with a damping branch, v_d; short-circuited grid (its harmonics are nought)
    if cd == 0.0:
        a = np.array([[-rd / l1, rd / l1, -1 / l1], [rd / l2, -rd / l2, 1 / l2], [1 / c, -1 / c, 0.0]])
    else:
        g = 1.0 / rd
        a = np.array(
            [
                [0, 0, -1 / l1, 0],
                [0, 0, 1 / l2, 0],
                [1 / c, -1 / c, -g / c, g / c],
                [0, 0, g / cd, -g / cd],
            ]
        )
    size = len(a)
    b = np.zeros(size)
    b[0] = 1.0 / l1
    steps = np.diff(edges)
    moves = []
    for step, level in zip(steps, levels, strict=True):
        block = np.zeros((size + 1, size + 1))
        block[:size, :size], block[:size, size] = a * step, b * level * step
        moves.append(expm(block))
    whole = np.eye(size + 1)
    for move in moves:
        whole = move @ whole
    # the current of the fundamental short circuit settles too; a touch of resistance keeps it finite
    start = np.linalg.lstsq(np.eye(size) - whole[:size, :size], whole[:size, size], rcond=None)[0]
    state = np.append(start, 1.0)
    orders = np.arange(2, 200)
    lines = np.zeros(len(orders), dtype=complex)
    for left, right, level, move in zip(edges[:-1], edges[1:], levels, moves, strict=True):
        following = move @ state
        for place, order in enumerate(orders):
            s = 2j * np.pi * line * order
            # integral of x exp(-s t) over the piece: (a - s)^-1 {[x exp(-s t)] - b u [exp(-s t)]/(-s)}
            ends = following[:size] * np.exp(-s * right) - state[:size] * np.exp(-s * left)
            drive = b * level * (np.exp(-s * right) - np.exp(-s * left)) / -s
            lines[place] += np.linalg.solve(a - s * np.eye(size), ends - drive)[1]
        state = following
    found_exact = np.abs(2.0 * line * lines)
    one = Filter(*(np.array([value]) for value in (l1, l2, c, rd, cd))).columns()
    voltage = volts * np.abs([exact.harmonic(int(order)) for order in orders])
    found = voltage * grid_transfer(one, (orders * line)[None]).output_current[0]
    base = np.sqrt(2.0) * 20.0
    counted = found_exact > 5e-4 * base
    assert counted.sum() >= 3
    assert found[counted] == pytest.approx(found_exact[counted], rel=0.01)
