"""A run read back: what was written comes back, and what is no run is told so."""

import json
import shutil

import pandas as pd
import pytest

from optimizer.errors import InputError
from optimizer.runs.run import run_search
from optimizer.runs.run_folder import write_run
from optimizer.runs.stored_run import read_run
from optimizer.study.study import Study

PART = """
[[devices]]
name = "my part"
based_on = "SiC 650 V"
sheet_on_resistance_25_mohm = { value = 30, origin = "data sheet" }
"""


@pytest.fixture
def copy(stored, tmp_path):
    """A run folder to be spoiled."""
    shutil.copytree(stored.folder, tmp_path / "run")
    return tmp_path / "run"


def test_what_was_written_comes_back(stored, rooftop):
    assert (stored.folder / "study.toml").read_bytes() == rooftop.path.read_bytes()
    assert stored.study.specification == rooftop.specification
    assert (stored.study.search.population, stored.study.search.generations) == (40, 40)
    assert stored.table.overall_front.sum() == stored.summary["designs"]["overall_front"]
    assert len(stored.margins) == len(stored.table)
    assert stored.objective_columns == ["loss_weighted_percent", "volume_l", "price"]


def test_parts_files_go_with_the_run(rooftop, tmp_path):
    (tmp_path / "parts").mkdir()
    (tmp_path / "parts" / "mine.toml").write_text(PART)
    (tmp_path / "study.toml").write_text(
        rooftop.path.read_text().replace(
            'device_classes = ["silicon IGBT", "superjunction MOSFET", "SiC MOSFET", "GaN HEMT"]',
            'device_classes = ["SiC MOSFET"]',
        )
        + '\n[catalog]\nfiles = ["parts/mine.toml"]\n'
    )
    study = Study.read(tmp_path / "study.toml").with_effort(20, 20)
    run_search(study, tmp_path / "run", workers=1)
    (tmp_path / "study.toml").unlink()
    shutil.rmtree(tmp_path / "parts")
    assert read_run(tmp_path / "run").study.catalog_files[0].read_text() == PART


def without(name):
    def spoil(run):
        (run / name).unlink()

    return spoil


def with_text(name, text):
    def spoil(run):
        (run / name).write_text(text)

    return spoil


def with_format(value):
    def spoil(run):
        content = json.loads((run / "run.json").read_text())
        content.pop("format") if value is None else content.update(format=value)
        (run / "run.json").write_text(json.dumps(content))

    return spoil


def with_front(change):
    def spoil(run):
        table = pd.read_csv(run / "front.csv")
        change(table).to_csv(run / "front.csv", index=False)

    return spoil


SPOILED = {
    "no run.json": (without("run.json"), "a folder without run.json"),
    "no study": (without("study.toml"), "a run without study.toml"),
    "no front": (without("front.csv"), "front.csv: given no such file"),
    "no margins": (without("margins.csv"), "margins.csv: given no such file"),
    "broken json": (with_text("run.json", "{"), "text that is no JSON"),
    "a list": (with_text("run.json", "[]"), "a run of an earlier version"),
    "empty front": (with_text("front.csv", ""), "text that is no table"),
    "another table": (with_text("front.csv", "a,b\n1,2\n"), "a table without design_id"),
    "changed study": (with_text("study.toml", "name = 3"), "study.toml: name: given 3"),
    "earlier version": (with_format(None), "a run of an earlier version, expected format 2"),
    "later version": (with_format(3), "a run of format 3, expected format 2"),
    "fewer designs": (with_front(lambda table: table.iloc[1:]), "other designs than those of front.csv"),
    "words as figures": (
        with_front(lambda table: table.assign(price="dear")),
        "front.csv: price: given something else than numbers",
    ),
    "nothing on the front": (
        with_front(lambda table: table.assign(overall_front=False)),
        "no design on the overall front",
    ),
}


@pytest.mark.parametrize("kind", SPOILED)
def test_a_spoiled_run_is_told_so(copy, kind):
    spoil, words = SPOILED[kind]
    spoil(copy)
    with pytest.raises(InputError) as caught:
        read_run(copy)
    assert words in str(caught.value)
    assert str(copy) in str(caught.value)


def test_a_study_edited_after_the_search_is_told_so(copy):
    with (copy / "study.toml").open("a") as file:
        file.write("# a later thought\n")
    with pytest.raises(InputError, match="a study changed after the search"):
        read_run(copy)


@pytest.mark.parametrize(
    "make", [lambda path: None, lambda path: path.write_text("x"), lambda path: path.mkdir()]
)
def test_what_is_no_run_folder(tmp_path, make):
    make(tmp_path / "other")
    with pytest.raises(InputError, match="expected the folder of a run"):
        read_run(tmp_path / "other")


def test_an_early_run_json_alone_is_an_earlier_version(tmp_path):
    write_run(tmp_path / "run", {"run.json": '{"seed": 1}'})
    with pytest.raises(InputError, match="search the study again"):
        read_run(tmp_path / "run")
