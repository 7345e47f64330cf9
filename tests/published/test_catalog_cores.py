"""Core materials and shapes of the catalogue against published and recalled points."""

from __future__ import annotations

import csv
import json
import math
import re
from typing import Any

import pytest
from catalog_rows import DATA, ROWS, assert_in, said

from models.catalog import load_catalog

CAT = load_catalog()
CHECKS = {check["id"]: check for check in json.loads((DATA / "checks.json").read_text(encoding="utf-8"))}


def material(name: str) -> Any:
    return CAT.core_materials[CAT.core_materials.index(name)]


F1 = "1 material: MnZn ferrite, 25..200 kHz grade"
F2 = "1 material: MnZn ferrite, 100..500 kHz grade"
F3 = "1 material: MnZn ferrite, 0.5..3 MHz grade"
SENDUST = "1 material: Fe-Si-Al powder (sendust)"


@pytest.mark.parametrize(
    ("name", "band", "group", "row", "frequency", "flux"),
    [
        ("MnZn ferrite 25-200 kHz", 0, F1, "loss density | 25 kHz, 0.2 T, 100 C", 25e3, 0.2),
        ("MnZn ferrite 25-200 kHz", 0, F1, "loss density | 100 kHz, 0.1 T, 100 C", 100e3, 0.1),
        ("MnZn ferrite 25-200 kHz", 0, F1, "loss density | 100 kHz, 0.2 T, 100 C", 100e3, 0.2),
        ("MnZn ferrite 100-500 kHz", 0, F2, "loss density | 100 kHz, 0.2 T, 100 C", 100e3, 0.2),
        ("MnZn ferrite 100-500 kHz", 1, F2, "loss density | 400 kHz, 0.05 T, 100 C", 400e3, 0.05),
        ("MnZn ferrite 100-500 kHz", 1, F2, "loss density | 500 kHz, 0.05 T, 100 C", 500e3, 0.05),
        ("MnZn ferrite 0.5-3 MHz", 0, F3, "loss density | 0.5 MHz, 50 mT, 100 C, typical", 0.5e6, 0.05),
        ("MnZn ferrite 0.5-3 MHz", 0, F3, "loss density | 1 MHz, 50 mT, 100 C, typical", 1e6, 0.05),
        ("MnZn ferrite 0.5-3 MHz", 1, F3, "loss density | 2 MHz, 30 mT, 100 C, typical", 2e6, 0.03),
        ("MnZn ferrite 0.5-3 MHz", 1, F3, "loss density | 3 MHz, 10 mT, 100 C, typical", 3e6, 0.01),
        ("MnZn ferrite 0.5-3 MHz", 1, F3, "loss density | 3 MHz, 30 mT, 100 C, typical", 3e6, 0.03),
        ("Fe-Si-Al powder mu 26", 0, SENDUST, "loss density, mu 26..40 | 100 kHz, 0.1 T", 100e3, 0.1),
        ("Fe-Si-Al powder mu 125", 0, SENDUST, "loss density, mu 60..125 | 100 kHz, 0.1 T", 100e3, 0.1),
        (
            "Fe-Si powder mu 60",
            0,
            "1 material: Fe-Si powder",
            "loss density, mu 60 | 100 kHz, 0.1 T",
            100e3,
            0.1,
        ),
        (
            "Ni-Fe powder mu 60",
            0,
            "1 material: Ni-Fe high-flux powder",
            "loss density, mu 60 | 100 kHz, 0.1 T",
            100e3,
            0.1,
        ),
        (
            "Mo-Ni-Fe powder mu 60",
            0,
            "1 material: Mo-Ni-Fe (MPP) powder",
            "loss density, mu 60 | 100 kHz, 0.1 T",
            100e3,
            0.1,
        ),
        (
            "iron powder mu 75",
            0,
            "1 material: iron powder",
            "loss density, mu 75, ordinary | 100 kHz, 0.1 T",
            100e3,
            0.1,
        ),
        (
            "iron powder mu 35",
            0,
            "1 material: iron powder",
            "loss density, mu 35 | 100 kHz, 0.1 T",
            100e3,
            0.1,
        ),
    ],
)
def test_core_loss_density(name: str, band: int, group: str, row: str, frequency: float, flux: float) -> None:
    part = material(name)
    law = part.steinmetz_k[band] * frequency ** part.steinmetz_alpha[band] * flux ** part.steinmetz_beta[band]
    assert_in(law, group, row)


