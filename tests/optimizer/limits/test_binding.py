"""What limits the fronts, against margins and places written by hand."""

import numpy as np
import pandas as pd
import pytest

from models.evaluation import Constraint
from optimizer.charts.limiting import fields
from optimizer.limits.binding import BINDING, COLUMNS, KINDS, RANGE, binding_table, kind_of, octave
from optimizer.prepared import search_space
from optimizer.runs.fronts import front


def required(name, margin):
    margin = np.asarray(margin, dtype=float)
    return Constraint(name, "", margin, margin, margin, "max")


@pytest.fixture(scope="module")
def space(rooftop):
    return search_space(rooftop, rooftop.concepts[2])


def points_of(space, count):
    return space.repaired(np.full((count, len(space.variables)), 0.5))


def test_octaves_count_from_1_khz():
    assert octave(np.array([1e3, 15.9e3, 16e3, 31.9e3, 150e3])).tolist() == [0.0, 3.0, 4.0, 4.0, 7.0]


def test_the_limit_that_most_designs_stand_at_comes_first(space):
    frequency = np.array([10e3, 10e3, 10e3, 10e3, 40e3])
    constraints = (
        required("heatsink temperature", [0.01, 0.3, 0.3, 0.3, 0.3]),
        required("tightest harmonic", [0.01, 0.04, 0.049, 0.06, 0.001]),
        required("dc voltage over device rating", [0.01] * 5),  # no design moves it
        required("distance from emission limit", [0.01, 0.01, 0.01, 0.01, 0.2]),  # its filter is sized to it
    )
    table = binding_table("SiC MOSFET", space, points_of(space, 5), frequency, constraints)
    assert list(table.columns) == list(COLUMNS)
    low = table[table["from [kHz]"] == 8.0]
    assert list(low["limit"]) == ["tightest harmonic", "heatsink temperature", "distance from emission limit"]
    assert list(low["designs at it [%]"]) == [75.0, 25.0, 100.0]
    assert list(low["least margin [%]"]) == pytest.approx([1.0, 1.0, 1.0])
    high = table[table["from [kHz]"] == 32.0]
    assert list(high["limit"]) == ["tightest harmonic"]
    assert set(low["designs"]) == {4}


def test_ends_of_search_ranges_limit_too_where_a_study_could_move_them(space):
    points = points_of(space, 4)
    points[:3, space.axis["damping"]] = 0.0
    points[:, space.axis["switching_frequency"]] = 1.0
    points[:, space.axis["inverter window use"]] = 1.0  # the whole window: no range to widen
    points[:, space.axis["parallel"]] = 0.0  # one package: there is nothing below
    table = binding_table("SiC MOSFET", space, space.repaired(points), np.full(4, 150e3), ())
    assert list(table["kind"]) == [RANGE, RANGE]
    assert table["limit"][0] == "switching frequency at the greatest searched (200 kHz)"
    assert table["limit"][1].startswith("damping resistance at the least searched")
    assert list(table["designs at it [%]"]) == [100.0, 75.0]


def test_every_requirement_of_a_real_front_is_told_as_its_margins_say(small_search):
    found = front(small_search)
    concept = found.table.concept.iloc[0]
    rows = (found.table.concept == concept).to_numpy()
    khz = found.table.switching_frequency_hz[rows] / 1e3
    for _, row in found.binding[found.binding.concept == concept].iterrows():
        inside = ((khz >= row["from [kHz]"]) & (khz < row["to [kHz]"])).to_numpy()
        assert inside.sum() == row["designs"]
        if row["limit"] in found.margins:
            margins = found.margins.loc[rows, row["limit"]][inside]
            assert 100.0 * (margins < BINDING).mean() == pytest.approx(row["designs at it [%]"])
    assert set(found.binding["kind"]) <= set(KINDS)


@pytest.mark.parametrize(
    ("name", "kind"),
    [
        ("volume wanted", "the study's own limits"),
        ("inverter-side inductor temperature", "inductors"),
        ("switch junction temperature", "heat"),
        ("dc-link life", "filter and dc link"),
        ("switching frequency over the device's greatest", "bridge"),
        ("total current distortion", "distortion"),
    ],
)
def test_kinds(name, kind):
    assert kind_of(name) == kind


def test_fields_show_a_requirement_and_a_range(space):
    points = points_of(space, 2)
    points[:, space.axis["damping"]] = 0.0
    constraints = (required("heatsink temperature", [0.01, 0.3]),)
    (shown,) = fields(binding_table("SiC MOSFET", space, points, np.full(2, 20e3), constraints), 60)
    assert shown["first"] == ["heatsink temperature"]
    assert shown["kind"] == "heat"
    assert shown["band"] == "16 to 32"
    assert shown["second"][0].startswith("damping resistance")
    assert shown["share"] == "50 % of 2 designs"
    assert fields(pd.DataFrame(columns=list(COLUMNS)), 60) == []
