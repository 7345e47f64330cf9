"""The page: one file, nothing fetched, nothing hidden."""

import re
from dataclasses import replace
from html.parser import HTMLParser

import numpy as np
import pytest
from page_reading import carried

from optimizer.charts import dashboard_html, library
from optimizer.runs.fronts import Front

LARGEST = 12e6


class Sources(HTMLParser):
    """Collects what a page would fetch, and its text outside scripts."""

    def __init__(self):
        super().__init__()
        self.fetched, self.text, self.inside = [], [], None

    def handle_starttag(self, tag, attrs):
        self.inside = tag
        self.fetched += [
            value for name, value in attrs if name in ("src", "href", "data", "srcset", "action")
        ]

    def handle_endtag(self, tag):
        self.inside = None

    def handle_data(self, data):
        if self.inside not in ("script", "style"):
            self.text.append(data)


def read(html):
    parser = Sources()
    parser.feed(html)
    return parser.fetched, " ".join(" ".join(parser.text).split())


def some(front, rows):
    arrays = {
        name: getattr(front, name)[rows]
        for name in ("efficiency", "line_order", "line_amplitude", "line_limit")
    }
    frames = {name: getattr(front, name).iloc[rows].reset_index(drop=True) for name in ("table", "margins")}
    lines = replace(front.emission, **{name: value[rows] for name, value in vars(front.emission).items()})
    return replace(front, **arrays, **frames, emission=lines)


def test_nothing_is_fetched_and_the_browser_is_told_so(drawn):
    fetched, _ = read(drawn.html)
    assert fetched == []
    assert "default-src 'none'" in drawn.html
    style = re.search(r"<style>(.*?)</style>", drawn.html, re.DOTALL).group(1)
    assert "url(" not in style
    assert "@import" not in style
    assert not re.search(r"<script[^>]+\bsrc=", drawn.html)


def test_it_is_of_a_size_to_be_mailed(drawn):
    assert len(drawn.html.encode()) < LARGEST


def test_task_cautions_and_counts_are_said(drawn):
    _, text = read(drawn.html)
    assert drawn.study.name in text
    assert drawn.study.description in text
    assert "5 kVA, single phase" in text
    assert "Mind the <dc link>." in text
    assert "No design here has been built or verified" in text
    for name, count in drawn.front.table.concept.value_counts().items():
        assert f"{name} {count} of {count}" in text
    assert f"{drawn.summary['evaluations']:,} candidates evaluated" in text


def test_where_designs_are_left_out_it_says_how_many(drawn):
    rows = np.tile(np.arange(len(drawn.front.table)), 15)
    many = some(drawn.front, rows)
    many.table["design_id"] = [f"D{number}" for number in range(len(rows))]
    many.table["loss_weighted_percent"] *= np.linspace(1.0, 1.3, len(rows))
    _, text = read(dashboard_html(drawn.study, many, drawn.evaluated, drawn.summary))
    counts = many.table.concept.value_counts()
    assert counts.max() > 300
    for name, count in counts.items():
        assert f"{name} {min(count, 300)} of {count}" in text


def test_a_class_without_designs_is_named_with_what_it_misses(drawn):
    left = some(drawn.front, np.flatnonzero(drawn.front.table.concept != "silicon IGBT"))
    ruled_out = {"silicon IGBT": [["heatsink temperature", 0.9, "12 % beyond its limit"]]}
    _, text = read(dashboard_html(drawn.study, left, None, {**drawn.summary, "ruled_out": ruled_out}))
    assert "No feasible design with silicon IGBT: the nearest one misses heatsink temperature." in text


def test_words_of_a_study_cannot_become_markup(drawn):
    nasty = replace(
        drawn.study, name="</title><script>alert(1)</script>", description='"><img src="http://x/y">'
    )
    html = dashboard_html(nasty, drawn.front, drawn.evaluated, {})
    fetched, text = read(html)
    assert fetched == []
    assert "<script>alert(1)</script>" in text
    assert html.count("<script") == drawn.html.count("<script")


def test_the_same_run_gives_the_same_page(drawn):
    assert dashboard_html(drawn.study, drawn.front, drawn.evaluated, drawn.summary) == drawn.html


@pytest.mark.parametrize("rows", [[0], [0, 1]])
def test_one_or_two_designs_are_enough(drawn, rows):
    html = dashboard_html(drawn.study, some(drawn.front, rows), None, {})
    assert len(carried(html, "spec")["datasets"]["designs"]) == len(rows)


def test_the_table_shows_fields_that_the_designs_have(drawn):
    columns = carried(drawn.html, "table-columns")
    designs = drawn.spec["datasets"]["designs"]
    fields = {column["field"] for column in columns["columns"]}
    assert fields | {columns["first"]} <= set(designs[0])
    assert {"design_id", "modulation", "switching_frequency_khz", "junction_temperature_c"} <= fields


def test_the_process_beside_gives_the_library_and_it_is_kept(monkeypatch):
    monkeypatch.setattr(library, "_kept", [])
    with library.library_beside() as script:
        beside = script()
    assert "vegaEmbed" in beside
    monkeypatch.setattr(library, "ASK", "raise SystemExit(1)")
    with library.library_beside() as script:
        assert script() is beside


def test_the_library_is_bundled_here_where_no_process_can_do_it(drawn, monkeypatch):
    monkeypatch.setattr(library, "_kept", [])
    monkeypatch.setattr(library, "ASK", "raise SystemExit(1)")
    with library.library_beside() as script:
        assert script() in drawn.html


def test_front_is_left_as_it_was(drawn):
    assert isinstance(drawn.front, Front)
    assert "x_value" not in drawn.front.table