@pytest.mark.parametrize(("flux", "printed"), [(1.3, 0.147), (1.4, 0.167)])
def test_amorphous_law_reproduces_its_loss_checks(flux: float, printed: float) -> None:
    part = material("amorphous tape 25 um")
    law = part.steinmetz_k[0] * 60.0 ** part.steinmetz_alpha[0] * flux ** part.steinmetz_beta[0]
    per_mass = law / part.density_kg_m3
    assert per_mass == pytest.approx(printed, rel=0.01)
    group = "1 material: iron-based amorphous tape, 25 um"
    row = next(
        r for (g, n), r in ROWS.items() if g == group and n.startswith(f"loss check | 60 Hz, {flux} T")
    )[0]
    assert row["low"] <= per_mass <= row["high"], said(row)


def test_nanocrystalline_loss_per_mass() -> None:
    part = material("nanocrystalline tape 20 um")
    law = part.steinmetz_k[0] * 100e3 ** part.steinmetz_alpha[0] * 0.3 ** part.steinmetz_beta[0]
    assert_in(
        law / part.density_kg_m3,
        "1 material: nanocrystalline tape, 18..20 um",
        "loss | 100 kHz, 0.3 T, uncut",
    )


@pytest.mark.parametrize("part", [p for p in CAT.core_materials if p.kind == "powder"], ids=lambda p: p.name)
def test_powder_permeability_at_the_80_percent_field(part: Any) -> None:
    """The law 1/(1 + (H/H_50)^c) gives 80 % at a field within its own row (from memory, catalogue curves)."""
    field = part.rolloff_field_a_per_m * (1.0 / 0.8 - 1.0) ** (1.0 / part.rolloff_exponent)
    groups = {
        "Fe-Si-Al": SENDUST,
        "Fe-Si": "1 material: Fe-Si powder",
        "Ni-Fe": "1 material: Ni-Fe high-flux powder",
        "Mo-Ni-Fe": "1 material: Mo-Ni-Fe (MPP) powder",
        "iron": "1 material: iron powder",
    }
    mu = int(part.initial_permeability)
    assert_in(
        field,
        groups[part.name.split(" powder")[0]],
        f"dc field for 80 % of initial permeability, mu {mu} | 25 C",
    )


@pytest.mark.parametrize(
    ("check", "size"),
    [
        ("MAG-EE-E42", "E42/21/15"),
        ("MAG-EE-E55", "E55/28/21"),
        ("MAG-ETD34", "ETD34/17/11"),
        ("MAG-ETD39", "ETD39/20/13"),
        ("MAG-ETD44", "ETD44/22/15"),
        ("MAG-ETD49", "ETD49/25/16"),
        ("MAG-PQ20_20", "PQ20/20"),
        ("MAG-PQ26_25", "PQ26/25"),
        ("MAG-PQ32_30", "PQ32/30"),
        ("MAG-PQ40_40", "PQ40/40"),
        ("MAG-PQ50_50", "PQ50/50"),
    ],
)
def test_core_sizes_against_the_published_checks(check: str, size: str) -> None:
    shape = CAT.core_shapes[CAT.core_shapes.index(size)]
    found = [shape.area_m2 * 1e6, shape.path_length_m * 1e3, shape.core_volume_m3 * 1e9]
    row = CHECKS[check]
    assert found == pytest.approx(row["expected"], rel=row["tolerance"]["rel"]), (
        f"{row['source']}, {row['status']}"
    )


@pytest.mark.parametrize(
    ("size", "breadth_mm"),
    [
        ("E65/32/27", 44.4),  # published window height of the set, as in the gapped-core checks (page)
        ("ETD39/20/13", 28.4),  # from memory
    ],
)
def test_derived_winding_breadth(size: str, breadth_mm: float) -> None:
    shape = CAT.core_shapes[CAT.core_shapes.index(size)]
    assert shape.window_breadth_m == pytest.approx(breadth_mm * 1e-3, rel=0.12)


@pytest.mark.parametrize("shape", [s for s in CAT.core_shapes if s.family == "cut C"], ids=lambda s: s.name)
def test_cut_core_proportions(shape: Any) -> None:
    """A_e = 0.82 a d within 3 % and l_e = 2 (b + c) + 4.25 a within 6 % (derived from 19 catalogue sizes)."""
    a, b, c, d = (float(x) * 1e-3 for x in re.findall(r"[\d.]+", shape.name))
    assert shape.area_m2 == pytest.approx(0.82 * a * d, rel=0.031)
    assert shape.path_length_m == pytest.approx(2.0 * (b + c) + 4.25 * a, rel=0.065)
    assert shape.window_area_m2 == pytest.approx(b * c)
    assert shape.core_volume_m3 == pytest.approx(shape.area_m2 * shape.path_length_m, rel=0.01)


THREE_LIMBS = [shape for shape in CAT.core_shapes if shape.family == "three-limb"]


