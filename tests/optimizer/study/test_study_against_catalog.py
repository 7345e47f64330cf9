"""A study beside the catalogue: every unknown name is reported with the nearest there is."""

import re
from dataclasses import replace
from pathlib import Path

import pytest

from models.catalog import load_catalog
from optimizer.errors import InputError
from optimizer.study.schema import DC_LINKS, DEFAULT_CLASSES
from optimizer.study.study import Study

STUDIES = Path(__file__).parents[3] / "studies"
ROOFTOP = STUDIES / "rooftop_5kw.toml"


@pytest.fixture(scope="module")
def catalog():
    return load_catalog()


@pytest.mark.parametrize("path", sorted(STUDIES.glob("*.toml")), ids=lambda path: path.stem)
def test_the_catalogue_has_all_that_the_example_studies_ask_for(path, catalog):
    Study.read(path).check_against(catalog)


def test_every_part_of_the_catalogue_can_be_asked_for(catalog):
    study = Study.read(ROOFTOP)
    search = replace(
        study.search,
        core_materials=catalog.core_materials.names,
        conductors=catalog.conductors.names,
        device_classes=DEFAULT_CLASSES,
        dc_links=DC_LINKS,
    )
    replace(study, search=search).check_against(catalog)


def test_unknown_names_are_all_reported_with_the_nearest(catalog):
    material, conductor = catalog.core_materials.names[-1], catalog.conductors.names[0]
    study = Study.read(ROOFTOP)
    search = replace(
        study.search,
        device_classes=("SiC MOSFET", "SiC MOSFETT"),
        core_materials=(material, material.upper() + "x"),
        conductors=("zzzzzzzz",),
    )
    asked = replace(study.specification, limit_table="IEEE 1547-2018 ")
    with pytest.raises(InputError) as caught:
        replace(study, search=search, specification=asked).check_against(catalog)
    lines = [line.removeprefix(f"{ROOFTOP}: ") for line in str(caught.value).splitlines()]
    assert lines[0] == (
        'search.device_classes[1]: given "SiC MOSFETT", '
        'expected a name in the catalogue (nearest: "SiC MOSFET")'
    )
    assert lines[1] == (
        f'search.core_materials[1]: given "{material.upper()}x", '
        f'expected a name in the catalogue (nearest: "{material}")'
    )
    assert re.match(
        r'search\.conductors\[0\]: given "zzzzzzzz", expected a name in the catalogue: one of .*'
        + re.escape(conductor),
        lines[2],
    )
    assert lines[3] == (
        'application.harmonic_limits: given "IEEE 1547-2018 ", '
        'expected a name in the catalogue (nearest: "IEEE 1547-2018")'
    )
    assert len(lines) == 4


LIMITS = [
    (
        "rooftop_5kw",
        {"limit_table": "EN 50160 supply voltage"},
        "limits of the current; these are limits of the voltage",
    ),
    (
        "backup_3kva",
        {"limit_table": "IEEE 1547-2018"},
        "limits of the voltage; these are limits of the current",
    ),
    (
        "rooftop_5kw",
        {"limit_table": "IEC 61000-3-2 class A"},
        "limits for 21.7 A a phase; these are for up to 16 A",
    ),
    (
        "rooftop_5kw",
        {"limit_table": "IEC 61000-3-12 balanced three-phase Rsce 33"},
        "limits for phases = 1; these are for 3",
    ),
    (
        "rooftop_5kw",
        {
            "limit_table": "IEEE 519-2022 Isc/IL below 20",
            "short_circuit_ratio_min": 30.0,
            "short_circuit_ratio_max": 60.0,
        },
        "limits for a short-circuit ratio above 30 up to 60; these are for up to 20",
    ),
    (
        "rooftop_5kw",
        {"emission_limit": "CISPR 11 class A above 20 kVA"},
        "a limit for 5 kVA; this one is for above 20 kVA",
    ),
    (
        "rooftop_5kw",
        {"emission_limit": "CISPR 11 class C"},
        'expected a name in the catalogue (nearest: "CISPR 11 class B")',
    ),
]  # fmt: skip


@pytest.mark.parametrize(("name", "changed", "words"), LIMITS)
def test_limits_made_for_something_else(catalog, name, changed, words):
    study = Study.read(STUDIES / f"{name}.toml")
    other = replace(study, specification=replace(study.specification, **changed))
    with pytest.raises(InputError) as told:
        other.check_against(catalog)
    assert words in str(told.value)


def test_limits_that_fit(catalog):
    for name in ("rooftop_5kw", "depot_10kw_three_phase", "backup_3kva"):
        Study.read(STUDIES / f"{name}.toml").check_against(catalog)


def test_core_families(catalog):
    study = Study.read(ROOFTOP)

    def asked(**changes):
        replace(study, search=replace(study.search, **changes)).check_against(catalog)

    asked(core_families=("toroid powder", "E"))
    with pytest.raises(InputError, match=r'core_families\[0\]: given "three-limb", expected a name in the'):
        asked(core_families=("three-limb",))  # for three phases only
    with pytest.raises(InputError, match="expected a family that search.core_materials are sold in: .*cut C"):
        asked(core_families=("E",), core_materials=("amorphous tape 25 um",))
