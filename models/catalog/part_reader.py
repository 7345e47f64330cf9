"""From raw parts to dataclass instances: keys to SI, rules, checks; faults name file, part and key."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from typing import Any

from models.catalog.derivations import Quantity, resolve
from models.catalog.key_units import accepted_keys
from models.catalog.reading import Problems, RawPart, nearest_hint
from models.catalog.schemas import Schema

CURVES = "curves"
_ENTRY_KEYS = ("value", "origin", "range")
_PART_WORDS = ("name", "based_on", "replaces", "range_class")
_KIND_WORDS = {str: "a text", bool: "true or false", int: "a whole number", tuple: "a list of texts"}


@dataclass
class PartReader:
    """Reads the parts of one kind, in order; later parts may be based on earlier ones."""

    schema: Schema
    problems: Problems
    _parts: dict[str, Any] = field(default_factory=dict)
    _known: dict[str, dict[str, Quantity]] = field(default_factory=dict)
    _plain: dict[str, dict[str, Any]] = field(default_factory=dict)

    def read(self, raws: Iterable[RawPart]) -> tuple[Any, ...]:
        """Parts in file order; a later one that says `replaces = true` takes the place of its namesake."""
        for raw in raws:
            before = len(self.problems.messages)
            self._check_words(raw)
            base = str(raw.entries.get("based_on"))
            plain = {**self._plain.get(base, {}), **self._plain_values(raw)}
            given = self._quantities(raw)
            self._add_curves(raw, plain, given)
            for message in self.schema.faults_alone(given):
                self.problems.add(raw, message)
            if len(self.problems.messages) == before:
                self._report_missing(raw, [name for name in self.schema.plain_fields if name not in plain])
            if len(self.problems.messages) > before:
                continue
            quantities = self._derived(raw, given, base, plain)
            if len(self.problems.messages) == before:
                self._known[raw.name], self._plain[raw.name] = quantities, plain
                self._parts[raw.name] = self._part(raw.name, plain, quantities)
        return tuple(self._parts.values())

    def _check_words(self, raw: RawPart) -> None:
        """Name, base and replacement of a part."""
        base = raw.entries.get("based_on")
        if not isinstance(raw.entries.get("name"), str):
            self.problems.add(raw, "needs a name, a text")
        if raw.name in self._parts and raw.entries.get("replaces") is not True:
            self.problems.add(raw, "there is such a part already; rename it, or say replaces = true")
        if base is not None and base not in self._parts:
            hint = nearest_hint(str(base), self._parts)
            self.problems.add(raw, f"based_on: no part called {base!r}{hint}")

    def _derived(
        self, raw: RawPart, given: Mapping[str, Quantity], base: str, plain: Mapping[str, Any]
    ) -> dict[str, Quantity]:
        """All quantities that follow from what is given and from the base part, checked."""
        schema = self.schema
        anchors = schema.anchors(plain)
        class_values = {
            name: Quantity(quantity.value, f"as {base}: {quantity.origin}")
            for name, quantity in self._known.get(base, {}).items()
        }
        try:
            resolved = resolve(given, schema.rules, schema.numeric_fields, class_values, anchors)
        except ArithmeticError as error:
            self.problems.add(raw, f"values do not fit together, deriving the fields fails: {error}")
            return {}
        for name in resolved.unused:
            self.problems.add(raw, f"{name} is given, but nothing follows from it: {self._why_unused(name)}")
        missing = [name for name in schema.numeric_fields if name not in resolved.quantities]
        self._report_missing(raw, missing)
        if not missing:
            for message in schema.faults(resolved.quantities):
                self.problems.add(raw, message)
        return resolved.quantities

    def _part(self, name: str, plain: Mapping[str, Any], quantities: Mapping[str, Quantity]) -> Any:
        made = self.schema.part_type.__dataclass_fields__
        chosen = {field_name: quantities[field_name] for field_name in self.schema.numeric_fields}
        words: dict[str, Any] = {
            "name": name,
            "origin": {field_name: quantity.origin for field_name, quantity in chosen.items()},
        }
        return self.schema.part_type(
            **{word: value for word, value in words.items() if word in made},
            **plain,
            **{field_name: quantity.value for field_name, quantity in chosen.items()},
        )

    def _plain_values(self, raw: RawPart) -> dict[str, Any]:
        """Words, counts and yes/no of a part, checked for their type."""
        values: dict[str, Any] = {}
        for name, kind in self.schema.plain_fields.items():
            if name not in raw.entries:
                continue
            value = raw.entries[name]
            if kind is tuple and isinstance(value, list):
                value = tuple(value)
            allowed = (self.schema.choices or {}).get(name)
            if type(value) is not kind:
                self.problems.add(raw, f"{name} must be {_KIND_WORDS[kind]}, got {value!r}")
            elif allowed is not None and value not in allowed:
                listed = ", ".join(map(repr, allowed))
                self.problems.add(raw, f"{name} must be one of {listed}, got {value!r}")
            values[name] = value
        return values

    def _quantities(self, raw: RawPart) -> dict[str, Quantity]:
        """Numbers of a part in SI."""
        keys = accepted_keys(self.schema.quantities)
        given: dict[str, Quantity] = {}
        for key, entry in raw.entries.items():
            if key in _PART_WORDS or key in self.schema.plain_fields or self._is_curves(key):
                continue
            if key not in keys:
                hint = nearest_hint(key, [*keys, *_PART_WORDS, *self.schema.plain_fields])
                self.problems.add(raw, f"unknown key {key!r}{hint}")
                continue
            name, factor = keys[key]
            quantity = self._quantity(raw, key, entry, factor)
            if name in given:
                self.problems.add(raw, f"{key}: {name} is given twice, in two units")
            elif quantity is not None:
                given[name] = quantity
        return given

    def _is_curves(self, key: str) -> bool:
        return key == CURVES and self.schema.curves is not None

    def _add_curves(self, raw: RawPart, plain: Mapping[str, Any], given: dict[str, Quantity]) -> None:
        """Add what follows from a part's curves; what is stated as a number as well is a fault."""
        if CURVES not in raw.entries or self.schema.curves is None:
            return
        rated = given.get("sheet_rated_current_a")
        current = rated.value if rated is not None and isinstance(rated.value, float) else None
        found, faults = self.schema.curves(raw.entries[CURVES], current, plain.get("shared_die") is True)
        for fault in faults:
            self.problems.add(raw, fault)
        for name, quantity in found.items():
            if name in given:
                self.problems.add(raw, f"{name} is given by a curve and by a number; leave one out")
            given[name] = quantity

    def _quantity(self, raw: RawPart, key: str, entry: Any, factor: float) -> Quantity | None:
        """One entry { value, origin } as a quantity in SI."""
        if not isinstance(entry, dict) or "value" not in entry:
            self.problems.add(raw, f'{key} must be written {{ value = ..., origin = "..." }}, got {entry!r}')
            return None
        for word in entry:
            if word not in _ENTRY_KEYS:
                self.problems.add(raw, f"{key}: unknown key {word!r}{nearest_hint(word, _ENTRY_KEYS)}")
        origin, value = entry.get("origin"), entry["value"]
        if not isinstance(origin, str) or not origin.strip():
            self.problems.add(raw, f"{key} has no origin: say where the value comes from")
            return None
        numbers = value if isinstance(value, list) else [value]
        if not numbers or any(isinstance(n, bool) or not isinstance(n, int | float) for n in numbers):
            self.problems.add(raw, f"{key}: value must be a number or a list of numbers, got {value!r}")
            return None
        scaled = tuple(_scaled(number, factor) for number in numbers)
        return Quantity(scaled if isinstance(value, list) else scaled[0], origin)

    def _report_missing(self, raw: RawPart, names: list[str]) -> None:
        for name in names:
            ways = [" and ".join(rule.needs) for rule in self.schema.rules if rule.target == name]
            others = f", or give {', or '.join(ways)}" if ways else ""
            self.problems.add(raw, f"{name} is missing{others}")

    def _why_unused(self, name: str) -> str:
        ways = [rule for rule in self.schema.rules if name in rule.needs]
        words = [f"it leads to {rule.target} together with {', '.join(rule.needs)}" for rule in ways]
        return "; ".join(words) + ", unless that is given already" if words else "no rule uses it"


def _scaled(number: float, factor: float) -> float:
    """Product without the last-digit noise of a decimal factor (100 mm2 is 1e-4 m2)."""
    return float(f"{number * factor:.14g}")
