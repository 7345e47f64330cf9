"""Comparison of runs: what changed in the studies, what moved, and a page that is only text."""

import json
from base64 import b64decode
from dataclasses import replace
from html.parser import HTMLParser

import pytest

from optimizer.comparison import compare
from optimizer.comparison.comparison import moved, movement_words, signed
from optimizer.comparison.page import comparison_page
from optimizer.comparison.study_changes import study_changes
from optimizer.comparison.tables import cares
from optimizer.comparison.telling import as_json, check_page, print_comparison
from optimizer.errors import InputError
from optimizer.report.designs import KINDS
from optimizer.runs.run import run_search
from optimizer.runs.stored_run import read_run
from optimizer.study.study import Study

NASTY = "</script><img onerror=alert(1) src=x>"


@pytest.fixture(scope="module")
def hotter(rooftop, tmp_path_factory):
    """The rooftop study in hotter air, one class, another packing."""
    folder = tmp_path_factory.mktemp("hotter")
    text = rooftop.path.read_text().replace('ambient = "45 degC"', 'ambient = "55 degC"')
    text = text.replace(
        'device_classes = ["silicon IGBT", "superjunction MOSFET", "SiC MOSFET", "GaN HEMT"]',
        'device_classes = ["superjunction MOSFET"]',
    )
    (folder / "hotter.toml").write_text(text + "\n[rules]\npacking_factor = 0.5\n")
    study = Study.read(folder / "hotter.toml").with_effort(40, 30)
    run_search(study, folder / "hotter", seed=3, workers=1)
    return read_run(folder / "hotter")


@pytest.fixture(scope="module")
def found(stored, hotter):
    return compare([stored, hotter])


def test_changed_keys_are_named_with_both_values(stored, hotter):
    changes = {change.key: (change.before, change.after) for change in study_changes(stored, hotter)}
    assert changes == {
        "application.ambient": ('"45 degC"', '"55 degC"'),
        "search.device_classes": (
            '["silicon IGBT", "superjunction MOSFET", "SiC MOSFET", "GaN HEMT"]',
            '["superjunction MOSFET"]',
        ),
        "rules.packing_factor": ("nothing (its default)", "0.5"),
        "search run with generations": ("40", "30"),
    }


def test_a_run_differs_in_nothing_from_itself(stored):
    found = compare([stored, stored])
    assert found.changes == ((),)
    for pick in found.picks:
        assert all(moved(pick.designs[0], pick.designs[1], kind) == [] for kind in KINDS)
        assert movement_words(*pick.designs, "EUR")[0].split(":")[0].endswith("in both")


def test_designs_at_equal_volume(found, stored, hotter):
    pick = found.picks[1]
    volume = max(design["volume_l"] for design in pick.designs)
    for run, design in zip((stored, hotter), pick.designs, strict=True):
        front = run.table[run.table.overall_front]
        as_small = front[front.volume_l <= volume]
        assert design["loss_weighted_percent"] <= as_small.loss_weighted_percent.min() + 1e-12


@pytest.mark.parametrize("kind", KINDS)
def test_what_moved_adds_up_to_the_change_of_the_total(found, kind):
    _, _, total, _ = KINDS[kind]
    for pick in found.picks:
        before, after = pick.designs
        changes = moved(before, after, kind)
        whole = sum(abs(change) for _, change in changes)
        assert sum(change for _, change in changes) == pytest.approx(
            after[total] - before[total], abs=1e-5 * whole
        )
        assert [abs(change) for _, change in changes] == sorted((abs(c) for _, c in changes), reverse=True)


def test_words_name_the_greatest_change_first(found):
    before, after = found.picks[0].designs
    words = movement_words(before, after, "EUR")
    name, change = moved(before, after, "Losses at rated load")[0]
    assert f"above all {name} {signed(change)}" in words[1]
    assert (
        f"weighted loss {before['loss_weighted_percent']:.2f} to {after['loss_weighted_percent']:.2f} %"
        in words[0]
    )


@pytest.mark.parametrize(("value", "text"), [(1.234, "+1.2"), (-0.5, "-0.50"), (0.0, "0"), (-1e-9, "0")])
def test_changes_carry_their_sign(value, text):
    assert signed(value) == text


class Reading(HTMLParser):
    def __init__(self):
        super().__init__()
        self.tags, self.images, self.text = [], [], []

    def handle_starttag(self, tag, attrs):
        self.tags.append(tag)
        assert not [name for name, _ in attrs if name.startswith("on") or name == "href"]
        self.images += [value for name, value in attrs if name == "src"]

    def handle_data(self, data):
        self.text.append(data)


def read(html):
    reading = Reading()
    reading.feed(html)
    return reading


def test_the_page_fetches_nothing_and_shows_all_fronts(found):
    reading = read(comparison_page(found))
    assert "script" not in reading.tags
    assert len(reading.images) == 3
    for image in reading.images:
        drawing = b64decode(image.removeprefix("data:image/svg+xml;base64,")).decode()
        assert all(label in drawing for label in found.labels)


def test_words_of_a_study_stay_words(stored, hotter):
    nasty = replace(hotter, study=replace(hotter.study, name=NASTY, currency="<i>EUR</i>"))
    plain, page = read(comparison_page(compare([stored, hotter]))), comparison_page(compare([stored, nasty]))
    reading = read(page)
    assert NASTY in reading.text
    assert reading.tags.count("img") == plain.tags.count("img") == 3
    assert "<img onerror" not in page


def test_json_holds_runs_changes_and_movements(found):
    content = json.loads(as_json(found))
    assert [run["label"] for run in content["runs"]] == list(found.labels)
    assert {key["key"] for key in content["changes"][0]["keys"]} >= {"application.ambient"}
    assert content["picks"][0]["moved"][0]["Volumes"] == dict(moved(*found.picks[0].designs, "Volumes"))


def test_what_is_printed(found, capsys):
    print_comparison(found)
    printed = " ".join(capsys.readouterr().out.split())
    assert "packing_factor" in printed
    assert "above all" in printed


def test_different_power_and_currency_are_cautioned(stored, hotter):
    larger = replace(hotter.study.specification, apparent_power_va=10e3)
    other = replace(hotter, study=replace(hotter.study, specification=larger, currency="EUR"))
    told = " ".join(cares(compare([stored, other])))
    assert "5.00 kVA, 10.0 kVA" in told
    assert "different currencies (currency units, EUR)" in told
    assert cares(compare([stored, hotter])) == ()


def test_one_run_is_not_enough(stored):
    with pytest.raises(InputError, match="given 1 run, expected at least two run folders"):
        compare([stored])


@pytest.mark.parametrize("name", ["page.pdf", "missing/page.html"])
def test_where_no_page_can_be_written(tmp_path, name):
    with pytest.raises(InputError, match="--out"):
        check_page(tmp_path / name)
