# ruff: noqa: E501
"""The linked chart: views, data, fields, selections."""

import re
import warnings

import altair
import pytest
import vl_convert

from optimizer.charts import dashboard
from optimizer.charts.content import content
from optimizer.charts.selections import DESIGNS
from optimizer.charts.views import linked_views
from optimizer.objectives import OBJECTIVES

VIEWS = (
    "front_points", "front_reach", "front_picked", "least_loss_weighted_percent_lines", "least_volume_l_lines",
    "parallel_group", "parallel_held", "parallel_picked", "front_marks", "front_held", "card_headline", "loss_bars", "loss_means", "volume_bars", "volume_means", "margins_bars", "spectrum_stems",
    "spectrum_limits", "load_curve_picked", "load_curve_group",
)  # fmt: skip


def units(spec):
    parts = [part for kind in ("vconcat", "hconcat", "layer") for part in spec.get(kind, ())]
    return [unit for part in parts for unit in units(part)] if parts else [spec]


def parts_of(value):
    yield value
    for inner in value.values() if isinstance(value, dict) else value if isinstance(value, list) else ():
        yield from parts_of(inner)


def made_by(transform):
    made = transform.get("as", [])
    names = {made} if isinstance(made, str) else set(made)
    for kind in ("aggregate", "window"):
        names |= {entry["as"] for entry in transform.get(kind, ())}
    return names


def read_by(unit):
    """Names of all fields that a view reads, in encodings, transforms and expressions."""
    for part in parts_of([unit.get("encoding", {}), unit.get("transform", []), unit.get("mark", {})]):
        if isinstance(part, dict):
            yield from (part[key] for key in ("field",) if isinstance(part.get(key), str))
            yield from (name for key in ("flatten", "fold") for name in part.get(key, ()))
        elif isinstance(part, str):
            yield from re.findall(r"\bdatum\.(\w+)", part)


@pytest.fixture(scope="module")
def spec(drawn):
    return linked_views(drawn.study, content(drawn.study, drawn.front, drawn.evaluated)).to_dict()


def test_all_views_are_there(spec):
    names = [unit["name"] for unit in units(spec)]
    assert len(names) == len(set(names))
    for view in VIEWS:
        assert any(re.fullmatch(rf"{view}(_\d+)?", name) for name in names), view


def test_every_field_is_in_its_data_or_made_on_the_way(drawn, spec):
    common = set().union(*(made_by(transform) for transform in spec["transform"]))
    fields = set()
    for unit in units(spec):
        data = unit.get("data", spec["data"])
        records = drawn.spec["datasets"][data["name"]] if "name" in data else data["values"]
        made = set().union(common, *(made_by(transform) for transform in unit.get("transform", ())))
        read = set(read_by(unit)) - {"label"}  # an axis tick's own text
        for record in records:
            assert read - made <= set(record), (unit["name"], read - made - set(record))
        fields |= read
    assert {"overall_front", "margin", "efficiency", "amplitude", "limit", "loss_conduction_w"} <= fields


def test_designs_are_there_once(spec, drawn):
    inline = [unit["data"]["values"] for unit in units(spec) if "values" in unit.get("data", {})]
    assert all("design_id" not in record for records in inline for record in records)
    sets = drawn.spec["datasets"]
    assert [name for name, records in sets.items() if "design_id" in records[0]] == [DESIGNS]
    ids = [record["design_id"] for record in sets[DESIGNS]]
    assert len(ids) == len(set(ids))


def test_selections_are_bound_to_one_layer_each(spec):
    names = {unit["name"] for unit in units(spec)}
    selections = {entry["name"]: entry for entry in spec["params"] if "select" in entry}
    assert set(selections) == {"group", "classes", "pointed", "pinned"}
    assert all(len(entry["views"]) == 1 and set(entry["views"]) <= names for entry in selections.values())
    assert selections["classes"]["bind"] == "legend"
    assert selections["pointed"]["select"]["nearest"]


def test_axes_offer_all_objectives_the_study_s_first(spec, drawn):
    offered = {
        entry["name"]: entry["bind"]["options"]
        for entry in spec["params"]
        if isinstance(entry.get("bind"), dict)
    }
    columns = [entry.column for entry in OBJECTIVES.values()]
    assert columns[:3] == ["loss_weighted_percent", "volume_l", "price"]
    assert offered == {"x_axis": columns, "y_axis": columns, "point_size": [*columns, "equal"]}
    values = {entry["name"]: entry.get("value") for entry in spec["params"]}
    assert (values["x_axis"], values["y_axis"], values["point_size"]) == tuple(columns[:3])


def test_axis_titles_carry_units(spec):
    titles = [
        part["title"]
        for unit in units(spec)
        for channel in ("x", "y")
        if isinstance(part := unit.get("encoding", {}).get(channel, {}), dict)
        and isinstance(part.get("title"), str)
    ]
    assert len(titles) > 8
    assert all(re.search(r"\[.+\]$", title) for title in titles)


def test_a_notebook_gets_a_chart_with_its_data_and_keeps_its_own_settings(drawn):
    before = altair.data_transformers.active, dict(altair.data_transformers.options), altair.theme.active
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        chart = dashboard(drawn.study, drawn.front, drawn.evaluated, drawn.summary)
        assert isinstance(chart, altair.TopLevelMixin)
        told = chart.to_dict()
    assert told["datasets"] == drawn.spec["datasets"]
    assert (
        altair.data_transformers.active,
        dict(altair.data_transformers.options),
        altair.theme.active,
    ) == before


def test_it_compiles_to_a_chart_whose_signals_the_page_listens_to(drawn):
    compiled = vl_convert.vegalite_to_vega(drawn.spec)
    signals = {entry["name"] for entry in compiled["signals"]}
    assert {"group", "classes", "pinned", "picked", "from_table", "x_axis", "y_axis"} <= signals
    assert DESIGNS in {entry["name"] for entry in compiled["data"]}
