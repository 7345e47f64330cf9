"""Units at the end of a catalogue key, and the factor that brings them to SI."""

from __future__ import annotations

from collections.abc import Iterable

# Unit at the end of a TOML key -> (unit at the end of the field's name, factor to it).
# "c" is both degree Celsius and coulomb; both keep the factor 1.
KEY_UNITS: dict[str, tuple[str, float]] = {
    "m": ("m", 1.0), "mm": ("m", 1e-3), "um": ("m", 1e-6),
    "m2": ("m2", 1.0), "cm2": ("m2", 1e-4), "mm2": ("m2", 1e-6),
    "m3": ("m3", 1.0), "dm3": ("m3", 1e-3), "cm3": ("m3", 1e-6), "mm3": ("m3", 1e-9),
    "s": ("s", 1.0), "us": ("s", 1e-6), "ns": ("s", 1e-9),
    "h": ("h", 1.0), "hz": ("hz", 1.0), "khz": ("hz", 1e3), "mhz": ("hz", 1e6),
    "v": ("v", 1.0), "kv": ("v", 1e3), "v_ac": ("v_ac", 1.0),
    "a": ("a", 1.0), "ma": ("a", 1e-3), "va": ("va", 1.0), "kva": ("va", 1e3),
    "w": ("w", 1.0), "mw": ("w", 1e-3), "j": ("j", 1.0), "mj": ("j", 1e-3), "uj": ("j", 1e-6),
    "nj": ("j", 1e-9),
    "c": ("c", 1.0), "uc": ("c", 1e-6), "nc": ("c", 1e-9),
    "f": ("f", 1.0), "uf": ("f", 1e-6), "nf": ("f", 1e-9), "pf": ("f", 1e-12),
    "ohm": ("ohm", 1.0), "mohm": ("ohm", 1e-3), "pa": ("pa", 1.0),
    "t": ("t", 1.0), "mt": ("t", 1e-3),
    "ohm_m2": ("ohm_m2", 1.0), "ohm_mm2": ("ohm_m2", 1e-6), "mohm_cm2": ("ohm_m2", 1e-7),
    "ohm_c": ("ohm_c", 1.0), "mohm_nc": ("ohm_c", 1e-12),
    "ohm_j": ("ohm_j", 1.0), "mohm_uj": ("ohm_j", 1e-9),
    "a_per_m2": ("a_per_m2", 1.0), "a_per_mm2": ("a_per_m2", 1e6),
    "a_per_m": ("a_per_m", 1.0), "ka_per_m": ("a_per_m", 1e3),
    "c_per_m2": ("c_per_m2", 1.0), "nc_per_mm2": ("c_per_m2", 1e-3), "nc_per_cm2": ("c_per_m2", 1e-5),
    "j_per_m2": ("j_per_m2", 1.0), "uj_per_cm2": ("j_per_m2", 1e-2), "uj_per_mm2": ("j_per_m2", 1.0),
    "c_per_a": ("c_per_a", 1.0), "uc_per_a": ("c_per_a", 1e-6), "nc_per_a": ("c_per_a", 1e-9),
    "j_per_av": ("j_per_av", 1.0), "nj_per_av": ("j_per_av", 1e-9),
    "per_k": ("per_k", 1.0), "k_per_w": ("k_per_w", 1.0), "k_per_kw": ("k_per_w", 1e-3),
    "k_m2_per_w": ("k_m2_per_w", 1.0), "k_mm2_per_w": ("k_m2_per_w", 1e-6),
    "kg_m3": ("kg_m3", 1.0), "g_cm3": ("kg_m3", 1e3),
    "w_per_m3": ("w_per_m3", 1.0), "kw_per_m3": ("w_per_m3", 1e3), "w_per_kg": ("w_per_kg", 1.0),
    "m3_per_s": ("m3_per_s", 1.0), "m3_per_h": ("m3_per_s", 1.0 / 3600.0),
    "m3_per_f": ("m3_per_f", 1.0), "cm3_per_uf": ("m3_per_f", 1.0),
    "a_per_f": ("a_per_f", 1.0), "a_per_uf": ("a_per_f", 1e6), "ma_per_uf": ("a_per_f", 1e3),
    "j_per_m3": ("j_per_m3", 1.0), "j_per_cm3": ("j_per_m3", 1e6),
    "per_f": ("per_f", 1.0), "per_uf": ("per_f", 1e6),
    "per_m2": ("per_m2", 1.0), "per_mm2": ("per_m2", 1e6), "per_kg": ("per_kg", 1.0),
}  # fmt: skip

_SI_UNITS = sorted({si for si, _ in KEY_UNITS.values()}, key=len, reverse=True)


def si_unit_of(quantity: str) -> str:
    """SI unit at the end of a quantity's name, the longest that fits; "" for a bare number [-]."""
    return next((unit for unit in _SI_UNITS if quantity.endswith(f"_{unit}")), "")


def accepted_keys(quantities: Iterable[str]) -> dict[str, tuple[str, float]]:
    """Every key that names one of the quantities, in any unit known for it.

    Returns
    -------
    keys : key -> (quantity, factor from the key's unit to SI) [-]
    """
    keys: dict[str, tuple[str, float]] = {}
    for quantity in quantities:
        si = si_unit_of(quantity)
        keys[quantity] = (quantity, 1.0)
        if not si:
            continue
        stem = quantity.removesuffix(si)
        for unit, (target, factor) in KEY_UNITS.items():
            if target == si:
                keys[stem + unit] = (quantity, factor)
    return keys
