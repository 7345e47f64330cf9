"""Inverters with everything solved that does not depend on a candidate, and their search spaces."""

from __future__ import annotations

from models.inverter import Inverter
from optimizer.catalog_listing import read_catalog
from optimizer.space import SearchSpace
from optimizer.study.concepts import Concept
from optimizer.study.study import Study

_prepared: dict[tuple[str, str], Inverter] = {}


def prepared_inverter(study: Study, bridge: str | None = None) -> Inverter:
    """The study's inverter with everything solved that does not depend on a candidate; kept for the last
    study asked.

    Args:
        study: the study.
        bridge: one of its bridges; its own where none is named.

    Raises:
        InputError: where the study names parts that the catalogue does not have.
    """
    key = study.file_hash, bridge or study.specification.bridge
    if key not in _prepared:
        for other in [other for other in _prepared if other[0] != study.file_hash]:
            del _prepared[other]
        catalog = next(iter(_prepared.values())).catalog if _prepared else read_catalog(study.catalog_files)
        study.check_against(catalog)
        inverter = Inverter(study.with_bridge(key[1]).specification, catalog)
        _ = inverter.tables, inverter.sinks, inverter.ac_capacitor
        _prepared[key] = inverter
    return _prepared[key]


def prepare(study: Study) -> None:
    """Have every bridge of a study ready, so that worker processes begin with them.

    Raises:
        InputError: as `prepared_inverter`.
    """
    for bridge in study.search.bridges:
        prepared_inverter(study, bridge)


def search_space(study: Study, concept: Concept) -> SearchSpace:
    """The search space of one concept of a study."""
    return SearchSpace(study, prepared_inverter(study, concept.bridge), concept.device_class)
