"""Output filter L, L-C or L-C-L: phasors at line frequency, transfer at harmonics.

Damping is a resistor in series with the capacitor, or a resistor and a capacitor in series beside it. All
quantities per phase. The bridge must supply the voltage drop of the filter, so its modulation index follows
from the phasor circuit, not from the grid voltage alone. Sources: Liserre, Blaabjerg, Hansen (2005) for the
LCL filter; Erickson & Maksimovic, Fundamentals of Power Electronics, ch. 10, for parallel R-C damping;
circuit laws.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
NO_CAPACITANCE = 1e-15  # F, stands for none: an open circuit at any frequency in question


@dataclass(frozen=True)
class Filter:
    """Filter elements per phase, broadcastable arrays.

    Attributes:
        inverter_inductance, grid_inductance: [H]; the latter 0 where there is none.
        capacitance: [F]; 0 for a filter of inductance alone.
        damping: resistor in series with the capacitor or, where there is a damping capacitance, with that one
            [ohm].
        damping_capacitance: beside the capacitance, behind the damping resistor; 0 for a resistor in series
            [F].
    """

    inverter_inductance: Array
    grid_inductance: Array
    capacitance: Array
    damping: Array
    damping_capacitance: Array = field(default_factory=lambda: np.zeros(1))

    def columns(self) -> Filter:
        """The same elements with one more trailing axis, to meet load points or harmonics."""
        return Filter(
            self.inverter_inductance[..., None],
            self.grid_inductance[..., None],
            self.capacitance[..., None],
            self.damping[..., None],
            self.damping_capacitance[..., None],
        )

    def behind(self, grid_inductance: float) -> Filter:
        """The same filter with the grid's own inductance [H] behind it."""
        return replace(self, grid_inductance=self.grid_inductance + grid_inductance)

    def branch(self, omega: Array) -> tuple[Array, Array]:
        """Impedance r - j x of the capacitor branch at angular frequencies [rad/s]: r, x [ohm]."""
        susceptance = omega * np.maximum(self.capacitance, NO_CAPACITANCE)
        if not np.any(self.damping_capacitance):
            return self.damping, 1.0 / susceptance
        damped = self.damping_capacitance > 0.0
        reactance = 1.0 / (omega * np.where(damped, self.damping_capacitance, 1.0))
        square = np.maximum(self.damping**2 + reactance**2, 1e-30)
        conductance, together = self.damping / square, susceptance + reactance / square
        size = conductance**2 + together**2
        return (
            np.where(damped, conductance / size, self.damping),
            np.where(damped, together / size, 1.0 / susceptance),
        )


@dataclass(frozen=True)
class LinePhasors:
    """Line-frequency phasors referred to the output voltage at angle zero (rms).

    Attributes:
        bridge_voltage: voltage the bridge must make [V].
        inverter_current: current of the bridge-side inductor [A].
        capacitor_current: current of the filter capacitor [A].
        capacitor_voltage: voltage across capacitor and its damping resistor [V].
        output_current: current into grid or load [A].
    """

    bridge_voltage: Complex
    inverter_current: Complex
    capacitor_current: Complex
    capacitor_voltage: Complex
    output_current: Complex

    @property
    def displacement(self) -> Array:
        """Angle by which the bridge's current lags its voltage [rad]."""
        return np.angle(self.bridge_voltage * np.conj(self.inverter_current))


def line_phasors(
    circuit: Filter, line_frequency_hz: float, output_voltage: Array, output_current: Complex
) -> LinePhasors:
    """Solve the filter at line frequency.

    Args:
        circuit: filter elements, broadcastable with the operating points.
        line_frequency_hz: [Hz].
        output_voltage: rms phase voltage at the terminals [V].
        output_current: rms phasor of the delivered current, lagging negative imaginary [A].

    Returns:
        The phasors at every operating point.
    """
    omega = 2.0 * np.pi * line_frequency_hz
    capacitor_voltage = output_voltage + 1j * omega * circuit.grid_inductance * output_current
    resistance, reactance = circuit.branch(np.asarray(omega))
    capacitor_current = capacitor_voltage / (resistance - 1j * reactance)
    inverter_current = output_current + capacitor_current
    bridge_voltage = capacitor_voltage + 1j * omega * circuit.inverter_inductance * inverter_current
    return LinePhasors(bridge_voltage, inverter_current, capacitor_current, capacitor_voltage, output_current)


