"""What a good study file becomes: SI units, defaults, the example studies, the time it takes."""

import hashlib
import math
import pickle
import subprocess
import sys
from pathlib import Path

import pytest

from models.specification import CALIFORNIAN_WEIGHTS, EUROPEAN_WEIGHTS, DesignRules
from optimizer.study.ranges import RANGES, SearchRange
from optimizer.study.schema import DEFAULT_CLASSES
from optimizer.study.study import Study

STUDIES = Path(__file__).parents[3] / "studies"
SHORTEST = """
name = "shortest"
[application]
kind = "grid-connected"
phases = 1
apparent_power = "5 kVA"
ac_voltage = "230 V"
line_frequency = "50 Hz"
dc_voltage = { min = "360 V", nominal = "400 V", max = "450 V" }
[bridge]
kind = "single-phase full bridge"
"""


@pytest.fixture
def read(tmp_path):
    def read_text(text):
        path = tmp_path / "study.toml"
        path.write_text(text, encoding="utf-8")
        return Study.read(path)

    return read_text


@pytest.mark.parametrize(
    ("name", "folder"),
    [
        ("rooftop 5 kW", "rooftop 5 kW"),
        ("../good", "_good"),
        ("</script><img onerror=alert(1)>", "_script_img onerror_alert_1_"),
        ("..", "study"),
        ("Müller 10 kVA", "Müller 10 kVA"),
    ],
)
def test_any_name_is_taken_and_makes_a_folder_s_name(tmp_path, name, folder):
    path = tmp_path / "study.toml"
    path.write_text(
        (STUDIES / "rooftop_5kw.toml").read_text().replace('name = "rooftop 5 kW"', f"name = '{name}'", 1)
    )
    study = Study.read(path)
    assert (study.name, study.folder_name) == (name, folder)


def test_defaults_of_the_shortest_study(read):
    study = read(SHORTEST)
    asked, search = study.specification, study.search
    assert (asked.power_factor_min, asked.ambient_c, asked.altitude_m) == (0.9, 40.0, 1000.0)
    assert (asked.phase_voltage_min_v, asked.phase_voltage_max_v) == pytest.approx((207.0, 253.0))
    assert asked.weights == EUROPEAN_WEIGHTS
    assert asked.rules == DesignRules()
    assert asked.limit_table == "IEEE 1547-2018"
    assert study.objectives == ("weighted loss", "volume", "price")
    assert search.modulations == ("bipolar", "unipolar", "one leg at line frequency")
    assert search.device_classes == DEFAULT_CLASSES
    assert (search.core_materials, search.conductors) == ((), ())
    assert search.ranges["switching_frequency"] == SearchRange(8e3, 200e3)
    assert set(search.ranges) == {entry.name for entry in RANGES}
    assert (study.description, study.catalog_files) == ("", ())


def test_every_default_range_lies_within_its_hard_bounds():
    for entry in RANGES:
        low, high = (entry.kind.read(end) for end in entry.default)
        assert entry.hard_bounds[0] <= low < high <= entry.hard_bounds[1]
        assert entry.meaning


def test_three_phase_voltage_is_line_to_line_in_the_file_and_per_phase_inside():
    asked = Study.read(STUDIES / "depot_10kw_three_phase.toml").specification
    assert asked.phase_voltage_v == pytest.approx(400.0 / math.sqrt(3.0))
    assert asked.phase_voltage_max_v == pytest.approx(440.0 / math.sqrt(3.0))
    assert asked.rated_current_a == pytest.approx(10e3 / (math.sqrt(3.0) * 400.0))
    assert asked.weights == {0.10: 0.05, 0.30: 0.15, 0.60: 0.30, 1.00: 0.50}


def test_stand_alone_study():
    study = Study.read(STUDIES / "backup_3kva.toml")
    asked = study.specification
    assert (asked.application, asked.rectifier_share, asked.crest_factor) == ("stand-alone", 1.0, 3.0)
    assert (asked.voltage_thd_limit_linear, asked.voltage_thd_limit_rectifier) == (0.03, 0.08)
    assert study.search.filter_kind == "LC"
    assert "grid_inductance_ratio" not in study.search.ranges


def test_rooftop_study():
    study = Study.read(STUDIES / "rooftop_5kw.toml")
    asked = study.specification
    assert (asked.apparent_power_va, asked.phases, asked.ambient_c, asked.altitude_m) == (
        5e3,
        1,
        45.0,
        1000.0,
    )
    assert (asked.dc_voltage_min_v, asked.dc_voltage_v, asked.dc_voltage_max_v) == (360.0, 400.0, 450.0)
    assert study.search.cooling == ("natural", "forced")


@pytest.mark.parametrize("path", sorted(STUDIES.glob("*.toml")), ids=lambda path: path.stem)
def test_example_studies_read_and_say_what_to_look_for(path):
    study = Study.read(path)
    text = path.read_text(encoding="utf-8")
    assert study.description
    assert "What to look for" in text
    assert "invented" in text


