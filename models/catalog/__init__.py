"""Catalogue of component classes: TOML and CSV data with the origin of every value, and its loader."""

from models.catalog.loading import load_catalog
from models.catalog.parts import (
    AcCapacitor,
    Catalog,
    Conductor,
    CoreMaterial,
    CoreShape,
    CostModel,
    DcLinkCapacitor,
    Device,
    Fan,
    LimitBand,
    LimitTable,
    PartTable,
)

__all__ = [
    "AcCapacitor",
    "Catalog",
    "Conductor",
    "CoreMaterial",
    "CoreShape",
    "CostModel",
    "DcLinkCapacitor",
    "Device",
    "Fan",
    "LimitBand",
    "LimitTable",
    "PartTable",
    "load_catalog",
]
