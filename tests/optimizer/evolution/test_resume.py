"""A search killed at any moment and taken up again ends in the very same front."""

import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[3]
STUDY = ROOT / "studies" / "rooftop_5kw.toml"
EFFORT = ("--population", "200", "--generations", "60", "--seed", "4")


def command(run: Path, *more: str) -> list[str]:
    return [sys.executable, "-m", "optimizer.cli", "search", str(STUDY), "--run", str(run), *EFFORT, *more]


@pytest.fixture(scope="module")
def undisturbed(tmp_path_factory):
    run = tmp_path_factory.mktemp("whole") / "run"
    started = time.monotonic()
    subprocess.run(command(run, "--workers", "1"), cwd=ROOT, check=True, capture_output=True)
    return run, time.monotonic() - started


@pytest.mark.parametrize("share", [0.35, 0.6, 0.85])
def test_killed_and_resumed_gives_the_same_bytes(undisturbed, tmp_path, share):
    whole, seconds = undisturbed
    run = tmp_path / "run"
    process = subprocess.Popen(
        command(run, "--workers", "2"),
        cwd=ROOT,
        stdout=subprocess.DEVNULL,
        stderr=subprocess.DEVNULL,
        start_new_session=True,
    )
    try:
        process.wait(timeout=share * seconds)
    except subprocess.TimeoutExpired:
        os.killpg(process.pid, signal.SIGKILL)
        process.wait()
    subprocess.run(command(run, "--resume"), cwd=ROOT, check=True, capture_output=True)
    for name in ("front.csv", "margins.csv"):
        assert (run / name).read_bytes() == (whole / name).read_bytes()
    assert not run.with_name("run.unfinished").exists()


def test_resuming_another_search_is_refused(tmp_path):
    run = tmp_path / "run"
    process = subprocess.Popen(
        command(run), cwd=ROOT, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL, start_new_session=True
    )
    left = run.with_name("run.unfinished") / "task.json"
    for _ in range(600):
        if left.exists() or process.poll() is not None:
            break
        time.sleep(0.05)
    os.killpg(process.pid, signal.SIGKILL)
    process.wait()
    other = subprocess.run(
        [*command(run, "--resume"), "--seed", "5"], cwd=ROOT, capture_output=True, text=True, check=False
    )
    assert other.returncode == 2
    assert "another seed" in other.stderr
    assert "run.unfinished" in other.stderr
