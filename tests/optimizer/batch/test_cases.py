"""Lists in a study file: every combination a case, and nothing else taken for a list of cases."""

import re

import pytest

from optimizer.batch.cases import read_cases
from optimizer.errors import InputError
from optimizer.study.study import Study

STUDY = """
name = "many"
[application]
kind = "grid-connected"
phases = 1
apparent_power = ["3 kVA", "4 kVA", "5 kVA", "6 kVA"]
ac_voltage = "230 V"
line_frequency = "50 Hz"
ambient = ["40 degC", "60 degC"]
dc_voltage = [
  { min = "360 V", nominal = "390 V", max = "430 V" },
  { min = "360 V", nominal = "400 V", max = "440 V" },
  { min = "370 V", nominal = "410 V", max = "450 V" },
]
[bridge]
kind = "single-phase full bridge"
[search]
device_classes = ["SiC MOSFET", "GaN HEMT"]
"""


def written(folder, text=STUDY):
    path = folder / "many.toml"
    path.write_text(text, encoding="utf-8")
    return path


def test_every_combination_once(tmp_path):
    """Three dc voltages, two ambients, four powers: 24 cases."""
    cases = read_cases(written(tmp_path))
    assert len(cases) == 24
    found = {
        (
            case.study.specification.apparent_power_va,
            case.study.specification.ambient_c,
            case.study.specification.dc_voltage_v,
        )
        for case in cases
    }
    assert found == {
        (1e3 * power, ambient, volts)
        for power in (3, 4, 5, 6)
        for ambient in (40.0, 60.0)
        for volts in (390.0, 400.0, 410.0)
    }
    assert len({case.name for case in cases}) == len({case.folder for case in cases}) == 24
    assert all(re.fullmatch(r"[A-Za-z0-9._+-]+", case.folder) for case in cases)
    assert len({case.study.file_hash for case in cases}) == 24


def test_a_case_is_the_study_written_out(tmp_path):
    last = read_cases(written(tmp_path))[-1]
    text = STUDY.replace('["3 kVA", "4 kVA", "5 kVA", "6 kVA"]', '"6 kVA"')
    text = text.replace('["40 degC", "60 degC"]', '"60 degC"')
    text = re.sub(
        r"dc_voltage = \[.*?\]", 'dc_voltage = {min="370 V",nominal="410 V",max="450 V"}', text, flags=re.S
    )
    alone = Study.read(written(tmp_path, text))
    assert last.study.specification == alone.specification
    assert last.study.search == alone.search


def test_a_study_without_lists_is_one_case_without_a_name(rooftop):
    (case,) = read_cases(rooftop.path)
    assert (case.name, case.folder, dict(case.values)) == ("", "", {})
    assert case.study == rooftop


@pytest.mark.parametrize(
    ("old", "new", "told"),
    [
        ('["40 degC", "60 degC"]', "[]", "application.ambient: given an empty list"),
        ('["40 degC", "60 degC"]', '["40 degC", "40 degC"]', "application.ambient[1]: given '40 degC' twice"),
        ('["40 degC", "60 degC"]', '["40 degC", "60 kg"]', "application.ambient"),
        ('["40 degC", "60 degC"]', "[" + ",".join(f'"{n} degC"' for n in range(1, 50)) + "]", "at most 500"),
    ],
)
def test_lists_in_trouble_are_told(tmp_path, old, new, told):
    with pytest.raises(InputError) as trouble:
        read_cases(written(tmp_path, STUDY.replace(old, new)))
    assert told.replace("'", '"') in str(trouble.value).replace("'", '"')
