"""From what a data sheet states to the fields of a part: rules tried until nothing new comes out."""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import dataclass

Number = float | tuple[float, ...]


@dataclass(frozen=True)
class Quantity:
    """A value in SI units and the words that say where it comes from."""

    value: Number
    origin: str


@dataclass(frozen=True)
class Rule:
    """One way to a quantity: `law` applied to the quantities named in `needs`."""

    target: str
    needs: tuple[str, ...]  # none: `law` states what holds where nothing is said
    law: Callable[..., Number]
    words: str  # the law in words, for the origin of the result
    last_resort: bool = False  # tried only when neither other rules nor a base part have the target


@dataclass(frozen=True)
class Resolved:
    """Outcome of `resolve`."""

    quantities: dict[str, Quantity]
    unused: tuple[str, ...]  # given, yet neither a field nor needed for one


def resolve(
    given: Mapping[str, Quantity],
    rules: Sequence[Rule],
    fields: Collection[str],
    base: Mapping[str, Quantity],
    anchors: Sequence[str],
) -> Resolved:
    """Derive all fields that follow from what is given, then fall back on a base part.

    The base part's quantities are taken one by one, its `anchors` first (those that tie a part to its
    class, such as on-resistance times area), and the rules are tried again after each: what follows from
    the part itself always wins over the base part.

    Parameters
    ----------
    given : quantities stated for the part, SI
    rules : in order of preference
    fields : names of the fields wanted
    base : quantities of the part it is based on, empty where it stands alone
    anchors : names of base quantities to take first
    """
    known = dict(given)
    used: set[str] = set()
    proper = [rule for rule in rules if not rule.last_resort]
    _apply(proper, known, used)
    for name in (*anchors, *fields):
        if name in base and name not in known:
            known[name] = base[name]
            _apply(proper, known, used)
    _apply(rules, known, used)
    unused = tuple(name for name in given if name not in fields and name not in used)
    return Resolved(known, unused)


def _apply(rules: Sequence[Rule], known: dict[str, Quantity], used: set[str]) -> None:
    """Try the rules over and over until a pass derives nothing."""
    progress = True
    while progress:
        progress = False
        for rule in rules:
            if rule.target not in known and all(need in known for need in rule.needs):
                inputs = [known[need] for need in rule.needs]
                value = rule.law(*(quantity.value for quantity in inputs))
                known[rule.target] = Quantity(value, _origin(rule, inputs))
                used.update(rule.needs)
                progress = True


def _origin(rule: Rule, inputs: Sequence[Quantity]) -> str:
    """Words for a derived quantity; a rule that needs nothing states a convention."""
    if not inputs:
        return f"convention: {rule.words}"
    sources = "; ".join(dict.fromkeys(quantity.origin for quantity in inputs))
    return f"derived: {rule.words} ({sources})"
