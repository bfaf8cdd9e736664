"""The published figures of this folder's YAML files, what the program gives for each, and the verdict.

``printed_precision`` of a figure is the absolute tolerance of its printed digits (or of the chart it was read from);
``obtained`` says whether it was read, read in a public reworking of the example (the book's last digit may differ), or
recalled from memory. An example is a function that gives its quantities by name, registered under its id with
:func:`published`; the tests and the validation page are both made of :func:`records`.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

import yaml

FOLDER = Path(__file__).parent
TOPICS = sorted(FOLDER.glob("[01][0-9]_*.yaml"))
GRAVITY = 9.80665
INCH, FOOT, GALLON, PSI, POUND = 0.0254, 0.3048, 3.785411784e-3, 6894.757293, 0.45359237


@dataclass(frozen=True)
class Printed:
    """A figure as printed; ``precision`` is None where none is stated."""

    value: float
    precision: float | None
    unit: str


@dataclass(frozen=True)
class Example:
    """One entry of the collection."""

    id: str
    topic: str
    source: str
    obtained: str
    printed: dict[str, Printed]

    def value(self, name: str) -> float:
        """Give the printed value of a quantity."""
        return self.printed[name].value


@dataclass(frozen=True)
class Ours:
    """What the program gives, where more must be said of the comparison than that it lies within the print.

    ``tolerance`` is the absolute one asked for instead of the print, ``kind`` what it comes from, ``why`` the words for
    it; no tolerance means that the figures are not held to each other. ``printed`` stands for a figure that the
    entry gives elsewhere than in its list of expected ones.
    """

    value: Any
    kind: str
    why: str
    tolerance: float | None = None
    printed: Printed | None = None


def chart(value: Any, tolerance: float, why: str) -> Ours:
    """Give a figure held to the reading of a chart."""
    return Ours(value, "within chart reading", why, tolerance)


def rounded_inputs(value: Any, tolerance: float, why: str) -> Ours:
    """Give a figure held to the digits of the inputs of an example that rounds on its way."""
    return Ours(value, "within the digits of its inputs", why, tolerance)


def departs(value: Any, why: str, printed: Printed | None = None) -> Ours:
    """Give a figure that does not reproduce, with the reason."""
    return Ours(value, "does not reproduce", why, None, printed)


def formula(value: Any, printed: float, why: str) -> Ours:
    """Give a figure of which only the formula is printed: held to the formula to round-off."""
    return Ours(value, "formula check", why, 1e-12 * abs(printed), Printed(printed, None, "-"))


Quantities = dict[str, Any]
REGISTERED: dict[str, Callable[[], Quantities]] = {}


def published(identity: str) -> Callable[[Callable[[], Quantities]], Callable[[], Quantities]]:
    """Register a function under the id of an example; a name may go on after a comma to tell two ways apart."""

    def register(function: Callable[[], Quantities]) -> Callable[[], Quantities]:
        assert identity in examples(), f"{identity} is in no file"
        assert identity not in REGISTERED, f"{identity} twice"
        REGISTERED[identity] = function
        return function

    return register


@dataclass(frozen=True)
class Record:
    """One figure set against its print."""

    example: Example
    quantity: str
    printed: Printed
    ours: float
    tolerance: float | None
    kind: str
    why: str

    @property
    def difference(self) -> float:
        """Ours less the print."""
        return self.ours - self.printed.value

    @property
    def holds(self) -> bool:
        """Whether the figures agree within the tolerance; one said to depart must depart."""
        if self.tolerance is None:
            return self.kind != "does not reproduce" or abs(self.difference) > (self.printed.precision or 0.0)
        return abs(self.difference) <= self.tolerance


@cache
def examples() -> dict[str, Example]:
    """Read every entry of the folder, by id."""
    found: dict[str, Example] = {}
    for topic in TOPICS:
        for entry in yaml.safe_load(topic.read_text(encoding="utf-8")):
            printed = {
                item["name"]: Printed(float(item["value"]), float(item["printed_precision"]), item["unit"])
                for item in entry["expected"]
            }
            assert entry["id"] not in found
            found[entry["id"]] = Example(entry["id"], topic.stem, _source(entry["source"]), entry["obtained"], printed)
    return found


def _source(source: dict[str, Any]) -> str:
    parts = (source["authors"], source["year"], source["title"], source["where"])
    return ", ".join(str(part) for part in parts if part)


def example(identity: str) -> Example:
    """Give an entry by its id."""
    return examples()[identity]


def quantities(identity: str) -> Iterator[Record]:
    """Compute one example and set its figures against the print."""
    entry = example(identity)
    for name, value in REGISTERED[identity]().items():
        ours = value if isinstance(value, Ours) else Ours(value, "within print", "")
        printed = ours.printed or entry.printed[name.split(", ")[0]]
        tolerance = printed.precision if ours.kind == "within print" else ours.tolerance
        yield Record(entry, name, printed, float(ours.value), tolerance, ours.kind, ours.why)


@cache
def records() -> tuple[Record, ...]:
    """Every figure of every registered example, in the order of the files."""
    import every_example  # noqa: F401  (registers them; here, as it imports this module)

    return tuple(record for identity in examples() if identity in REGISTERED for record in quantities(identity))


@cache
def coverage() -> dict[str, Any]:
    """Why an example or one of its quantities is not checked, and what waits for later work."""
    return yaml.safe_load((FOLDER / "coverage.yaml").read_text(encoding="utf-8"))
