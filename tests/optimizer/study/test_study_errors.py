"""What a bad study file is told: the exact words for each kind of error, and all of them at once."""

import re
import tomllib
from pathlib import Path

import pytest

from models.specification import DesignRules
from optimizer.errors import InputError
from optimizer.study.schema import _RULES_THAT_MAY_BE_ZERO, _RULES_UP_TO_ONE
from optimizer.study.study import Study

SPOILED = tomllib.loads(Path(__file__).with_name("spoiled_studies.toml").read_text(encoding="utf-8"))
GOOD = SPOILED["good"]["single-phase"]
THREE_PHASE = SPOILED["good"]["three-phase"]
CASES = {case["kind"]: case for case in SPOILED["case"]}


@pytest.fixture
def problems(tmp_path):
    """Lines of the error of a text, each without the file's name, which is checked here."""

    def lines(text):
        path = tmp_path / "study.toml"
        path.write_bytes(text if isinstance(text, bytes) else text.encode())
        with pytest.raises(InputError, match=re.escape(f"{path}: ")) as caught:
            Study.read(path)
        found = str(caught.value).splitlines()
        assert all(line.startswith(f"{path}: ") for line in found)
        return [line.removeprefix(f"{path}: ") for line in found]

    return lines


@pytest.mark.parametrize("name", SPOILED["good"])
def test_the_studies_these_tests_spoil_are_good(name, tmp_path):
    path = tmp_path / "study.toml"
    path.write_text(SPOILED["good"][name])
    assert Study.read(path).name == "good"


def spoil(case):
    good = SPOILED["good"][case["good"]]
    assert good.count(case["old"]) == 1
    return good.replace(case["old"], case["new"])


@pytest.mark.parametrize("kind", CASES)
def test_each_error_says_key_given_and_expected_and_nothing_else_is_said(problems, kind):
    assert problems(spoil(CASES[kind])) == [CASES[kind]["line"]]


def test_every_kind_of_error_was_spoiled_once():
    assert len(CASES) == len(SPOILED["case"])


def test_all_errors_are_reported_at_once(problems):
    lines = problems("""name = ""
[application]
kind = "stand-alone"
phases = 3
apparent_power = "0 VA"
ac_voltage = "230 A"
line_frequency = "50 Hz"
dc_voltage = { min = "450 V", nominal = "400 V", max = "300 V" }
demand_current = "5 A"
[bridge]
kind = "single-phase full bridge"
[search]
populaton = 50
[search.ranges]
ripple = { min = 0.9 }
[rules]
packing_factor = "45 kg"
""")
    assert [line.split(":")[0] for line in lines] == [
        "name",
        "application.apparent_power",
        "application.ac_voltage",
        "search.populaton",
        "rules.packing_factor",
        "application.demand_current",
        "application.dc_voltage.nominal",
        "application.dc_voltage.max",
        "bridge.kind",
        "search.ranges.ripple",
    ]


def test_an_empty_file_is_told_all_that_is_required(problems):
    assert [line.split(":")[0] for line in problems("")] == [
        "name",
        "application.kind",
        "application.phases",
        "application.apparent_power",
        "application.ac_voltage",
        "application.line_frequency",
        "application.dc_voltage.min",
        "application.dc_voltage.nominal",
        "application.dc_voltage.max",
        "bridge.kind",
    ]


def test_a_table_that_is_none_is_one_problem(problems):
    text = 'name = "x"\napplication = 5\nbridge = "b"\n'
    assert problems(text) == [
        "application: given 5, expected a table",
        'bridge: given "b", expected a table',
    ]


def test_a_misspelt_modulation_does_not_raise_a_false_alarm_on_the_dc_voltage(problems):
    text = THREE_PHASE.replace("centred space vector", "centered space vector")
    assert [line.split(":")[0] for line in problems(text)] == ["bridge.modulations[1]"]


WHOLE_FILES = {
    "no TOML": (
        GOOD.replace("phases = 1", "phases = = 1"),
        "given text that is no TOML (Invalid value (at line 4, column 10)), expected a study file in TOML",
    ),
    "key twice": (
        GOOD.replace("phases = 1", "phases = 1\nphases = 1"),
        "given text that is no TOML (Cannot overwrite a value (at line 5, column 11)), "
        "expected a study file in TOML",
    ),
    "no text": (
        b"name = 'x'\n\xff\xfe\x00",
        "given bytes on line 2 that are no text, expected TOML in UTF-8",
    ),
    "binary": (b"\x7fELF\x00\x00", "given a binary file, expected TOML in UTF-8"),
    "too big": (
        b"#" * 2_000_000,
        'given a file of 2.0 MB, expected a study file (TOML text; "wattfront new" writes one to start from)',
    ),
}


@pytest.mark.parametrize(("text", "line"), WHOLE_FILES.values(), ids=WHOLE_FILES.keys())
def test_files_that_are_no_study_at_all(problems, text, line):
    assert problems(text) == [line]


def test_very_deep_nesting_is_refused_as_input(problems):
    assert problems("x = " + "[" * 100_000)[0].startswith("given text that is no TOML (")


@pytest.mark.parametrize(("name", "given"), [("missing.toml", "no such file"), ("folder", "a folder")])
def test_paths_that_lead_to_no_file(tmp_path, name, given):
    (tmp_path / "folder").mkdir()
    path = tmp_path / name
    line = (
        f'{path}: given {given}, expected a study file (TOML text; "wattfront new" writes one to start from)'
    )
    with pytest.raises(InputError, match=f"^{re.escape(line)}$"):
        Study.read(path)


def test_a_file_that_cannot_be_read(tmp_path, monkeypatch):
    path = tmp_path / "study.toml"
    path.write_text(GOOD)

    def refuse(self):
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr("pathlib.Path.read_bytes", refuse)
    line = f"{path}: given a file that cannot be read (Permission denied), expected a study file"
    with pytest.raises(InputError, match="^" + re.escape(line)):
        Study.read(path)


def test_bounds_of_rules_name_rules_there_are():
    assert set(DesignRules.__dataclass_fields__) >= _RULES_THAT_MAY_BE_ZERO | _RULES_UP_TO_ONE
