"""The command that looks around a design: files, page, bad input."""

import json
import re

import pandas as pd
import pytest

from optimizer.certainty.neighbourhood import as_json, neighbourhood, write_neighbourhood
from optimizer.certainty.sensitivity import COLUMNS
from optimizer.errors import InputError


@pytest.fixture(scope="module")
def found(stored):
    return neighbourhood(stored, "balanced")


def test_three_files_of_one_design(found, tmp_path):
    paths = write_neighbourhood(found, tmp_path / "new" / "out")
    assert [path.name for path in paths] == [f"{found.design_id}.{end}" for end in ("html", "csv", "json")]
    assert list(pd.read_csv(paths[1]).columns) == list(COLUMNS)
    told = json.loads(paths[2].read_text())
    assert told["design"] == found.design_id
    assert set(told["tolerances"]["bands"]) >= {"weighted loss", "volume", "price"}


def test_the_page_needs_no_network_and_no_script(found, tmp_path):
    html = write_neighbourhood(found, tmp_path)[0].read_text()
    assert "default-src 'none'" in html
    assert not re.search(r"<script|https?://(?!www\.w3\.org)", html)
    assert html.count("<img") == 2
    text = re.sub(r"<style>.*?</style>|<[^>]+>", " ", html, flags=re.DOTALL)
    assert not re.findall(r"\b[a-z]+_[a-z_]+\b", text)  # no name of the program


def test_the_design_is_named_by_id_or_role_and_else_recommended(stored, found):
    by_id = neighbourhood(stored, found.design_id)
    assert by_id.row == found.row
    assert as_json(by_id) == as_json(found)
    assert neighbourhood(stored).row == found.chosen.recommended


def test_an_unknown_design_is_told(stored):
    with pytest.raises(
        InputError, match=r'--design: given "X-1", expected an id of front.csv, such as .* balanced'
    ):
        neighbourhood(stored, "X-1")


def test_a_file_is_no_folder(found, tmp_path):
    (tmp_path / "taken").write_text("mine")
    with pytest.raises(InputError, match="given a file, expected a folder"):
        write_neighbourhood(found, tmp_path / "taken")
    assert (tmp_path / "taken").read_text() == "mine"
