"""The commands as a user meets them: exit codes, messages, and nothing half-written."""

import gzip
import json
import subprocess
import sys
from pathlib import Path

import pandas as pd
import pytest

ROOT = Path(__file__).parents[2]
ROOFTOP = ROOT / "studies" / "rooftop_5kw.toml"


def wattfront(*words, cwd):
    command = [sys.executable, "-m", "optimizer.cli", *map(str, words)]
    environment = {"PYTHONPATH": str(ROOT), "PATH": "/usr/bin:/bin", "COLUMNS": "160"}
    return subprocess.run(command, cwd=cwd, env=environment, capture_output=True, text=True, check=False)


@pytest.fixture(scope="module")
def run(tmp_path_factory):
    folder = tmp_path_factory.mktemp("cli")
    done = wattfront(
        "search", ROOFTOP, "--run", folder / "run", "--population", 40, "--generations", 30, cwd=folder
    )
    assert done.returncode == 0, done.stderr
    return folder / "run", done


def test_search_writes_the_promised_files(run):
    folder, done = run
    assert {path.name for path in folder.iterdir()} == {
        "front.csv", "margins.csv",
        "binding.csv", "evaluated.csv.gz", "points.npz",
        "dashboard.html", "run.json", "study.toml",
    }  # fmt: skip
    assert (folder / "study.toml").read_bytes() == ROOFTOP.read_bytes()
    assert "dashboard.html" in done.stdout
    assert "Traceback" not in done.stderr


def test_run_json_says_what_was_done(run):
    folder, _ = run
    content = json.loads((folder / "run.json").read_text())
    assert content["study"]["name"] == "rooftop 5 kW"
    assert len(content["study"]["hash"]) == 64
    assert 4 * 40 * (16 + 29) <= content["evaluations"] <= 4 * 40 * (16 + 30)
    assert set(content["seconds"]) == {"models", "search", "output", "total"}
    front = pd.read_csv(folder / "front.csv")
    assert {entry["column"] for entry in content["objectives"]} <= set(front.columns)
    assert {entry["direction"] for entry in content["objectives"]} == {"min"}
    assert set(content["hypervolume"]) == set(front.concept.unique()) | set(content["ruled_out"])
    assert {"name", "unit", "limit"} <= set(content["limits"][0])
    assert "lethal" in content["caution"]


def test_tables_of_a_run_fit_together(run):
    folder, _ = run
    front, margins = pd.read_csv(folder / "front.csv"), pd.read_csv(folder / "margins.csv")
    assert list(front.design_id) == list(margins.design_id)
    with gzip.open(folder / "evaluated.csv.gz", "rt") as file:
        evaluated = pd.read_csv(file)
    assert len(evaluated) >= len(front)
    for name in ("loss_weighted_percent", "volume_l", "price"):
        assert front[name].min() == pytest.approx(evaluated[name].min(), rel=1e-6)


def test_same_seed_same_front_file(run, tmp_path):
    folder, _ = run
    done = wattfront("search", ROOFTOP, "--run", tmp_path / "again", "--population", 40, "--generations", 30,
                     "--workers", 1, "--json", cwd=tmp_path)  # fmt: skip
    assert done.returncode == 0
    assert json.loads(done.stdout)["seed"] == 1
    assert (tmp_path / "again" / "front.csv").read_bytes() == (folder / "front.csv").read_bytes()


def test_a_front_can_be_evaluated_again(run, tmp_path):
    folder, _ = run
    done = wattfront(
        "evaluate", ROOFTOP, "--designs", folder / "front.csv", "--out", tmp_path / "again.csv", cwd=tmp_path
    )
    assert done.returncode == 0, done.stderr
    again, front = pd.read_csv(tmp_path / "again.csv"), pd.read_csv(folder / "front.csv")
    pd.testing.assert_series_equal(again.loss_rated_w, front.loss_rated_w, rtol=1e-5)
    # the file's seven digits may push a margin that binds below zero, by as little
    assert again.tightest_margin.min() > -1e-5


def test_new_then_search_works(tmp_path):
    assert wattfront("new", "mine.toml", cwd=tmp_path).returncode == 0
    done = wattfront("search", "mine.toml", "--population", 30, "--generations", 20, cwd=tmp_path)
    assert done.returncode == 0, done.stderr
    assert list((tmp_path / "runs").glob("*/dashboard.html"))


def test_new_does_not_overwrite(tmp_path):
    (tmp_path / "mine.toml").write_text("precious")
    done = wattfront("new", "mine.toml", cwd=tmp_path)
    assert done.returncode == 2
    assert done.stderr == "mine.toml: given a file that exists already, expected a new file name\n"
    assert (tmp_path / "mine.toml").read_text() == "precious"


def broken(tmp_path, old, new):
    text = ROOFTOP.read_text()
    assert old in text
    (tmp_path / "bad.toml").write_text(text.replace(old, new))
    return tmp_path / "bad.toml"


