"""Switching loss of a leg: energies at the true commutated currents, averaged over the line angle.

E = e V_ref I_ref [(1 - c) (I/I_ref)^k_i + c] (V/V_ref)^k_v [1 - k_T (T_hot - T)] with I_ref = rated current
of the dies. At
each angle one of the leg's switches turns on at |i| - offset and off at |i| + offset, the offset being half
the local ripple (exactly: the flux deviation at the instant). Where the current reverses within the period,
turn-on is soft: no overlap, no recovery, and the reversed current recharges the output capacitances as far as
the dead time lets it. Output charge of unipolar parts costs Q V/2 per hard turn-on for every position whose
voltage changes by V: Q_oss V in a two-level leg of equal parts (Kasper, Burkart, Deboy, Kolar 2016); a
data-sheet turn-on energy that contains it is reduced by it first.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
TINY_CHARGE = 1e-15  # C, keeps shares finite for parts whose turn-on energy contains the output charge
LEAST_CURRENT_SHARE = 1e-9  # of the reference current: keeps logarithms finite where no current is commutated


@dataclass(frozen=True)
class Dies:
    """Parallel dies of one position: catalogue fields (n, 1) and switch die area in all (n, 1) [m2]."""

    device: Any
    area: Array

    @property
    def rated_current(self) -> Array:
        """Reference current of the energies [A]."""
        return np.asarray(self.device.reference_current_density_a_per_m2 * self.area)


@dataclass(frozen=True)
class LegSwitching:
    """Loss of one switching leg, per its modelled operating points.

    Attributes:
        turn_on_hot, turn_off_hot, recovery_hot: both switches together, at the hot reference temperature [W].
        output_charge: loss of charging the output capacitances [W].
        mean_current, mean_square: means over the line period of |i| [A] and i^2 [A2] where the dies
            commutate.
    """

    turn_on_hot: Array
    turn_off_hot: Array
    recovery_hot: Array
    output_charge: Array
    mean_current: Array
    mean_square: Array


def energy_scale(energy: Array, voltage: Array, exponent: Array, device: Any) -> Array:
    """Energy per ampere of reference current at the working voltage [J/A].

    Args:
        energy: per ampere and volt at the reference point [J/(A V)].
        voltage: commutated voltage [V].
        exponent: voltage exponent k_v [-].
        device: catalogue fields.
    """
    reference = device.energy_reference_voltage_v
    return energy * reference * (voltage / reference) ** exponent


def output_charge(device: Any, voltage: Array, total_area: Array) -> Array:
    """Output charge of the parallel dies at a voltage, Q ~ V^x [C]."""
    share = (voltage / device.energy_reference_voltage_v) ** device.output_charge_voltage_exponent
    return device.output_charge_c_per_m2 * share * total_area


def overlap_turn_on_energy(device: Any) -> Array:
    """Turn-on energy without the output charge that a data sheet's figure contains [J/(A V)]."""
    contained = device.output_charge_c_per_m2 / device.reference_current_density_a_per_m2
    return np.maximum(
        device.turn_on_energy_j_per_av - np.where(device.turn_on_includes_output_charge, contained, 0.0), 0.0
    )


def overlap_constant_share(device: Any) -> Array:
    """Part of the turn-on energy without output charge, at rated current, that is there without current [-].

    The contained output charge is such a part too: it is counted first, and what the sheet's constant part
    has beyond it is left.
    """
    overlap = overlap_turn_on_energy(device)
    contained = device.turn_on_energy_j_per_av - overlap
    rest = device.turn_on_constant_share * device.turn_on_energy_j_per_av - contained
    return np.maximum(rest, 0.0) / np.where(overlap > 0.0, overlap, 1.0)


def charge_left(valley: Array, node_charge: Array, dead_time: Array) -> Array:
    """Share of the output-charge loss that a turn-on still costs [-].

    Args:
        valley: current at turn-on, negative where it has reversed [A].
        node_charge: charge that all positions at the switch node exchange in a commutation [C].
        dead_time: [s].

    A reversed current brings the charge |i| t_d of the Q that the switch node needs (2 Q_oss of a two-level
    leg); what is left of the voltage swing, 1 - |i| t_d/Q, costs its square, as with constant capacitances
    (estimate for the nonlinear ones).
    """
    rest = np.asarray(valley * (dead_time / (node_charge + TINY_CHARGE)))
    rest += 1.0
    np.clip(rest, 0.0, 1.0, out=rest)
    rest *= rest
    return rest


