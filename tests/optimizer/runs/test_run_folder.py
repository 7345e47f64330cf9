"""Run folders: whole or not at all, and nothing that is not ours is ever lost."""

import re

import pytest

from optimizer.errors import InputError
from optimizer.runs.run_folder import write_run, write_whole

FIRST = {"run.json": '{"seed": 1}', "front.csv": b"a,b\n1,2\n"}


def tree(folder):
    return {
        str(path.relative_to(folder)): path.read_bytes() if path.is_file() else None
        for path in sorted(folder.rglob("*"))
    }


def crash(path):
    path.write_text("half a fi")
    raise OSError(28, "No space left on device")


def interrupt(path):
    path.write_text("half a fi")
    raise KeyboardInterrupt


def test_bytes_text_and_writers_arrive(tmp_path):
    def table(path):
        assert path.suffixes == [".csv", ".gz"]  # writers go by the suffix
        path.write_bytes(b"table")

    run = tmp_path / "runs" / "rooftop 5 kW"
    kept = write_run(run, {**FIRST, "evaluated.csv.gz": table, "sheets/d1.html": "<p>µ</p>"})
    assert kept is None
    assert tree(run) == {
        "run.json": b'{"seed": 1}',
        "front.csv": b"a,b\n1,2\n",
        "evaluated.csv.gz": b"table",
        "sheets": None,
        "sheets/d1.html": "<p>µ</p>".encode(),
    }
    assert [path.name for path in run.parent.iterdir()] == ["rooftop 5 kW"]


@pytest.mark.parametrize(("writer", "error"), [(crash, OSError), (interrupt, KeyboardInterrupt)])
def test_a_crash_in_the_middle_leaves_the_old_run_intact_and_nothing_else(tmp_path, writer, error):
    run = tmp_path / "run"
    write_run(run, FIRST)
    before = tree(tmp_path)
    with pytest.raises(error):
        write_run(run, {"run.json": "new", "front.csv": writer, "dashboard.html": "never reached"})
    assert tree(tmp_path) == before


@pytest.mark.parametrize(("writer", "error"), [(crash, OSError), (interrupt, KeyboardInterrupt)])
def test_a_crash_of_a_first_run_leaves_nothing_behind(tmp_path, writer, error):
    with pytest.raises(error):
        write_run(tmp_path / "runs" / "deep" / "run", {"run.json": "new", "front.csv": writer})
    assert tree(tmp_path) == {}


def test_a_crash_at_the_last_rename_brings_the_old_run_back(tmp_path, monkeypatch):
    run = tmp_path / "run"
    write_run(run, FIRST)
    before = tree(tmp_path)
    rename = type(run).rename

    def failing(self, target):
        if self.name.startswith(".") and target.name == "run":
            raise OSError("no rename today")
        return rename(self, target)

    monkeypatch.setattr(type(run), "rename", failing)
    with pytest.raises(OSError, match="no rename today"):
        write_run(run, {"run.json": "new"})
    assert tree(tmp_path) == before


def test_the_old_run_is_there_until_all_new_files_are_complete(tmp_path):
    run = tmp_path / "run"
    write_run(run, FIRST)
    seen = []

    def look(path):
        seen.append((run / "run.json").read_text())
        path.write_text("done")

    write_run(run, {"run.json": "new", "front.csv": look})
    assert seen == ['{"seed": 1}']
    assert tree(run) == {"run.json": b"new", "front.csv": b"done"}
    assert [path.name for path in tmp_path.iterdir()] == ["run"]


def test_a_run_with_files_of_other_names_is_kept_beside_the_new_one(tmp_path):
    run = tmp_path / "run"
    for turn in (1, 2):
        write_run(run, FIRST)
        (run / "notes.md").write_text(f"thought of {turn}")
        kept = write_run(run, {"run.json": "new", "front.csv": "new"})
        assert kept == tmp_path / f"run.earlier-{turn}"
        assert (kept / "notes.md").read_text() == f"thought of {turn}"
        assert (kept / "front.csv").read_bytes() == FIRST["front.csv"]
        assert tree(run) == {"run.json": b"new", "front.csv": b"new"}


def test_an_empty_folder_is_taken(tmp_path):
    run = tmp_path / "run"
    run.mkdir()
    write_run(run, FIRST, overwrite=False)
    assert (run / "run.json").exists()
    assert [path.name for path in tmp_path.iterdir()] == ["run"]


def refused(run, words):
    return pytest.raises(InputError, match=f"^{re.escape(f'{run}: {words}')}$")


def test_a_folder_of_other_things_is_refused(tmp_path):
    (tmp_path / "thesis.txt").write_text("years of work")
    before = tree(tmp_path)
    words = (
        "given a folder that holds other things and no run.json, "
        "expected a new or empty folder, or an earlier run to replace"
    )
    with refused(tmp_path, words):
        write_run(tmp_path, FIRST)
    assert tree(tmp_path) == before


def test_a_file_is_refused(tmp_path):
    run = tmp_path / "run"
    run.write_text("a file")
    with refused(run, "given a file, expected a folder for the run"):
        write_run(run, FIRST)
    assert run.read_text() == "a file"


def test_an_earlier_run_is_refused_without_overwrite(tmp_path):
    run = tmp_path / "run"
    write_run(run, FIRST)
    before = tree(tmp_path)
    with refused(run, "given a folder with an earlier run, expected a new or empty folder"):
        write_run(run, {"run.json": "new"}, overwrite=False)
    assert tree(tmp_path) == before


def test_a_place_that_cannot_be_written_is_refused(tmp_path):
    (tmp_path / "file").write_text("")
    run = tmp_path / "file" / "run"
    with refused(run, "given a folder that cannot be made (File exists), expected a folder to write to"):
        write_run(run, FIRST)


@pytest.mark.parametrize("name", ["../out.csv", "/out.csv", ""])
def test_names_that_leave_the_folder_are_refused(tmp_path, name):
    with pytest.raises(ValueError, match=re.escape(f"given {name!r}, expected a path inside the run folder")):
        write_run(tmp_path / "run", {**FIRST, name: "x"})
    assert tree(tmp_path) == {}


def test_a_run_without_run_json_is_refused(tmp_path):
    with pytest.raises(ValueError, match=re.escape("given ['a'], expected 'run.json' among them")):
        write_run(tmp_path / "run", {"a": "x"})


def test_a_writer_that_writes_nothing_is_found_out(tmp_path):
    with pytest.raises(RuntimeError, match=r"the writer of front\.csv has written nothing"):
        write_run(tmp_path / "run", {**FIRST, "front.csv": lambda path: None})
    assert tree(tmp_path) == {}


def test_one_file_whole_or_not_at_all(tmp_path):
    path = tmp_path / "sheet.html"
    write_whole(path, "first")
    with pytest.raises(OSError, match="No space left"):
        write_whole(path, crash)
    assert tree(tmp_path) == {"sheet.html": b"first"}
    write_whole(path, "second")
    assert tree(tmp_path) == {"sheet.html": b"second"}


def test_a_link_to_a_run_is_followed(tmp_path):
    write_run(tmp_path / "run", FIRST)
    (tmp_path / "latest").symlink_to(tmp_path / "run")
    write_run(tmp_path / "latest", {"run.json": "new", "front.csv": "new"})
    assert (tmp_path / "latest").is_symlink()
    assert (tmp_path / "run" / "run.json").read_text() == "new"
