"""The page in a real browser: all is drawn, the selections work, the console stays silent."""

import html
import json
import re
import shutil
import subprocess
from dataclasses import replace
from pathlib import Path

import pytest

from optimizer.charts import dashboard_html

BROWSER = shutil.which("chromium") or shutil.which("chromium-browser")
FLAGS = (
    "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-sync",
    "--disable-background-networking", "--disable-component-update", "--window-size=1500,2000",
    "--virtual-time-budget=15000", "--dump-dom",
)  # fmt: skip
PROBE = (Path(__file__).parent / "browser_probe.js").read_text()
SECONDS = 60

pytestmark = pytest.mark.skipif(BROWSER is None, reason="needs chromium to draw the page")


@pytest.fixture(scope="module")
def told(drawn, tmp_path_factory):
    """What the probe saw and did."""
    folder = tmp_path_factory.mktemp("browser")
    page = folder / "dashboard.html"
    page.write_text(drawn.html.replace("<style>", f"<script>{PROBE}</script><style>", 1))
    command = [BROWSER, *FLAGS, f"--user-data-dir={folder / 'profile'}", page.as_uri()]
    done = subprocess.run(command, capture_output=True, text=True, timeout=SECONDS, check=False)
    found = re.search(r'<pre id="report">(.*?)</pre>', done.stdout, re.DOTALL)
    assert found, f"no report; the browser said {done.stderr[-2000:]}"
    report = json.loads(html.unescape(found.group(1)))
    assert "failed" not in report, report["failed"]
    return report


@pytest.fixture(scope="module")
def designs(drawn):
    return {record["design_id"]: record for record in drawn.spec["datasets"]["designs"]}


def inside(told, designs):
    """Designs within the group's ranges, worked out here."""
    ranges = told["grouped"]["group"]
    (left, right), (low, high) = (sorted(ranges[name]) for name in ("x_value", "y_value"))
    return [
        name
        for name, design in designs.items()
        if left <= design["loss_weighted_percent"] <= right and low <= design["volume_l"] <= high
    ]


def test_the_console_stays_silent(told):
    assert told["heard"] == []


def test_every_view_is_drawn(told, designs):
    marks = told["marks"]

    def count(base):
        return sum(number for name, number in marks.items() if name.startswith(base))

    assert told["ink"] > 20_000
    assert count("front_points") == len(designs)
    assert count("front_picked") == count("card_headline") == 1
    assert count("load_curve_picked") >= len(designs[told["at_start"]["picked"]]["efficiency"])
    assert count("margins_bars") == 10
    for view in (
        "least_loss",
        "least_volume",
        "loss_bars",
        "volume_bars",
        "spectrum_stems",
        "spectrum_limits",
    ):
        assert count(view) > 2, view


def test_the_start_shows_the_balanced_design(told, designs):
    start = told["at_start"]
    assert start["picked"] in designs
    assert start["picked"] in start["words"][0]
    assert start["axis"] == ["weighted loss [%]"]
    assert f"{len(designs)} designs drawn" in start["count"]


def at_one_place(designs, first, second):
    """Whether two designs lie on top of each other in the front: the pointer cannot tell such apart."""
    places = (
        [designs[name][axis] for axis in ("loss_weighted_percent", "volume_l")] for name in (first, second)
    )
    return next(places) == pytest.approx(next(places), rel=0.01)


def test_the_pointer_picks_the_nearest_design(told, designs):
    pointed = told["pointed"]
    assert at_one_place(designs, pointed["picked"], pointed["wanted"])
    assert pointed["words"][0].startswith(f"Picked design {pointed['picked']} ")
    losses = [value for name, value in designs[pointed["picked"]].items() if re.fullmatch("loss_.*_w", name)]
    assert set(pointed["bars"]) <= set(losses)


def test_a_rectangle_groups_the_designs_within(told, designs):
    grouped, names = told["grouped"], inside(told, designs)
    assert 2 < len(names) < len(designs)
    assert grouped["count"].startswith(f"{len(names)} designs in the group")
    assert grouped["rows"] == sorted(names, key=lambda name: designs[name]["loss_weighted_percent"])[:12]
    assert grouped["thin"] > 0
    mean = sum(designs[name]["loss_conduction_w"] for name in names) / len(names)
    assert any(value == pytest.approx(mean, rel=1e-6) for value in grouped["means"])


