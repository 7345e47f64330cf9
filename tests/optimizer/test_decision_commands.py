"""shortlist, report and compare as a user meets them: exit codes, messages, nothing half-written."""

import json
import subprocess
import sys
from pathlib import Path

import pandas as pd
import pytest

ROOT = Path(__file__).parents[2]


def wattfront(*words, cwd):
    command = [sys.executable, "-m", "optimizer.cli", *map(str, words)]
    environment = {"PYTHONPATH": str(ROOT), "PATH": "/usr/bin:/bin", "COLUMNS": "200"}
    return subprocess.run(command, cwd=cwd, env=environment, capture_output=True, text=True, check=False)


def test_shortlist_prints_words_and_writes_nothing(stored, tmp_path):
    before = {path.name for path in stored.folder.iterdir()}
    done = wattfront("shortlist", stored.folder, "--weights", "volume=2, price=1", cwd=tmp_path)
    assert done.returncode == 0, done.stderr
    for role in ("balanced", "cheapest", "most efficient", "smallest", "best by your weights", "Recommended"):
        assert role in done.stdout
    assert "lethal" in done.stdout
    assert {path.name for path in stored.folder.iterdir()} == before
    assert list(tmp_path.iterdir()) == []


def test_shortlist_as_files(stored, tmp_path):
    done = wattfront("shortlist", stored.folder, "--json", "--out", "shortlist.csv", cwd=tmp_path)
    assert done.returncode == 0, done.stderr
    content, table = json.loads(done.stdout), pd.read_csv(tmp_path / "shortlist.csv")
    assert [entry["role"] for entry in content["shortlist"]] == list(table.role)
    study = stored.folder / "study.toml"
    again = wattfront("evaluate", study, "--designs", "shortlist.csv", "--out", "again.csv", cwd=tmp_path)
    assert again.returncode == 0, again.stderr
    assert pd.read_csv(tmp_path / "again.csv").cost_of_ownership.tolist() == pytest.approx(
        table.cost_of_ownership.tolist(), rel=1e-5
    )
    assert wattfront("shortlist", stored.folder, "--out", "shortlist.json", cwd=tmp_path).returncode == 0
    assert json.loads((tmp_path / "shortlist.json").read_text()) == content


BAD = {
    "unknown weight": (("--weights", "bulk=2"), '--weights: given "bulk", expected the name of an objective'),
    "another ending": (
        ("--out", "shortlist.xlsx"),
        "--out: given shortlist.xlsx, expected a file ending in .csv or .json",
    ),
    "no folder": (
        ("--out", "no/shortlist.csv"),
        "--out: given no/shortlist.csv, expected a file in an existing folder",
    ),
}


@pytest.mark.parametrize("kind", BAD)
def test_bad_options_of_shortlist(stored, tmp_path, kind):
    words, line = BAD[kind]
    done = wattfront("shortlist", stored.folder, *words, cwd=tmp_path)
    assert done.returncode == 2
    assert done.stderr.startswith(line)
    assert "Traceback" not in done.stderr
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("command", ["shortlist", "report", "compare"])
def test_what_is_no_run_is_told(tmp_path, command):
    (tmp_path / "other").mkdir()
    done = wattfront(command, "other", *(["other"] if command == "compare" else []), cwd=tmp_path)
    assert done.returncode == 2
    assert done.stderr == (
        "other: given a folder without run.json, expected the folder of a run (wattfront search writes one)\n"
    )


def test_report_in_one_format_where_asked_for(stored, tmp_path):
    done = wattfront("report", stored.folder, "--format", "html", "--out", "told", cwd=tmp_path)
    assert done.returncode == 0, done.stderr
    assert [path.name for path in (tmp_path / "told").iterdir()] == ["report.html"]
    assert wattfront("report", stored.folder, "--format", "doc", cwd=tmp_path).returncode == 2


def test_report_in_all_formats(stored, tmp_path):
    done = wattfront("report", stored.folder, "--out", "told", cwd=tmp_path)
    assert done.returncode == 0, done.stderr
    starts = {path.suffix: path.read_bytes()[:4] for path in (tmp_path / "told").iterdir()}
    assert starts == {".html": b"<!do", ".pdf": b"%PDF", ".pptx": b"PK\x03\x04"}


def test_compare_prints_and_writes_a_page(stored, tmp_path):
    done = wattfront("compare", stored.folder, stored.folder, "--out", "page.html", cwd=tmp_path)
    assert done.returncode == 0, done.stderr
    assert "no key differs" in done.stdout
    assert (tmp_path / "page.html").read_text().startswith("<!doctype html>")
    done = wattfront("compare", stored.folder, stored.folder, "--json", cwd=tmp_path)
    assert json.loads(done.stdout)["changes"] == [{"run": "2: rooftop", "keys": []}]


def test_compare_takes_two_runs(stored, tmp_path):
    done = wattfront("compare", stored.folder, cwd=tmp_path)
    assert done.returncode == 2
    assert done.stderr == "given 1 run, expected at least two run folders\n"