@pytest.mark.parametrize("shape", THREE_LIMBS, ids=lambda s: s.name)
def test_three_limb_core_is_a_third_of_the_whole(shape: Any) -> None:
    """Drawn out: three limbs and two yokes of a x d, two windows of w x h; coils fill half a window
    either side of their limb and stand over on the outer limbs (geometry; iron 0.82 of the leg).
    """
    a, d, w, h = (float(x) * 1e-3 for x in re.findall(r"[\d.]+", shape.name))
    iron = a * d * (3.0 * h + 2.0 * (3.0 * a + 2.0 * w))
    assert 3.0 * shape.core_volume_m3 == pytest.approx(0.82 * iron, rel=2e-3)
    assert shape.area_m2 == pytest.approx(0.82 * a * d, rel=2e-3)
    assert 2.0 * shape.window_area_m2 == pytest.approx(w * h, rel=1e-6)  # two coils share a window
    outer = (3.0 * a + 2.0 * w + 2.0 * 0.5 * w) * (h + 2.0 * a) * (d + 2.0 * 0.5 * w)
    assert 3.0 * shape.box_volume_m3 == pytest.approx(outer, rel=2e-3)
    inner, outermost = 2.0 * (a + d), 2.0 * (a + d) + 2.0 * math.pi * 0.5 * w
    assert inner < shape.mean_turn_length_m - 8e-3 < outermost


def test_three_limbs_reach_from_a_few_hundred_watts_to_250_kilowatts() -> None:
    """Area product of a phase L I_peak I_rms/(k J B): 10 % reactance at 50 Hz, 1.3 T, 4 A/mm2, fill 0.35."""
    products = [shape.area_m2 * shape.window_area_m2 for shape in THREE_LIMBS]
    for power, end in ((500.0, min(products)), (250e3, max(products))):
        energy = 0.1 * power / 3.0 / (2.0 * math.pi * 50.0) * math.sqrt(2.0)  # L I_rms I_peak
        needed = energy / (1.3 * 4e6 * 0.35)
        assert end < needed if power < 1e3 else end > needed


def test_shapes_agree_with_the_shared_table_and_nothing_is_lost_unsaid() -> None:
    with (DATA / "core_shapes.csv").open(newline="", encoding="utf-8") as lines:
        rows = {row["size"]: row for row in csv.DictReader(lines)}
    left_out = {name for name in rows if name not in CAT.core_shapes.names}
    only_bobbin = {name for name, row in rows.items() if row["family"] == "EC/EER"}
    no_window = {
        name for name, row in rows.items() if not row["window_area_mm2"] and not row["bobbin_window_mm2"]
    }
    assert left_out == (only_bobbin | no_window) - {"PQ50/35"}
    for shape in CAT.core_shapes:
        if shape in THREE_LIMBS:
            continue
        row = rows[shape.name]
        assert shape.area_m2 == pytest.approx(float(row["A_e_mm2"]) * 1e-6)
        assert shape.core_volume_m3 == pytest.approx(float(row["V_e_mm3"]) * 1e-9)
        if row["window_area_mm2"]:
            assert shape.window_area_m2 == pytest.approx(float(row["window_area_mm2"]) * 1e-6)
            assert shape.mean_turn_length_m == pytest.approx(float(row["mean_turn_length_mm"]) * 1e-3)


def test_every_shape_is_a_possible_core() -> None:
    """Volume near area times length; the wound box holds the core; turns go round the leg."""
    for shape in CAT.core_shapes:
        assert shape.core_volume_m3 == pytest.approx(shape.area_m2 * shape.path_length_m, rel=0.06), (
            shape.name
        )
        assert shape.box_volume_m3 > shape.core_volume_m3, shape.name
        assert shape.mean_turn_length_m > 2.0 * math.sqrt(math.pi * shape.area_m2), shape.name
        assert (shape.stackable or shape in THREE_LIMBS) == (shape.stack_depth_m > 0.0), shape.name


def test_typical_ferrite_loss_lies_below_a_guaranteed_maximum() -> None:
    """100 kHz, 0.1 T, 100 C: greatest loss of the E65/32/27 set over its volume, an upper bound (page)."""
    bounds = [
        c for c in CHECKS.values() if c["unit"].startswith("kW/m3") and c["inputs"].get("Ve_mm3") == 78650
    ]
    assert len(bounds) == 1
    for name in ("MnZn ferrite 25-200 kHz", "MnZn ferrite 100-500 kHz"):
        part = material(name)
        law = part.steinmetz_k[0] * 100e3 ** part.steinmetz_alpha[0] * 0.1 ** part.steinmetz_beta[0]
        assert law < bounds[0]["expected"] * 1e3, name