def test_a_click_pins_and_keeps_the_group(told, designs):
    pinned = told["pinned"]
    assert at_one_place(designs, pinned["picked"], pinned["wanted"])
    assert pinned["pinned"] == [pinned["picked"]]
    assert pinned["group"] == told["grouped"]["group"]
    assert told["pinned_elsewhere"]["picked"] == pinned["picked"]


def test_a_row_of_the_table_is_picked(told):
    assert told["from_table"]["picked"] == told["grouped"]["rows"][1]


def test_another_axis_renames_the_title_and_lets_go_of_the_group(told):
    assert told["other_axis"]["axis"] == ["price [currency units]"]
    assert told["other_axis"]["group"] == {}
    assert told["other_axis"]["thin"] == 0


def test_the_button_lets_go_of_the_pin(told):
    assert told["let_go"]["pinned"] == []
    assert told["let_go"]["picked"] == told["pointed"]["picked"]


def test_the_legend_filters_classes(told, designs):
    of_class = [name for name, design in designs.items() if design["concept"] == "SiC MOSFET"]
    assert told["one_class"]["classes"] == ["SiC MOSFET"]
    assert told["one_class"]["count"].startswith(f"{len(of_class)} designs")
    assert set(told["one_class"]["rows"]) <= set(of_class)


def test_two_designs_stand_side_by_side_until_let_go(told, designs):
    beside = told["beside"]
    assert beside["held"] != beside["picked"]
    assert beside["names"] == [beside["held"], beside["picked"]]
    assert beside["rings"] == [beside["held"]]
    assert beside["dashed"] > 0
    before, after = (designs[beside[name]]["volume_l"] for name in ("held", "picked"))
    _, left, right, change = beside["volume"]
    assert float(left) == pytest.approx(before, rel=6e-3)
    assert float(right) == pytest.approx(after, rel=6e-3)
    assert change == "same" or float(change) == pytest.approx(after - before, rel=6e-3)
    assert told["released"] == {"held": "", "hidden": True}


def test_the_group_runs_across_the_parallel_axes(told):
    assert told["at_start"]["parallel"] == 0
    assert told["grouped"]["parallel"] > 0


def test_markup_in_names_stays_text(drawn, tmp_path):
    """Seen in the browser with the page's own security policy lifted, so that nothing but escaping holds."""
    nasty = "</script><img src=x onerror=document.title='ran'>"
    study = replace(drawn.study, name=nasty, description=f"at {nasty}")
    page = dashboard_html(study, drawn.front, drawn.evaluated, drawn.summary)
    page = re.sub(r'<meta http-equiv="Content-Security-Policy"[^>]*>', "", page)
    path = tmp_path / "page.html"
    path.write_text(page, encoding="utf-8")
    command = [BROWSER, *FLAGS, f"--user-data-dir={tmp_path / 'profile'}", path.as_uri()]
    done = subprocess.run(command, capture_output=True, text=True, timeout=SECONDS, check=False)
    assert "<title>ran</title>" not in done.stdout
    assert '<img src="x"' not in done.stdout
    assert html.escape(nasty, quote=False) in done.stdout
    assert 'data-ready="yes"' in done.stdout


def test_a_picture_of_the_page_is_kept(drawn, tmp_path_factory):
    """For people to look at: the session's temporary folder holds it."""
    folder = tmp_path_factory.mktemp("screenshots")
    (folder / "page.html").write_text(drawn.html, encoding="utf-8")
    flags = [flag for flag in FLAGS if flag != "--dump-dom"]
    target = folder / "dashboard.png"
    command = [BROWSER, *flags, f"--screenshot={target}", f"--user-data-dir={folder / 'profile'}"]
    subprocess.run(
        [*command, (folder / "page.html").as_uri()], capture_output=True, timeout=SECONDS, check=False
    )
    assert target.read_bytes()[:4] == b"\x89PNG"
    assert target.stat().st_size > 50_000  # an empty page is a tenth of it
