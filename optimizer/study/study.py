"""A study: one inverter's task and what the search may vary, read from a TOML file and checked."""

from __future__ import annotations

import hashlib
import re
import tomllib
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from models.ownership import EnergyTerms
from models.specification import (
    CALIFORNIAN_WEIGHTS,
    EUROPEAN_WEIGHTS,
    STAND_ALONE,
    DesignRules,
    Specification,
)
from models.uncertainty import Uncertainty
from optimizer.errors import InputError, Problem
from optimizer.study.checks import (
    bridges_of,
    check_content,
    chosen_modulations,
    phase_voltage,
    unused_ranges,
)
from optimizer.study.concepts import Concept, concepts
from optimizer.study.limit_checks import unfitting_limits
from optimizer.study.quantity import show
from optimizer.study.ranges import SearchRange
from optimizer.study.schema import (
    CALIFORNIAN,
    CURRENCY,
    DEFAULT_LIMITS,
    EUROPEAN,
    NO_EMISSION_LIMIT,
    NOMINAL_VALUES,
    SIDES,
    STAND_ALONE_ONLY,
    StudyContent,
    read_content,
)
from optimizer.study.table import Reading, nearest, one_of

if TYPE_CHECKING:
    from models.catalog.parts import Catalog

LARGEST_FILE = 1_000_000
"""Bytes; a study file is a page of text, so that more is some other file."""

WEIGHTS = {EUROPEAN: EUROPEAN_WEIGHTS, CALIFORNIAN: CALIFORNIAN_WEIGHTS}


@dataclass(frozen=True, kw_only=True)
class SearchSettings:
    """What the search may choose from, and how long it searches.

    Attributes:
        bridges: names, the specification's own first.
        modulations: names of the bridges' modulation schemes to choose from; each bridge uses those it has.
        filter_kind: LCL, LC or L.
        damping_branches: where the damping resistor may stand.
        device_classes: classes of semiconductors; each gets a front of its own.
        core_materials, core_families, conductors: names out of the catalogue; empty means all that fit.
        dc_links: technologies of dc-link capacitors.
        cooling: names out of models.designs.COOLING.
        ranges: search ranges in SI units by name, as ranges.RANGES declares them; without
            grid_inductance_ratio for an LC filter.
        population: candidates per generation and class [-].
        generations: at most [-].
        least_gain: relative gain of the hypervolume over the last `populations.GAIN_WINDOW` generations below
            which a population stops before; 0 lets it run [-].
        front_resolution: of two designs of a front that differ by less than this share of the front's range
            in every objective, one is kept [-].
        rank_by: one of schema.RANKINGS.
        limits_hold: probability with which each limit holds, where not the nominal values rank [-].
    """

    bridges: tuple[str, ...]
    modulations: tuple[str, ...]
    filter_kind: str
    damping_branches: tuple[str, ...]
    device_classes: tuple[str, ...]
    core_materials: tuple[str, ...]
    core_families: tuple[str, ...]
    conductors: tuple[str, ...]
    dc_links: tuple[str, ...]
    cooling: tuple[str, ...]
    ranges: Mapping[str, SearchRange]
    population: int
    generations: int
    least_gain: float
    front_resolution: float
    rank_by: str = NOMINAL_VALUES
    limits_hold: float = 0.9


