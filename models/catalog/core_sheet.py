"""Rules from material-sheet quantities to the fields of a core material."""

from __future__ import annotations

from models.catalog.derivations import Rule

# Iron share of the amorphous cut cores whose areas the shape table lists.
LISTED_CUT_CORE_STACKING = 0.82
LINE_FREQUENCY_HZ = 50.0


def _line_loss_by_steinmetz(k: tuple[float, ...], alpha: tuple[float, ...]) -> float:
    """k f^alpha B^beta of the lowest band, carried on to 50 Hz and 1 T."""
    return float(k[0] * LINE_FREQUENCY_HZ ** alpha[0])


CORE_MATERIAL_RULES: tuple[Rule, ...] = (
    Rule(
        "steinmetz_k",
        ("steinmetz_k_per_kg_and_khz", "steinmetz_alpha", "density_kg_m3"),
        lambda k, alpha, density: tuple(a * density / 1000.0**b for a, b in zip(k, alpha, strict=True)),
        "coefficient in W/kg and kHz times density over 1000^alpha",
    ),
    Rule(
        "line_loss_w_per_m3",
        ("line_loss_w_per_kg", "density_kg_m3"),
        lambda loss, density: loss * density,
        "loss per mass times density",
    ),
    Rule(
        "line_loss_w_per_m3",
        ("steinmetz_k", "steinmetz_alpha"),
        _line_loss_by_steinmetz,
        "extrapolated, Steinmetz law of the lowest band carried on to 50 Hz",
        last_resort=True,
    ),
    Rule(
        "price_per_kg",
        ("strip_price_per_kg", "cut_core_price_factor"),
        lambda strip, factor: strip * factor,
        "strip price times the factor of the finished cut core",
    ),
    Rule(
        "area_factor",
        ("stacking_factor",),
        lambda stacking: stacking / LISTED_CUT_CORE_STACKING,
        "stacking factor over the 0.82 of the listed amorphous cores",
    ),
)
