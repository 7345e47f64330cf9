"""The starter study: it reads, shows every key, and its generated blocks stand as they are declared."""

import re
import tomllib

import pytest

from models.specification import DesignRules
from optimizer.study import ranges as search_ranges
from optimizer.study import schema as study_schema
from optimizer.study.starter import energy_block, ranges_block, rules_block, starter_text
from optimizer.study.study import Study

SHOWN = {
    "application": study_schema.APPLICATION
    + study_schema.STAND_ALONE_ONLY
    + study_schema.GRID_CONNECTED_ONLY,
    "weighting": study_schema.WEIGHTING + study_schema.CUSTOM_WEIGHTING,
    "bridge": study_schema.BRIDGE,
    "filter": study_schema.FILTER,
    "objectives": study_schema.MINIMISE,
    "energy": study_schema.ENERGY,
    "search": study_schema.SEARCH,
    "catalog": study_schema.CATALOG,
    "rules": study_schema.RULES,
}


@pytest.fixture
def read(tmp_path):
    def read_text(text):
        path = tmp_path / "starter.toml"
        path.write_text(text, encoding="utf-8")
        return Study.read(path)

    return read_text


@pytest.mark.parametrize("block", [energy_block, ranges_block, rules_block])
def test_generated_blocks_stand_in_the_starter_as_declared(block):
    assert block() in starter_text(), f"paste this into starter.toml:\n{block()}"


def uncommented(block):
    return "".join(line.removeprefix("# ") for line in block.splitlines(keepends=True))


def test_uncommenting_the_blocks_changes_nothing(read):
    text = starter_text()
    plain = read(text)
    spelled_out = text
    for block in (energy_block(), ranges_block(), rules_block()):
        spelled_out = spelled_out.replace(block, uncommented(block))
    full = read(spelled_out)
    assert full.file_hash != plain.file_hash
    assert full.specification == plain.specification
    assert full.specification.rules == DesignRules()
    assert (full.search, full.currency) == (plain.search, plain.currency)


def test_the_blocks_say_every_range_and_rule():
    assert set(tomllib.loads(uncommented(ranges_block()))) == {entry.name for entry in search_ranges.RANGES}
    assert set(tomllib.loads(uncommented(rules_block()))) == set(DesignRules.__dataclass_fields__)


@pytest.mark.parametrize("table", SHOWN)
def test_every_key_is_shown_under_its_table(table):
    parts = re.split(r"^(?:# )?\[([\w.]+)\]$", starter_text(), flags=re.MULTILINE)
    body = dict(zip(parts[1::2], parts[2::2], strict=True))
    for key in SHOWN[table]:
        if isinstance(key.kind, study_schema.SubTable) and f"{table}.{key.name}" in body:
            continue
        assert re.search(rf"^(# )?{key.name} = ", body[table], flags=re.MULTILINE), key.name


def test_what_is_commented_out_shows_the_defaults(read):
    asked = study_schema.STAND_ALONE_ONLY
    for key in asked:
        shown = re.search(rf"^# {key.name} = (.*?) +#", starter_text(), flags=re.MULTILINE)
        assert key.kind.read(tomllib.loads(f"x = {shown[1]}")["x"]) == pytest.approx(key.default)


def test_the_starter_as_stand_alone_study(read):
    text = starter_text().replace('kind = "grid-connected"  ', 'kind = "stand-alone"  ')
    text = text.replace('harmonic_limits = "IEEE 1547-2018"', "")
    text = re.sub(r"^# (rectifier_share|crest_factor|voltage_thd)", r"\1", text, flags=re.MULTILINE)
    assert read(text).specification.application == "stand-alone"


def test_the_starter_warns():
    assert "Lethal voltages" in starter_text()
