"""One small search, drawn: its parts, and the page with all its charts."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import pandas as pd
import pytest
from page_reading import carried

from optimizer.charts import dashboard_html
from optimizer.runs.fronts import Front, front
from optimizer.runs.run import evaluated_table
from optimizer.study.study import Study


@dataclass(frozen=True)
class Drawn:
    """What a dashboard is made from, and the page."""

    study: Study
    front: Front
    evaluated: pd.DataFrame
    summary: dict[str, Any]
    html: str

    @property
    def spec(self) -> dict[str, Any]:
        """The chart that the page carries."""
        return carried(self.html, "spec")


@pytest.fixture(scope="session")
def drawn(rooftop: Study, small_search: Any) -> Drawn:
    """The small search of the rooftop study, drawn."""
    fronts, evaluated = front(small_search), evaluated_table(small_search)
    summary = {
        "seed": 3,
        "evaluations": small_search.evaluations,
        "version": "0.0",
        "caution": "Mind the <dc link>.",
    }
    return Drawn(rooftop, fronts, evaluated, summary, dashboard_html(rooftop, fronts, evaluated, summary))