def test_values_of_a_study_reach_the_specification_in_si(read):
    study = read(
        SHORTEST.replace('"45 degC"', '"318.15 K"')
        + """modulations = ["unipolar", "bipolar"]
[weighting]
scheme = "californian"
[objectives]
minimise = ["mass", "distortion"]
[search]
device_classes = ["GaN HEMT"]
core_materials = ["some ferrite"]
population = 40
[search.ranges]
switching_frequency = { min = "20 kHz", max = "0.1 MHz" }
ripple = { max = "50 %" }
parallel = { min = 2, max = 2 }
[rules]
junction_margin = "25 K"
packing_factor = "60 %"
control_volume_base = "200 cm^3"
"""
    )
    rules = study.specification.rules
    assert (rules.junction_margin, rules.packing_factor) == (25.0, 0.6)
    assert rules.control_volume_base == pytest.approx(200e-6)
    assert rules.saturation_use == DesignRules().saturation_use
    assert study.specification.weights == CALIFORNIAN_WEIGHTS
    assert study.objectives == ("mass", "distortion")
    assert study.search.modulations == ("bipolar", "unipolar")  # in the bridge's order
    assert study.search.core_materials == ("some ferrite",)
    assert study.search.population == 40
    assert study.search.ranges["switching_frequency"] == SearchRange(20e3, 100e3)
    assert study.search.ranges["ripple"] == SearchRange(0.08, 0.5)
    assert study.search.ranges["parallel"] == SearchRange(2, 2)


def test_custom_weights_are_sorted_by_load_level(read):
    text = SHORTEST + '[weighting]\nscheme = "custom"\nlevels = ["100 %", 0.5]\nweights = [0.25, "75 %"]\n'
    assert list(read(text).specification.weights.items()) == [(0.5, 0.75), (1.0, 0.25)]


def test_weights_are_a_copy(read):
    read(SHORTEST).specification.weights.clear()
    assert EUROPEAN_WEIGHTS


def test_dc_voltage_that_just_reaches_the_ac_peak_is_enough(read):
    exact = math.sqrt(2.0) * 253.0
    assert read(SHORTEST.replace("360 V", f"{exact:.6f} V")).specification.dc_voltage_min_v < 357.8


def test_catalog_files_are_relative_to_the_study(read, tmp_path):
    (tmp_path / "mine").mkdir()
    (tmp_path / "mine" / "parts.toml").write_text("")
    study = read(SHORTEST + '[catalog]\nfiles = ["mine/parts.toml"]\n')
    assert study.catalog_files == (tmp_path / "mine" / "parts.toml",)


def test_file_hash_is_of_the_bytes(read):
    study = read(SHORTEST)
    assert study.file_hash == hashlib.sha256(study.path.read_bytes()).hexdigest()


def test_a_byte_order_mark_and_windows_line_ends_do_no_harm(tmp_path):
    path = tmp_path / "windows.toml"
    path.write_bytes(b"\xef\xbb\xbf" + SHORTEST.replace("\n", "\r\n").encode())
    assert Study.read(str(path)).name == "shortest"


def test_a_study_can_be_sent_to_another_process(read):
    study = read(SHORTEST)
    assert pickle.loads(pickle.dumps(study)) == study


def test_reading_takes_less_than_0_6_s_with_all_imports():
    script = (
        "import sys, time; start = time.process_time(); from optimizer.study.study import Study;"
        "Study.read(sys.argv[1]); print(time.process_time() - start)"
    )
    command = [sys.executable, "-c", script, str(STUDIES / "rooftop_5kw.toml")]
    runs = [
        subprocess.run(command, capture_output=True, text=True, check=True, cwd=STUDIES.parent).stdout
        for _ in range(3)
    ]
    assert min(map(float, runs)) < 0.6


def test_clamping_that_follows_the_current_is_searched_where_it_differs(read):
    three = SHORTEST.replace("phases = 1", "phases = 3").replace(
        "single-phase full", "three-phase six-switch"
    )
    three = three.replace('"360 V"', '"700 V"').replace('"400 V"', '"750 V"').replace('"450 V"', '"800 V"')
    following = "discontinuous following the current"
    assert following not in read(three).search.modulations
    assert following in read(three.replace("phases", "power_factor = 0.9\nphases")).search.modulations
    assert read(three + f'modulations = ["{following}"]').search.modulations == (following,)


@pytest.mark.parametrize("power", [1e3, 20e3, 250e3, 5e6])
def test_default_ranges_go_with_the_power_of_large_inverters(power):
    for entry in RANGES:
        low, high = entry.default_at(power)
        assert entry.hard_bounds[0] <= low < high <= entry.hard_bounds[1]
        small = tuple(entry.kind.read(end) for end in entry.default)
        assert power > 20e3 or (low, high) == small
    sink = next(entry for entry in RANGES if entry.name == "sink_resistance")
    # heat goes with the power, so that the same rise takes a resistance that goes with its inverse
    assert sink.default_at(200e3) == pytest.approx((0.005, 0.3))


def test_a_stated_range_stands_whatever_the_power(read):
    text = SHORTEST.replace('"5 kVA"', '"250 kVA"') + "[search.ranges]\nparallel = { max = 2 }\n"
    ranges = read(text).search.ranges
    assert ranges["parallel"] == SearchRange(1, 2)
    assert ranges["sink_resistance"].high < 0.5
