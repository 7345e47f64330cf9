"""A study beside the catalogue: every unknown name is reported with the nearest there is."""

import re
from dataclasses import replace
from pathlib import Path

import pytest

from models.catalog import load_catalog
from optimizer.errors import InputError
from optimizer.study import Study
from optimizer.study_schema import DC_LINKS, DEFAULT_CLASSES

STUDIES = Path(__file__).parents[2] / "studies"
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


def test_a_stand_alone_study_asks_for_no_limit_table(catalog):
    study = Study.read(STUDIES / "backup_3kva.toml")
    replace(study, specification=replace(study.specification, limit_table="none")).check_against(catalog)