def leg_switching(
    switch: Dies,
    diode: Dies,
    node_charge: Array,
    voltage: Array,
    frequency: Array,
    current: Array,
    offset: Array,
    share: Array,
) -> LegSwitching:
    """Average the switching energies of one leg over half a line period.

    Args:
        switch: the dies that turn on and off.
        diode: the dies whose diode hands the current over and recovers.
        node_charge: charge that all positions at the switch node exchange in a commutation [C].
        voltage: commutated voltage [V].
        frequency: switching frequency [Hz].
        current: phase current at the middles of the angle cells, (n, p, a) [A].
        offset: current deviation at the switching instants, (n, p, a); overwritten [A].
        share: 1 where these dies commutate, 0 elsewhere, (n, 1, a) or (n, p, a) [-].

    Returns:
        Losses of both switches of the leg, (n, p).
    """
    device = switch.device
    magnitude = np.abs(current)
    shares = np.broadcast_to(share, magnitude.shape)
    carried = magnitude * shares
    mean_square = np.einsum("...a,...a->...", carried, magnitude)
    reference = switch.rated_current[..., None]
    valley = magnitude - offset
    peak = np.add(magnitude, offset, out=offset)
    log_valley, log_peak = _log_share(np.abs(valley), reference), _log_share(peak, reference)
    hard = shares * (valley > 0.0)
    count = magnitude.shape[-1]
    per_second = frequency / count * reference[..., 0]
    scratch = np.empty_like(valley)

    def summed(exponent: Array, logarithm: Array, *weights: Array) -> list[Array]:
        """Sums over angles of weight times current share to a power (logarithms, in place: half of pow)."""
        np.multiply(logarithm, exponent, out=scratch)
        np.exp(scratch, out=scratch)
        return [np.einsum("...a,...a->...", weight, scratch) for weight in weights]

    exponents = (
        device.turn_on_current_exponent,
        device.turn_off_current_exponent,
        diode.device.recovery_current_exponent,
    )
    on, off, recovery = (exponent[..., None] for exponent in exponents)
    overlap = energy_scale(overlap_turn_on_energy(device), voltage, device.energy_voltage_exponent, device)
    turn_off = energy_scale(device.turn_off_energy_j_per_av, voltage, device.energy_voltage_exponent, device)
    recovered = energy_scale(
        diode.device.recovery_energy_j_per_av, voltage, diode.device.recovery_voltage_exponent, diode.device
    )
    if diode is not switch:
        ratio = switch.rated_current / diode.rated_current
        recovered = recovered * ratio ** (diode.device.recovery_current_exponent - 1.0)
    (turned_on,) = summed(on, log_valley, hard)
    (turned_off,) = summed(off, log_peak, shares)
    reversed_too, hard_too = summed(off, log_valley, shares, hard)
    turned_off += reversed_too - hard_too
    recovering = summed(recovery, log_valley, hard)[0] if recovered.any() else np.zeros_like(turned_on)
    constants = (
        device.turn_on_constant_share,
        device.turn_off_constant_share,
        diode.device.recovery_constant_share,
    )
    if any(np.any(constant) for constant in constants):
        hard_count, all_count = hard.sum(-1), shares.sum(-1)
        turned_on = turned_on + overlap_constant_share(device) * (hard_count - turned_on)
        turned_off = turned_off + constants[1] * (2.0 * all_count - hard_count - turned_off)
        recovering = recovering + constants[2] * (hard_count - recovering)
    charged = np.zeros_like(turned_on)
    if node_charge.any():
        left = charge_left(valley, node_charge[..., None], device.dead_time_s[..., None])
        charged = np.einsum("...a,...a->...", shares, left)
    return LegSwitching(
        turn_on_hot=overlap * per_second * turned_on,
        turn_off_hot=turn_off * per_second * turned_off,
        recovery_hot=recovered * per_second * recovering,
        output_charge=0.5 * node_charge * voltage * frequency / count * charged,
        mean_current=carried @ np.full(count, 1.0 / count),
        mean_square=mean_square / count,
    )


def _log_share(current: Array, reference: Array) -> Array:
    """Logarithm of a current over the reference current, in place [-]."""
    current /= reference
    np.maximum(current, LEAST_CURRENT_SHARE, out=current)
    return np.log(current, out=current)


def gate_drive_loss(device: Any, total_area: Array, frequency: Array) -> Array:
    """Power to drive the gates of one switch position [W]."""
    return device.gate_charge_c_per_m2 * total_area * device.gate_swing_v * frequency


def dead_time_loss(
    device: Any, mean_current: Array, mean_square: Array, diode_slope: Array, frequency: Array
) -> Array:
    """Extra loss of one leg while a unipolar part's diode carries the current in the dead times [W].

    Args:
        device: catalogue fields.
        mean_current: mean |i| [A].
        mean_square: mean square of i [A2].
        diode_slope: slope resistance of the diode [ohm].
        frequency: switching frequency [Hz].
    """
    share = 2.0 * device.dead_time_s * frequency
    drop = device.diode_threshold_25_v * mean_current + diode_slope * mean_square
    return np.where(device.shared_die, share * drop, 0.0)
