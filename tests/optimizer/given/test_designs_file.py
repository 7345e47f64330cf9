# ruff: noqa: E501
"""Designs by hand: rows of a front come back the same; every fault is told with its place."""

import numpy as np
import pytest

from optimizer.errors import InputError
from optimizer.given.designs_file import read_designs
from optimizer.given.evaluate import evaluated_table, written_table
from optimizer.prepared import prepared_inverter
from optimizer.runs.fronts import front


@pytest.fixture(scope="module")
def table(small_search):
    return front(small_search).table.iloc[::29]


@pytest.fixture
def given(tmp_path, table):
    def write(change=lambda text: text):
        path = tmp_path / "designs.csv"
        path.write_text(change(table.to_csv(index=False)))
        return path

    return write


def test_rows_of_a_front_come_back_with_the_same_results(given, table, rooftop):
    inverter = prepared_inverter(rooftop)
    again = evaluated_table(rooftop, inverter, read_designs(given(), inverter))
    assert again.feasible.all()
    assert list(again.design_id) == list(table.design_id)
    for column in (
        "loss_rated_w",
        "volume_l",
        "price",
        "current_thd",
        "junction_temperature_c",
        "efficiency_weighted",
    ):
        np.testing.assert_allclose(again[column], table[column], rtol=1e-6)


def test_json_and_csv_hold_every_row(given, rooftop):
    inverter = prepared_inverter(rooftop)
    table = evaluated_table(rooftop, inverter, read_designs(given(), inverter))
    assert written_table(table, "json").count('"design_id"') == len(table)
    assert written_table(table, "csv").count("\n") == len(table) + 1


@pytest.mark.parametrize(
    ("change", "told"),
    [
        (lambda text: text.replace("switching_frequency_hz", "switching_frequency_khz"),
         r"designs.csv: switching_frequency_hz: given no such column, expected a number above 0"),
        (lambda text: text.replace("switching_frequency_hz", "switching_frequency_khz"),
         r"given a column 'switching_frequency_khz', expected a known column \(the nearest is switching_frequency_hz\)"),
        (lambda text: text.replace("SiC 650 V", "SiC 65 V", 1), r"row \d+, device: given 'SiC 65 V', expected .* the nearest is 'SiC 650 V'"),
        (lambda text: text.replace(",natural,", ",lukewarm,", 1), r"row \d+, cooling: given 'lukewarm', expected one of the 3 names"),
        (lambda text: "", "given no rows, expected a header and 1 to"),
        (lambda text: text.splitlines()[0] + "\n", "given no rows"),
    ],
)  # fmt: skip
def test_faults_are_told(given, rooftop, change, told):
    with pytest.raises(InputError, match=told):
        read_designs(given(change), prepared_inverter(rooftop))


@pytest.mark.parametrize("cell", ["-1", "0", "nan", "inf", "much", ""])
def test_bad_numbers_are_told(given, table, rooftop, cell):
    broken = table.copy().astype({"die_area_mm2": object})
    broken.iloc[0, broken.columns.get_loc("die_area_mm2")] = cell
    with pytest.raises(InputError, match="row 2, die_area_mm2: given .*, expected a number above 0"):
        read_designs(given(lambda _: broken.to_csv(index=False)), prepared_inverter(rooftop))


GRID_SIDE = ["core_material", "core", "stack", "turns", "conductor", "copper_area_mm2"]


def test_inductors_left_out_are_sized(given, table, rooftop):
    """Both sides without parts: same inductance, an ordinary build of its own, told in a note."""
    lean = table.drop(
        columns=[f"{side}_inductor_{part}" for side in ("inverter", "grid") for part in GRID_SIDE]
    )
    inverter = prepared_inverter(rooftop)
    read = read_designs(given(lambda _: lean.to_csv(index=False)), inverter)
    told = " ".join(read.notes)
    assert "inverter-side inductor: sized by the rules of the search" in told
    assert "grid-side inductor: sized by the rules of the search" in told
    found = evaluated_table(rooftop, inverter, read)
    for side in ("inverter", "grid"):
        assert (found[f"margin: {side}-side inductor flux density"] > -0.05).all()
        assert (found[f"{side}_inductor_core_material"] == "amorphous tape 25 um").all()
    np.testing.assert_allclose(found.loss_conduction_w, table.loss_conduction_w, rtol=1e-6)
    np.testing.assert_allclose(found.loss_switching_w, table.loss_switching_w, rtol=1e-6)


@pytest.mark.parametrize(
    ("column", "cell", "told"),
    [
        (
            "filter_capacitance_f",
            "0",
            r"row 2, grid_inductance_h: given .*, expected 0 where filter_capacitance_f",
        ),
        ("grid_inductor_core", "", "row 2, grid_inductor_core: given nothing, expected what the grid-side"),
    ],
)
def test_a_grid_side_that_does_not_fit_is_told(given, table, rooftop, column, cell, told):
    broken = table.copy().astype({column: object})
    broken.iloc[0, broken.columns.get_loc(column)] = cell
    with pytest.raises(InputError, match=told):
        read_designs(given(lambda _: broken.to_csv(index=False)), prepared_inverter(rooftop))


def test_die_area_may_not_be_left_out_where_it_is_a_choice(given, table, rooftop):
    path = given(lambda _: table.drop(columns="die_area_mm2").to_csv(index=False))
    with pytest.raises(InputError, match=r"die_area_mm2: given no such column, expected a column of areas"):
        read_designs(path, prepared_inverter(rooftop))


def test_missing_and_binary_files(tmp_path, rooftop):
    inverter = prepared_inverter(rooftop)
    with pytest.raises(InputError, match="nowhere.csv: given a file that cannot be read"):
        read_designs(tmp_path / "nowhere.csv", inverter)
    (tmp_path / "b.csv").write_bytes(b"\xff\xfe\x00\x81")
    with pytest.raises(InputError, match="given bytes that are no text"):
        read_designs(tmp_path / "b.csv", inverter)