@dataclass(frozen=True, kw_only=True)
class Study:
    """A study file read, checked and turned into SI units.

    Attributes:
        name, description: as the file has them.
        path: the file.
        file_hash: SHA-256 of its bytes, hexadecimal.
        specification: what the inverter is asked to do.
        search: what the search may vary.
        objectives: names of what is minimised, two to five.
        at_most: greatest value of an objective by its name (minimised or not), SI units; only those the study
            names.
        catalog_files: the user's own parts files.
        currency: what prices and costs are counted in.
        source: the file's bytes.
        uncertainty: how far parts and models may be off.
    """

    name: str
    description: str
    path: Path
    file_hash: str
    specification: Specification
    search: SearchSettings
    objectives: tuple[str, ...]
    at_most: Mapping[str, float]
    catalog_files: tuple[Path, ...] = ()
    currency: str = CURRENCY
    source: bytes = field(default=b"", repr=False)
    uncertainty: Uncertainty = field(default_factory=Uncertainty)

    @property
    def concepts(self) -> tuple[Concept, ...]:
        """What the study compares: every device class on every bridge."""
        return concepts(self.search.bridges, self.search.device_classes)

    @property
    def folder_name(self) -> str:
        """What its run folder is called: the name in characters that every file system takes."""
        return re.sub(r"[^\w .-]+", "_", self.name).strip(" .") or "study"

    @property
    def concept_names(self) -> tuple[str, ...]:
        """Names of the concepts."""
        return tuple(concept.name for concept in self.concepts)

    @classmethod
    def read(cls, path: Path | str, parts: Sequence[Path] | None = None) -> Study:
        """Return the study of a file.

        Args:
            path: the file.
            parts: where copies of its parts files lie, in its order; None where they lie as it says.

        Raises:
            InputError: with every problem of the file at once: file, key, what was given, what is expected.
        """
        path = Path(path)
        return cls.of_bytes(path, read_bytes(path), parts)

    @classmethod
    def of_bytes(cls, path: Path, raw: bytes, parts: Sequence[Path] | None = None) -> Study:
        """Return the study of a file's bytes; arguments and errors as in `read`."""
        reading = Reading(path, read_toml(path, raw), parts=parts)
        content = read_content(reading)
        check_content(reading, content)
        reading.raise_problems()
        return cls(
            name=content.top["name"],
            description=content.top["description"],
            path=path,
            file_hash=hashlib.sha256(raw).hexdigest(),
            specification=_specification(content),
            search=_search_settings(content),
            objectives=content.objectives,
            at_most=content.at_most,
            catalog_files=tuple(
                reading.parts_file(index, name) for index, name in enumerate(content.catalog["files"])
            ),
            currency=content.energy["currency"],
            source=raw,
            uncertainty=Uncertainty(**content.uncertainty),
        )

    def with_bridge(self, name: str) -> Study:
        """The same study of one of its bridges alone."""
        specification = replace(self.specification, bridge=name)
        return replace(self, specification=specification, search=replace(self.search, bridges=(name,)))

    def with_effort(self, population: int | None, generations: int | None) -> Study:
        """The same study searched with another population or number of generations; None keeps the study's
        own.
        """
        search = replace(
            self.search,
            population=self.search.population if population is None else population,
            generations=self.search.generations if generations is None else generations,
        )
        return replace(self, search=search)

    def check_against(self, catalog: Catalog) -> None:
        """Check that the catalogue has every device class, material, conductor and limit table asked for.

        Raises:
            InputError: with every unknown name and the nearest known one.
        """
        from models.magnetics.sizing import fitting_families

        search = self.search
        fitting = sorted(fitting_families(catalog, self.specification.phases))
        chosen: tuple[tuple[str, tuple[str, ...], Iterable[str]], ...] = (
            ("search.device_classes", search.device_classes, catalog.devices.column("device_class")),
            ("search.core_materials", search.core_materials, catalog.core_materials.names),
            ("search.core_families", search.core_families, fitting),
            ("search.conductors", search.conductors, catalog.conductors.names),
            ("search.dc_links", search.dc_links, catalog.dc_link_capacitors.column("technology")),
        )
        asked = [(f"{key}[{i}]", name, known) for key, names, known in chosen for i, name in enumerate(names)]
        tables = [table.name for table in catalog.limit_tables]
        asked.append(("application.harmonic_limits", self.specification.limit_table, tables))
        if self.specification.emission_limit:
            limits = (*catalog.emission_limits.names, NO_EMISSION_LIMIT)
            asked.append(("application.emission_limit", self.specification.emission_limit, limits))
        problems = [
            Problem(show(name), f"a name in the catalogue{_known(name, known)}", key, str(self.path))
            for key, name, known in asked
            if name not in set(known)
        ]
        problems = problems or self._unmade_inductors(catalog)
        problems = problems or unfitting_limits(self.specification, catalog, str(self.path))
        if problems:
            raise InputError(*problems)

    def _unmade_inductors(self, catalog: Catalog) -> list[Problem]:
        """Trouble where no core material asked for is sold in a core family asked for."""
        materials, families = self.search.core_materials, frozenset(self.search.core_families)
        wanted = materials or catalog.core_materials.names
        sold = [part for part in catalog.core_materials if part.name in wanted]
        if not families or any(families & set(part.families) for part in sold):
            return []
        known = sorted(frozenset().union(*(part.families for part in sold)))
        expected = f"a family that search.core_materials are sold in: {one_of(known)}"
        return [Problem(show(sorted(families)[0]), expected, "search.core_families[0]", str(self.path))]


