"""Weighted efficiencies: published weights and worked examples. Ids, sources and tolerances are the rows'."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from check_rows import CHECKS, assert_meets, params

from models.roll_up import weighted_efficiency
from models.specification import CALIFORNIAN_WEIGHTS, EUROPEAN_WEIGHTS

WEIGHTS = {"LIM-EU": EUROPEAN_WEIGHTS, "LIM-CEC": CALIFORNIAN_WEIGHTS}
EXAMPLES = {"LIM-EUX": EUROPEAN_WEIGHTS, "LIM-CECX": CALIFORNIAN_WEIGHTS}
TESTED = {*WEIGHTS, *EXAMPLES}


@pytest.mark.parametrize("row", params(list(WEIGHTS)))
def test_weights(row: dict[str, Any]) -> None:
    weights = WEIGHTS[row["id"]]
    assert [100.0 * level for level in weights] == pytest.approx(row["inputs"]["load_percent"])
    for place, weight in enumerate(weights.values()):
        assert_meets(row, weight, place)


@pytest.mark.parametrize("row", params(list(EXAMPLES)))
def test_worked_example(row: dict[str, Any]) -> None:
    weights = EXAMPLES[row["id"]]
    by_level = {float(level) / 100.0: value for level, value in row["inputs"]["eta"].items()}
    efficiency = np.array([by_level[level] for level in weights])
    assert_meets(row, float(weighted_efficiency(efficiency, np.array(list(weights.values())))))


@pytest.mark.parametrize("weights", [EUROPEAN_WEIGHTS, CALIFORNIAN_WEIGHTS])
def test_weights_sum_to_one(weights: dict[float, float]) -> None:
    assert sum(weights.values()) == pytest.approx(1.0, abs=1e-12)
    assert set(CHECKS) >= TESTED