def resonance_hz(circuit: Filter) -> Array:
    """Resonance frequency of an LCL filter, of L1-C where the grid-side inductance is zero [Hz].

    Source: Liserre, Blaabjerg, Hansen (2005): sqrt((L1 + L2)/(L1 L2 C))/(2 pi).
    """
    l1, l2 = circuit.inverter_inductance, circuit.grid_inductance
    effective = np.where(l2 > 0.0, l1 * l2 / np.where(l2 > 0.0, l1 + l2, 1.0), l1)
    return 1.0 / (2.0 * np.pi * np.sqrt(effective * np.maximum(circuit.capacitance, NO_CAPACITANCE)))


@dataclass(frozen=True)
class HarmonicTransfer:
    """Responses to one volt of bridge voltage at given frequencies: currents [A/V], output voltage [V/V]."""

    output_current: Array
    inverter_current: Array
    capacitor_current: Array
    capacitor_voltage: Array


def grid_transfer(circuit: Filter, frequency_hz: Array) -> HarmonicTransfer:
    """Transfer of an LCL filter into a stiff grid (a short circuit for harmonics), magnitudes.

    Args:
        circuit: elements with a trailing axis of length one.
        frequency_hz: harmonic frequencies on the trailing axis [Hz].
    """
    omega = 2.0 * np.pi * frequency_hz
    x1, x2 = omega * circuit.inverter_inductance, omega * circuit.grid_inductance
    resistance, reactance = circuit.branch(omega)
    # Zc = r - jx; denominator Z1 Z2 + Zc (Z1 + Z2), with Z1 = j x1, Z2 = j x2
    real = reactance * (x1 + x2) - x1 * x2
    imag = resistance * (x1 + x2)
    denominator = np.sqrt(real * real + imag * imag)
    branch = np.sqrt(resistance * resistance + reactance * reactance)
    return HarmonicTransfer(
        output_current=branch / denominator,
        inverter_current=np.sqrt(resistance * resistance + (x2 - reactance) ** 2) / denominator,
        capacitor_current=x2 / denominator,
        capacitor_voltage=branch * x2 / denominator,
    )


def open_circuit_transfer(circuit: Filter, frequency_hz: Array) -> HarmonicTransfer:
    """Transfer of an LC filter without load, the worst case for the output voltage's switching ripple,
    magnitudes.

    Args:
        circuit: elements with a trailing axis of length one.
        frequency_hz: harmonic frequencies on the trailing axis [Hz].
    """
    omega = 2.0 * np.pi * frequency_hz
    resistance, reactance = circuit.branch(omega)
    net = omega * circuit.inverter_inductance - reactance
    impedance = np.sqrt(resistance * resistance + net * net)
    branch = np.sqrt(resistance * resistance + reactance * reactance)
    current = 1.0 / impedance
    return HarmonicTransfer(
        output_current=np.zeros_like(current),
        inverter_current=current,
        capacitor_current=current,
        capacitor_voltage=branch * current,
    )


def loaded_transfer(circuit: Filter, load: Complex, frequency_hz: Array) -> tuple[tuple[Array, Array], Array]:
    """Transfer of the filter into an impedance, magnitudes.

    Args:
        circuit: elements with a trailing axis of length one.
        load: impedance behind the filter, broadcastable with the frequencies [ohm].
        frequency_hz: harmonic frequencies on the trailing axis [Hz].

    Returns:
        Currents of the bridge-side inductor and of the load [A/V], and voltage at the load [V/V].
    """
    omega = 2.0 * np.pi * frequency_hz
    resistance, reactance = circuit.branch(omega)
    branch = resistance - 1j * reactance
    behind = 1j * omega * circuit.grid_inductance + load
    divider = branch / (branch + behind)
    first = 1.0 / (1j * omega * circuit.inverter_inductance + divider * behind)
    second = first * divider
    return (np.abs(first), np.abs(second)), np.abs(second * load)


def output_impedance(circuit: Filter, frequency_hz: Array) -> Array:
    """Open-loop output impedance of an LC filter, L1 beside C with its damping, magnitude [ohm]."""
    omega = 2.0 * np.pi * frequency_hz
    z1 = 1j * omega * circuit.inverter_inductance
    resistance, reactance = circuit.branch(omega)
    zc = resistance - 1j * reactance
    return np.abs(z1 * zc / (z1 + zc))
