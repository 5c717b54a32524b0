"""Every deliberate error of the package: a code, where it is, what was found, what was expected, how to repair it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from types import MappingProxyType

CODES = MappingProxyType(
    {
        "file-unreadable": "the file can't be opened or isn't UTF-8 text of at most 1 MiB",
        "not-toml": "the file isn't valid TOML",
        "unknown-key": "a key that the format doesn't have",
        "missing-key": "a key that the format requires",
        "conflicting-keys": "keys that exclude each other, or too few of a group",
        "wrong-type": "a value of another type than the key takes",
        "bad-quantity": "a text that isn't one number and one unit",
        "unknown-unit": "a unit that isn't known",
        "wrong-dimension": "a unit of another dimension than the key takes",
        "out-of-range": "a value outside the bounds of plausibility or of meaning",
        "bad-text": "a name or text with characters that can't be printed, or too long",
        "duplicate-name": "the same name for two parts",
        "unknown-name": "a part, node, policy or state that the file doesn't have",
        "bad-topology": "a circuit that can't be solved as drawn",
        "bad-coupling": "coupling factors that no set of coils can have",
        "bad-rating-file": "a policy, parts or thresholds file that can't be used",
        "bad-command": "a command line that can't be used",
    }
)


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing that is wrong with an input, in the words that its author needs to mend it.

    `line` counts from 1 and is None where no line can be named. `key` is the path by names
    (`capacitor.Ctank.value`), never an index.
    """

    code: str
    file: str
    line: int | None
    key: str
    found: str
    expected: str
    repair: str

    def __post_init__(self) -> None:
        if self.code not in CODES:
            raise ValueError(f"no such problem code: {self.code}")

    def __str__(self) -> str:
        place = self.file if self.line is None else f"{self.file}:{self.line}"
        key = f" {self.key}:" if self.key else ""
        return f"{place}:{key} [{self.code}] found {self.found}; expected {self.expected}; {self.repair}"


class InputError(Exception):
    """The input can't be used; carries every problem found in it, in reading order."""

    def __init__(self, problems: Iterable[Problem]) -> None:
        self.problems = tuple(problems)
        super().__init__("\n".join(str(problem) for problem in self.problems))


class CheckError(Exception):
    """A check that can't be made for a reason of the circuit; becomes a `not-checked` finding, never a pass."""
