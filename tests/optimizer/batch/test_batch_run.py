"""A batch on this machine's cores and on a real Dask cluster, a worker killed under way."""

import json
import os
import shutil
import signal
import subprocess
import threading

import pandas as pd
import pytest

from optimizer.batch.batch_run import run_batch
from optimizer.batch.cases import read_cases
from optimizer.batch.engine import ClusterEngine, LocalEngine, engine_of
from optimizer.errors import InputError
from optimizer.runs.run import run_search
from optimizer.runs.stored_run import read_run

STUDY = """
name = "two powers"
description = "batch </script><img src=x onerror=alert(1)>"
[application]
kind = "grid-connected"
phases = 1
apparent_power = ["3 kVA", "5 kVA"]
ac_voltage = "230 V"
line_frequency = "50 Hz"
dc_voltage = { min = "360 V", nominal = "400 V", max = "450 V" }
[objectives]
at_most = { volume = ["12 l", "0.2 l"] }
[bridge]
kind = "single-phase full bridge"
[search]
device_classes = ["SiC MOSFET", "GaN HEMT"]
"""
EFFORT = (40, 30)


@pytest.fixture(scope="module")
def study_file(tmp_path_factory):
    path = tmp_path_factory.mktemp("batch") / "batch.toml"
    path.write_text(STUDY, encoding="utf-8")
    return path


@pytest.fixture(scope="module")
def cases(study_file):
    return [case.with_effort(*EFFORT) for case in read_cases(study_file)]


@pytest.fixture(scope="module")
def local(study_file, cases, tmp_path_factory):
    folder = tmp_path_factory.mktemp("local") / "run"
    return run_batch(cases, folder, LocalEngine(2), seed=3, source=study_file)


def test_one_table_one_page_and_a_run_a_case(local, cases):
    front = pd.read_csv(local.folder / "front.csv")
    told = json.loads((local.folder / "run.json").read_text())
    feasible = [case for case in cases if "12 l" in case.name]
    assert set(front.case) == {case.name for case in feasible} == set(told["cases"])
    assert set(told["ruled_out"]) == {case.name for case in cases if "0.2 l" in case.name}
    for case in feasible:
        run = read_run(local.folder / told["cases"][case.name])
        rows = front[front.case == case.name]
        assert len(rows) == len(run.table)
        assert list(rows.volume_l) == list(run.table.volume_l)
        assert set(rows["application.apparent_power"]) == {case.values["application.apparent_power"]}
    assert {"case", "concept", "designs", "hypervolume"} <= set(local.cases.columns)


def test_a_case_has_the_front_of_a_search_of_it_alone(local, cases, tmp_path):
    case = cases[0]
    run_search(case.study, tmp_path / "alone", seed=3, workers=1)
    inside = local.folder / "cases" / case.folder
    assert (inside / "front.csv").read_bytes() == (tmp_path / "alone" / "front.csv").read_bytes()


def test_names_stay_text_in_the_page(local):
    page = (local.folder / "dashboard.html").read_text(encoding="utf-8")
    assert "<img src=x" not in page
    assert "&lt;img src=x" in page


def test_a_batch_is_no_run_but_says_where_its_runs_are(local):
    with pytest.raises(InputError, match="one of its runs, such as"):
        read_run(local.folder)


def test_finished_cases_are_not_searched_again(study_file, cases, tmp_path):
    class Broken(LocalEngine):
        def results(self, tasks):
            for place, (task, result) in enumerate(super().results(tasks)):
                if place == 2:  # the first case's two concepts are done
                    raise KeyboardInterrupt
                yield task, result

    class Counting(LocalEngine):
        seen: list = []

        def results(self, tasks):
            self.seen.extend(tasks)
            return super().results(tasks)

    with pytest.raises(KeyboardInterrupt):
        run_batch(cases, tmp_path / "run", Broken(1), seed=3, source=study_file)
    assert not (tmp_path / "run").exists()
    found = run_batch(cases, tmp_path / "run", Counting(1), seed=3, source=study_file, resume=True)
    assert {task.case for task in Counting.seen} == {1, 2, 3}
    assert set(found.cases.case) == {case.name for case in cases if "12 l" in case.name}
    assert not (tmp_path / "run.unfinished").exists()


def test_the_same_on_a_cluster_whose_worker_is_killed_under_way(study_file, cases, local, tmp_path):
    distributed = pytest.importorskip("distributed")
    with (
        distributed.LocalCluster(
            n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None, silence_logs=50
        ) as cluster,
        distributed.Client(cluster, set_as_default=False) as client,
    ):
        killed = threading.Event()
        victims = client.run(os.getpid)

        def kill(case, concept):
            if not killed.is_set():
                killed.set()
                os.kill(next(iter(victims.values())), signal.SIGKILL)

        found = run_batch(
            cases, tmp_path / "run", ClusterEngine(client), seed=3, source=study_file, report=kill
        )
        assert killed.is_set()
    assert (tmp_path / "run" / "front.csv").read_bytes() == (local.folder / "front.csv").read_bytes()
    pd.testing.assert_frame_equal(found.cases, local.cases)


def test_an_address_where_nobody_listens_is_told():
    pytest.importorskip("distributed")
    with pytest.raises(InputError, match="--cluster: given 'nowhere', expected the address"):
        engine_of("nowhere", None).__enter__()


def test_the_page_draws_in_a_browser_and_its_selector_works(local, tmp_path):
    browser = shutil.which("chromium") or shutil.which("chromium-browser")
    if browser is None:
        pytest.skip("no Chromium on this machine")
    page = (local.folder / "dashboard.html").read_text(encoding="utf-8")
    told = "choice.dispatchEvent(new Event('change')); document.body.dataset.own = own.getAttribute('href');"
    page = page.replace(
        'document.body.dataset.ready = "yes";',
        f'document.body.dataset.ready = "yes"; choice.value = names[1]; {told}',
    )
    (tmp_path / "page.html").write_text(page, encoding="utf-8")
    done = subprocess.run(
        [
            browser, "--headless", "--no-sandbox", "--disable-gpu", "--enable-logging=stderr",
            "--virtual-time-budget=15000", "--dump-dom", (tmp_path / "page.html").as_uri(),
        ],
        capture_output=True, text=True, check=True, timeout=120,
    )  # fmt: skip
    assert 'data-ready="yes"' in done.stdout
    assert 'data-own="cases/' in done.stdout
    assert "mark-symbol" in done.stdout
    assert "CONSOLE" not in done.stderr
