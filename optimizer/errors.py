"""The errors wattfront raises on purpose, and what each says.

WattfrontError
|-- InputError        bad input; exit code 2; every problem found, one line each (also a ValueError)
|   `-- PartsError    faults of the catalogue or of a user's part files, in the catalogue's own words
`-- NothingFeasible   no candidate keeps every constraint; exit code 1; which constraints ruled them out
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace
from typing import ClassVar, NamedTuple


class WattfrontError(Exception):
    """Base of all errors raised on purpose; `exit_code` is what the command line returns for it."""

    exit_code: ClassVar[int] = 1


@dataclass(frozen=True)
class Problem:
    """One thing wrong with the input.

    Attributes:
        given: what came, as a reader of the file would recognise it.
        expected: what should have come.
        key: where in the file, such as `application.dc_voltage.max`; empty for the file as a whole.
        file: the file, as it was named by the user; empty where the input is no file.
    """

    given: str
    expected: str
    key: str = ""
    file: str = ""

    def at(self, file: str, key: str) -> Problem:
        """Return the same problem with its place."""
        return replace(self, file=file, key=key)

    def __str__(self) -> str:
        place = "".join(f"{part}: " for part in (self.file, self.key) if part)
        return f"{place}given {self.given}, expected {self.expected}"


class InputError(WattfrontError, ValueError):
    """Bad input, with all problems found; str() prints one a line as `FILE: key: given ..., expected ...`."""

    exit_code: ClassVar[int] = 2

    def __init__(self, *problems: Problem) -> None:
        super().__init__(*problems)
        self.problems = problems

    def __str__(self) -> str:
        return "\n".join(str(problem) for problem in self.problems)


class PartsError(InputError):
    """Faults of part files, as the catalogue tells them."""

    def __init__(self, told: str) -> None:
        super().__init__()
        self.told = told

    def __str__(self) -> str:
        return self.told


class RuledOut(NamedTuple):
    """A constraint that ruled candidates out.

    Attributes:
        constraint: its name.
        share: share of the evaluated candidates that fail it [-].
        nearest_miss: the candidate that came nearest, in words.
    """

    constraint: str
    share: float
    nearest_miss: str


class NothingFeasible(WattfrontError):
    """No candidate kept every constraint; carries the constraints, the one failed most often first, and what
    more is known in lines of words.
    """

    exit_code: ClassVar[int] = 1

    def __init__(self, constraints: Iterable[tuple[str, float, str]], told: Iterable[str] = ()) -> None:
        ruled_out = (RuledOut(*constraint) for constraint in constraints)
        self.constraints = tuple(sorted(ruled_out, key=lambda constraint: -constraint.share))
        self.told = tuple(told)
        super().__init__(self.constraints)

    def __str__(self) -> str:
        lines = ["no candidate keeps every constraint; what ruled them out:"]
        for name, share, nearest_miss in self.constraints:
            lines.append(f"  {name}: failed by {share:.1%} of the candidates; nearest miss: {nearest_miss}")
        return "\n".join([*lines, *self.told])