def _known(name: str, known: Iterable[str]) -> str:
    listed = [str(other) for other in dict.fromkeys(known)]
    return nearest(name, listed) or (f": {one_of(listed)}" if listed else ", which has none")


def read_bytes(path: Path) -> bytes:
    """Return a study file's bytes; InputError where there is no such file or it is none."""
    expected = 'a study file (TOML text; "wattfront new" writes one to start from)'
    try:
        if path.is_dir():
            raise _whole_file(path, "a folder", expected)
        if not path.is_file():
            raise _whole_file(path, "no such file", expected)
        if path.stat().st_size > LARGEST_FILE:
            raise _whole_file(path, f"a file of {path.stat().st_size / 1e6:.1f} MB", expected)
        return path.read_bytes()
    except OSError as trouble:
        raise _whole_file(path, f"a file that cannot be read ({trouble.strerror})", expected) from trouble


def read_toml(path: Path, raw: bytes) -> dict[str, Any]:
    """Return what a study file's bytes hold; InputError where they are no TOML."""
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as trouble:
        line = raw.count(b"\n", 0, trouble.start) + 1
        raise _whole_file(path, f"bytes on line {line} that are no text", "TOML in UTF-8") from trouble
    if "\0" in text:
        raise _whole_file(path, "a binary file", "TOML in UTF-8")
    try:
        return tomllib.loads(text)
    except (ValueError, RecursionError) as trouble:
        raise _whole_file(path, f"text that is no TOML ({trouble})", "a study file in TOML") from trouble


def _whole_file(path: Path, given: str, expected: str) -> InputError:
    return InputError(Problem(given, expected, file=str(path)))


def _specification(content: StudyContent) -> Specification:
    asked = content.application
    nominal = phase_voltage(asked["ac_voltage"], asked["phases"])
    own = STAND_ALONE_ONLY if asked["kind"] == STAND_ALONE else ()
    return Specification(
        application=asked["kind"],
        phases=asked["phases"],
        apparent_power_va=asked["apparent_power"],
        power_factor_min=min(asked["power_factor_min"], asked["power_factor"]),
        power_factor=asked["power_factor"] * (1.0 if asked["power_factor_side"] == SIDES[0] else -1.0),
        short_circuit_ratio_min=content.short_circuit_ratio["min"],
        short_circuit_ratio_max=content.short_circuit_ratio["max"],
        phase_voltage_v=nominal,
        phase_voltage_min_v=nominal * (1.0 - asked["ac_voltage_tolerance"]),
        phase_voltage_max_v=nominal * (1.0 + asked["ac_voltage_tolerance"]),
        line_frequency_hz=asked["line_frequency"],
        dc_voltage_min_v=content.dc_voltage["min"],
        dc_voltage_v=content.dc_voltage["nominal"],
        dc_voltage_max_v=content.dc_voltage["max"],
        ambient_c=asked["ambient"],
        coolant_c=asked["coolant"],
        altitude_m=asked["altitude"],
        bridge=content.bridge["kind"],
        weights=_weights(content.weighting),
        limit_table=asked["harmonic_limits"] or DEFAULT_LIMITS[asked["kind"]],
        demand_current_a=asked["demand_current"],
        emission_limit="" if asked["emission_limit"] == NO_EMISSION_LIMIT else asked["emission_limit"],
        rules=DesignRules(**content.rules),
        energy=EnergyTerms(**{name: value for name, value in content.energy.items() if name != "currency"}),
        **{key.name: asked[key.name] for key in own},
    )


def _weights(weighting: Mapping[str, Any]) -> dict[float, float]:
    if weighting["scheme"] in WEIGHTS:
        return dict(WEIGHTS[weighting["scheme"]])
    return dict(sorted(zip(weighting["levels"], weighting["weights"], strict=True)))


def _search_settings(content: StudyContent) -> SearchSettings:
    search = {key: value for key, value in content.search.items() if key != "ranges"}
    unused = set(unused_ranges(content.filter["kind"]))
    return SearchSettings(
        bridges=bridges_of(content),
        modulations=chosen_modulations(content),
        filter_kind=content.filter["kind"],
        damping_branches=content.filter["damping"],
        ranges={name: ends for name, ends in content.ranges.items() if name not in unused},
        **search,
    )
