"""Rules from data-sheet quantities to the fields of a semiconductor class (area-specific values).

Names ending in `_25` hold at 25 C, `_hot` at the device's hot temperature. "Sheet" is the one part a data
sheet describes; its die area, rarely printed, follows from its on-resistance or rated current when the part
is based on a class.
"""

from __future__ import annotations

from models.catalog.derivations import Rule
from models.catalog.parts import Device


def _at_hot(energy_25: float, coefficient: float, hot_c: float) -> float:
    """Hot value whose linear law E = E_hot [1 - k (T_hot - T)] passes through the value at 25 C."""
    return energy_25 / (1.0 - coefficient * (hot_c - 25.0))


def _energy_rules(name: str) -> list[Rule]:
    """Switching energy per ampere and volt, hot."""
    target = f"{name}_energy_j_per_av"
    cold = f"{name}_energy_25_j_per_av"
    hot = (f"{name}_temperature_coefficient_per_k", "energy_hot_c")
    return [
        Rule(target, (cold, *hot), _at_hot, "25 C value over 1 - k (T_hot - 25 C)"),
        Rule(
            target,
            (f"sheet_{name}_energy_j", "sheet_rated_current_a", "energy_reference_voltage_v"),
            lambda e, i, v: e / (i * v),
            "sheet energy over rated current and reference voltage",
        ),
        Rule(
            cold,
            (f"sheet_{name}_energy_25_j", "sheet_rated_current_a", "energy_reference_voltage_v"),
            lambda e, i, v: e / (i * v),
            "sheet energy over rated current and reference voltage",
        ),
    ]


def _slope_rules(temperature: str) -> list[Rule]:
    """Slopes of switch and diode from their voltage drops."""
    saturation, threshold = f"saturation_{temperature}_v", f"threshold_{temperature}_v"
    forward, knee = f"diode_forward_{temperature}_v", f"diode_threshold_{temperature}_v"
    density, share = "reference_current_density_a_per_m2", "diode_area_share"
    return [
        Rule(
            f"slope_area_{temperature}_ohm_m2",
            (saturation, threshold, density),
            lambda v, v0, j: (v - v0) / j,
            "(saturation voltage - threshold) over rated current density",
        ),
        Rule(
            f"diode_slope_area_{temperature}_ohm_m2",
            (forward, knee, density, share, "diode_forward_current_share"),
            lambda v, v0, j, area_share, current_share: (v - v0) * area_share / (j * current_share),
            "(forward voltage - threshold) over the diode's current density",
        ),
    ]


_DIE = "sheet_die_area_m2"

# Parts that live with a choke, a clamp or a snubber: the losses of these are counted with the switch.
_CIRCUIT_RULES = [
    Rule(
        "turn_on_energy_j_per_av",
        (
            "bare_turn_on_energy_j_per_av",
            "snubber_energy_j",
            "sheet_rated_current_a",
            "energy_reference_voltage_v",
        ),
        lambda e, snubber, i, v: e + snubber / (i * v),
        "of the switch alone, and the snubber's energy over rated current and reference voltage",
    ),
    Rule(
        "turn_off_energy_j_per_av",
        ("bare_turn_off_energy_j_per_av", "clamp_loss_ratio"),
        lambda e, ratio: e * (1.0 + ratio),
        "of the switch alone, and the loss of clamp and choke as a share of it",
    ),
]

_CLASS_RULES = [
    *_slope_rules("25"),
    *_slope_rules("hot"),
    Rule(
        "slope_area_hot_ohm_m2",
        ("slope_area_25_ohm_m2", "resistance_ratio_hot"),
        lambda r, ratio: r * ratio,
        "25 C value times the hot to cold ratio",
    ),
    *_energy_rules("turn_on"),
    *_energy_rules("turn_off"),
    *_energy_rules("recovery"),
    Rule(
        "turn_on_energy_j_per_av",
        ("switching_energy_j_per_av", "turn_on_share"),
        lambda e, share: e * share,
        "share of the energy of turn-on and turn-off together",
    ),
    Rule(
        "turn_off_energy_j_per_av",
        ("switching_energy_j_per_av", "turn_on_share"),
        lambda e, share: e * (1.0 - share),
        "rest of the energy of turn-on and turn-off together",
    ),
    *_CIRCUIT_RULES,
    Rule(
        "turn_on_energy_j_per_av",
        ("overlap_energy_j_per_av",),
        lambda e: 0.5 * e,
        "half of the overlap energy",
    ),
    Rule(
        "turn_off_energy_j_per_av",
        ("overlap_energy_j_per_av",),
        lambda e: 0.5 * e,
        "half of the overlap energy",
    ),
    Rule(
        "recovery_energy_25_j_per_av",
        ("recovery_charge_25_c_per_a",),
        lambda q: q,
        "recovered charge per ampere times voltage",
    ),
    Rule(
        "output_charge_c_per_m2",
        ("resistance_output_charge_ohm_c", "slope_area_25_ohm_m2"),
        lambda rq, r: rq / r,
        "R_on x Q_oss over R_on x A",
    ),
    Rule(
        "output_energy_j_per_m2",
        ("resistance_output_energy_ohm_j", "slope_area_25_ohm_m2"),
        lambda re, r: re / r,
        "R_on x E_oss over R_on x A",
    ),
    Rule(
        "gate_charge_c_per_m2",
        ("resistance_gate_charge_ohm_c", "slope_area_25_ohm_m2"),
        lambda rq, r: rq / r,
        "R_on x Q_g over R_on x A",
    ),
    Rule(
        "gate_charge_c_per_m2",
        ("gate_charge_c_per_a", "reference_current_density_a_per_m2"),
        lambda q, j: q * j,
        "gate charge per ampere times rated current density",
    ),
    Rule(
        "gate_swing_v",
        ("gate_on_v", "gate_off_v"),
        lambda on, off: on - off,
        "on minus off gate voltage",
    ),
    Rule(
        "packaged_price_per_area_per_m2",
        ("price_per_ampere", "reference_current_density_a_per_m2"),
        lambda price, j: price * j,
        "price per rated ampere times rated current density",
    ),
    Rule(
        "packaged_price_per_area_per_m2",
        ("price_on_resistance_ohm", "slope_area_25_ohm_m2"),
        lambda price, r: price / r,
        "price times on-resistance over R_on x A",
    ),
    Rule(
        "price_per_area_per_m2",
        ("packaged_price_per_area_per_m2", "package_price", "junction_case_reference_area_m2"),
        lambda price, package, area: price - package / area,
        "packaged price per die area less the package's share at the reference area",
    ),
    Rule(
        "gate_unit_power_w",
        (),
        lambda: Device.gate_unit_power_w,
        "gate drive takes charge per cycle only",
        last_resort=True,
    ),
    *(
        Rule(
            f"{name}_constant_share",
            (),
            lambda: 0.0,
            "a power of the current alone",
            last_resort=True,
        )
        for name in ("turn_on", "turn_off", "recovery")
    ),
    Rule(
        "greatest_switching_frequency_hz",
        (),
        lambda: Device.greatest_switching_frequency_hz,
        "no limit of its own, losses and dead time decide",
        last_resort=True,
    ),
]