@pytest.mark.parametrize(
    ("old", "new", "told"),
    [
        ("apparent_power", "aparent_power", "apparent_power"),
        ('"5 kVA"', '"5 kg"', "application.apparent_power: given \"5 kg\""),
        ('"5 kVA"', '"-5 kVA"', "application.apparent_power: given \"-5 kVA\""),
        ('min = "360 V"', 'min = "300 V"', "application.dc_voltage.min"),
        ('"silicon IGBT"', '"silicon IGTB"', '(nearest: "silicon IGBT")'),
        ('"IEEE 1547-2018"', '"IEEE 1547-2019"', "IEEE 1547-2018"),
        ("name = ", "name : ", "bad.toml"),
    ],
)  # fmt: skip
def test_bad_studies_end_with_code_2_and_leave_nothing(tmp_path, old, new, told):
    done = wattfront("search", broken(tmp_path, old, new), cwd=tmp_path)
    assert done.returncode == 2
    assert told in done.stderr
    assert "Traceback" not in done.stderr
    assert not (tmp_path / "runs").exists()


def test_nothing_feasible_ends_with_code_1_and_says_why(tmp_path):
    study = broken(tmp_path, 'volume = "20 l"', 'volume = "0.3 l"')
    done = wattfront("search", study, "--population", 20, "--generations", 5, cwd=tmp_path)
    assert done.returncode == 1
    assert "volume wanted: failed by 100.0% of the candidates" in done.stderr
    assert "Traceback" not in done.stderr
    assert not (tmp_path / "runs").exists()


def test_search_refuses_a_folder_that_is_no_run(tmp_path):
    (tmp_path / "mine").mkdir()
    (tmp_path / "mine" / "thesis.txt").write_text("precious")
    done = wattfront(
        "search", ROOFTOP, "--run", "mine", "--population", 20, "--generations", 20, cwd=tmp_path
    )
    assert done.returncode == 2
    assert (tmp_path / "mine" / "thesis.txt").read_text() == "precious"


@pytest.mark.parametrize("command", ["new", "search", "evaluate", "catalog"])
def test_every_command_has_help_with_an_example(tmp_path, command):
    done = wattfront(command, "--help", cwd=tmp_path)
    assert done.returncode == 0
    assert "Example: wattfront" in done.stdout


def test_usage_errors_end_with_code_2(tmp_path):
    for words in (
        ("search",),
        ("searhc", "x"),
        ("search", ROOFTOP, "--sed", "1"),
        ("search", ROOFTOP, "--seed", "x"),
    ):
        done = wattfront(*words, cwd=tmp_path)
        assert done.returncode == 2
        assert "Traceback" not in done.stderr


def test_catalog_lists_and_checks_own_parts(tmp_path):
    listed = wattfront("catalog", cwd=tmp_path)
    assert listed.returncode == 0
    assert "SiC 650 V" in listed.stdout
    names = json.loads(wattfront("catalog", "--json", cwd=tmp_path).stdout)
    assert len(names["core_shapes"]) > 50
    (tmp_path / "own.toml").write_text("[[devices]]\nname = 'X'\nunknown = 1\n")
    done = wattfront("catalog", "--files", "own.toml", cwd=tmp_path)
    assert done.returncode == 2
    assert "own.toml" in done.stderr
    assert "Traceback" not in done.stderr


def test_several_bridges_are_compared_and_evaluated_again(tmp_path):
    """A study with a further bridge: a front for each concept, and its rows come back through evaluate."""
    text = (ROOT / "studies" / "depot_10kw_three_phase.toml").read_text(encoding="utf-8")
    start, end = text.index("[bridge]"), text.index("[filter]")
    bridges = (
        '[bridge]\nkind = "three-phase six-switch bridge"\ncompared_with = ["three-phase bridge, T-type"]\n\n'
    )
    study = tmp_path / "both.toml"
    study.write_text(text[:start] + bridges + text[end:], encoding="utf-8")
    run = tmp_path / "run"
    found = wattfront(
        "search", str(study), "--run", str(run), "--population", "40", "--generations", "25", cwd=tmp_path
    )
    assert found.returncode == 0, found.stderr
    table = pd.read_csv(run / "front.csv")
    assert set(table.concept) == {
        "silicon IGBT, six-switch bridge", "SiC MOSFET, six-switch bridge",
        "silicon IGBT, T-type", "SiC MOSFET, T-type",
    }  # fmt: skip
    mixed = table[table.bridge == "three-phase bridge, T-type"]
    # a higher rating costs more and conducts worse, which even a short search finds for most
    assert mixed.inner_device.str.contains("650 V").mean() > 0.5
    assert mixed.device.str.contains("1200 V").mean() > 0.5
    assert not mixed.device.str.contains("650 V").any()
    out = tmp_path / "again.csv"
    again = wattfront(
        "evaluate", str(study), "--designs", str(run / "front.csv"), "--out", str(out), cwd=tmp_path
    )
    assert again.returncode == 0, again.stderr
    back = pd.read_csv(out).set_index("design_id").loc[table.design_id]
    assert back.loss_rated_w.to_numpy() == pytest.approx(table.loss_rated_w.to_numpy(), rel=1e-6)
    wrong = table.assign(bridge="three-phase bridge, neutral-point clamped")
    wrong.to_csv(tmp_path / "wrong.csv", index=False)
    told = wattfront("evaluate", str(study), "--designs", str(tmp_path / "wrong.csv"), cwd=tmp_path)
    assert told.returncode == 2
    assert "row 2, bridge: given 'three-phase bridge, neutral-point clamped'" in told.stderr
