"""Rules from capacitor-sheet quantities to the fields of a dc-link capacitor."""

from __future__ import annotations

from math import pi

from models.catalog.derivations import Rule

_LOW_FREQUENCY_HZ = 100.0

DC_LINK_RULES: tuple[Rule, ...] = (
    Rule(
        "unit_volume_m3",
        ("can_diameter_m", "can_height_m"),
        lambda diameter, height: diameter**2 * height,
        "square box around the can",
    ),
    Rule(
        "unit_volume_m3",
        ("unit_capacitance_f", "voltage_rating_v", "energy_density_j_per_m3"),
        lambda c, v, w: 0.5 * c * v**2 / w,
        "energy at rated voltage over energy density",
    ),
    Rule(
        "unit_ripple_a",
        ("unit_capacitance_f", "ripple_per_capacitance_a_per_f"),
        lambda c, ripple: c * ripple,
        "ripple current per capacitance times capacitance",
    ),
    Rule(
        "unit_esr_low_ohm",
        ("loss_tangent_100hz", "unit_capacitance_f", "esr_share_hot"),
        lambda tangent, c, hot: hot * tangent / (2.0 * pi * _LOW_FREQUENCY_HZ * c),
        "tan delta / (2 pi 100 Hz C) at 20 C times the share left at working temperature",
    ),
    Rule(
        "unit_esr_high_ohm",
        ("unit_esr_low_ohm", "esr_share_high_frequency"),
        lambda low, share: low * share,
        "100 Hz value times the share left at 10 kHz and above",
    ),
    Rule(
        "unit_esr_low_ohm",
        ("dielectric_loss_tangent", "unit_capacitance_f", "unit_esr_high_ohm"),
        lambda tangent, c, high: high + tangent / (2.0 * pi * _LOW_FREQUENCY_HZ * c),
        "10 kHz value plus dielectric loss tan delta / (2 pi 100 Hz C)",
    ),
    Rule(
        "unit_price",
        ("price_per_energy", "unit_capacitance_f", "voltage_rating_v"),
        lambda price, c, v: price * 0.5 * c * v**2,
        "price per stored energy times energy at rated voltage",
    ),
)