_SHEET_RULES = [
    Rule(
        _DIE,
        ("slope_area_25_ohm_m2", "sheet_on_resistance_25_ohm"),
        lambda ra, r: ra / r,
        "the class's R_on x A over the sheet's on-resistance",
    ),
    Rule(
        _DIE,
        ("sheet_rated_current_a", "reference_current_density_a_per_m2"),
        lambda i, j: i / j,
        "the sheet's rated current over the class's current density",
    ),
    Rule(
        "slope_area_25_ohm_m2",
        ("sheet_on_resistance_25_ohm", _DIE),
        lambda r, area: r * area,
        "sheet on-resistance times die area",
    ),
    Rule(
        "reference_current_density_a_per_m2",
        ("sheet_rated_current_a", _DIE),
        lambda i, area: i / area,
        "sheet rated current over die area",
    ),
    *(
        Rule(
            f"slope_area_{temperature}_ohm_m2",
            (f"sheet_slope_{temperature}_ohm", _DIE),
            lambda r, area: r * area,
            "slope resistance times die area",
        )
        for temperature in ("25", "hot")
    ),
    *(
        Rule(
            f"diode_slope_area_{temperature}_ohm_m2",
            (f"sheet_diode_slope_{temperature}_ohm", _DIE, "diode_area_share"),
            lambda r, area, share: r * area * share,
            "slope resistance times the diode's die area",
        )
        for temperature in ("25", "hot")
    ),
    *(
        Rule(f"die_area_{end}_m2", (_DIE,), lambda area: area, "a data sheet's part has one size")
        for end in ("min", "max")
    ),
    Rule(
        "diode_junction_case_factor",
        (
            "sheet_diode_junction_case_k_per_w",
            "sheet_junction_case_k_per_w",
            "diode_area_share",
            "junction_case_exponent",
        ),
        lambda diode, switch, share, exponent: diode / switch * share**exponent,
        "sheet thermal resistances, brought to equal die area",
    ),
    Rule("output_charge_c_per_m2", ("sheet_output_charge_c", _DIE), lambda q, a: q / a, "over die area"),
    Rule("output_energy_j_per_m2", ("sheet_output_energy_j", _DIE), lambda e, a: e / a, "over die area"),
    Rule("gate_charge_c_per_m2", ("sheet_gate_charge_c", _DIE), lambda q, a: q / a, "over die area"),
    Rule(
        "junction_case_k_m2_per_w",
        ("sheet_junction_case_k_per_w", _DIE),
        lambda r, a: r * a,
        "sheet thermal resistance times die area",
    ),
    Rule(
        "junction_case_reference_area_m2",
        ("sheet_junction_case_k_per_w", _DIE),
        lambda r, a: a,
        "die area of the sheet's part",
    ),
    Rule(
        "price_per_area_per_m2",
        ("sheet_price", "package_price", _DIE),
        lambda price, package, area: (price - package) / area,
        "price less package over die area",
    ),
]

_ANCHORS = (
    "energy_reference_voltage_v",
    "energy_hot_c",
    "turn_on_temperature_coefficient_per_k",
    "turn_off_temperature_coefficient_per_k",
    "recovery_temperature_coefficient_per_k",
    "resistance_ratio_hot",
    "package_price",
    "diode_area_share",
    "diode_forward_current_share",
    "threshold_25_v",
    "threshold_hot_v",
    "diode_threshold_25_v",
    "diode_threshold_hot_v",
)


def device_anchors(shared_die: bool) -> tuple[str, ...]:
    """Quantities a sheet's part takes from its class before all others.

    A unipolar part gets its die area from on-resistance times area, never from its rated current, which is
    a matter of marketing; an IGBT has nothing better than the rated current density.
    """
    scale = ("slope_area_25_ohm_m2", "reference_current_density_a_per_m2")
    return (*_ANCHORS, *(scale if shared_die else scale[::-1]))


DEVICE_RULES: tuple[Rule, ...] = (*_SHEET_RULES, *_CLASS_RULES)
