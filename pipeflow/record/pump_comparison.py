"""What changed of the pumps on a line between two results of its case: duties, checks, which of them hold."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import product
from typing import Any

from pipeflow.record.changes import NOISE, Change, CheckChange, Document, check_changes, figure_of

NO_PUMP_HOLDS = "no pump holds in every condition"
DUTIES = ("duty", "duty_upper", "duty_maximum")
"""On the central and the upper system curve, and at maximum flow where the speed may vary."""
FIGURES = ("flow_m3_s", "head_m", "shaft_power_W", "npsh_available_m", "npsh_required_m")
SPEEDS = ("speed_rad_s", "speed_upper_rad_s")
RESTART = "restart"
"""The condition of which checks alone are compared: its duty is that of an unbroken gel."""


@dataclass(frozen=True)
class DutyComparison:
    """One pump in one condition before and after; figures by their path, as ``duty_upper.head_m``."""

    condition: str
    pump: str
    figures: tuple[Change, ...]
    checks: tuple[CheckChange, ...]

    def is_beyond(self, tolerance: float) -> bool:
        """Whether a figure or a check moved."""
        moved = any(figure.is_beyond(tolerance) for figure in self.figures)
        return moved or any(check.is_beyond(tolerance) for check in self.checks)


@dataclass(frozen=True)
class Candidate:
    """Whether a pump holds in every condition, and why it does not now; None where there was or is no such pump."""

    name: str
    held: bool | None
    holds: bool | None
    reasons: tuple[str, ...]
    motor: Change

    def is_beyond(self, tolerance: float) -> bool:
        """Whether it came, went, holds as it did not, or asks for another size of motor."""
        return self.held != self.holds or self.motor.is_beyond(tolerance)


@dataclass(frozen=True)
class PumpsComparison:
    """The candidates before and after, those of both in each condition, and which ranks first of those that hold."""

    candidates: tuple[Candidate, ...]
    duties: tuple[DutyComparison, ...]
    first_before: str | None
    first_after: str | None

    @property
    def added(self) -> tuple[str, ...]:
        """Pumps that are new."""
        return tuple(one.name for one in self.candidates if one.held is None)

    @property
    def gone(self) -> tuple[str, ...]:
        """Pumps that were there before."""
        return tuple(one.name for one in self.candidates if one.holds is None)

    def is_beyond(self, tolerance: float) -> bool:
        """Whether anything moved, pumps that came or went among it."""
        return (
            self.first_before != self.first_after
            or any(one.is_beyond(tolerance) for one in self.candidates)
            or any(one.is_beyond(tolerance) for one in self.duties)
        )


def compare_pumps(before: Any, after: Any) -> PumpsComparison | None:
    """Hold what two records have of the pumps of a case against each other.

    Parameters
    ----------
    before, after : Any
        As ``pipeflow.study.pumping.document.pumps_document`` lays them out; None where the case has no pumps. The first
        may come from a file, and be anything.
    """
    old, new = (one if isinstance(one, dict) else {} for one in (before, after))
    if not old and not new:
        return None
    held, ranked = _named(old.get("ranking")), _named(new.get("ranking"))
    every = dict.fromkeys((*ranked, *held))
    return PumpsComparison(
        candidates=tuple(_candidate(name, held.get(name), ranked.get(name)) for name in every),
        duties=tuple(_duties(old, new, [name for name in every if name in ranked and name in held])),
        first_before=_first(held),
        first_after=_first(ranked),
    )


def none_holds(pumps: Any) -> bool:
    """Whether there are candidates, and none of them holds in every condition."""
    ranked = _named(pumps.get("ranking")) if isinstance(pumps, dict) else {}
    return bool(ranked) and _first(ranked) is None


def _first(ranked: dict[str, Document]) -> str | None:
    return next((name for name, one in ranked.items() if _holds(one)), None)


def _holds(one: Document | None) -> bool | None:
    return None if one is None else one.get("holds") is True


def _candidate(name: str, before: Document | None, after: Document | None) -> Candidate:
    reasons = (after or {}).get("reasons", ())
    key = "standard_motor_W"
    motor = Change(key, figure_of(before, key), figure_of(after, key))
    return Candidate(name, _holds(before), _holds(after), tuple(map(str, reasons)), motor)


def _duties(before: Document, after: Document, names: Sequence[str]) -> Iterator[DutyComparison]:
    """Pumps by their names in every condition but scenarios that came or went, which are told as such."""
    old, new = _conditions(before), _conditions(after)
    for key in dict.fromkeys((*new, *old)):
        if (key in old and key in new) or key[0] != "scenario":
            one, other = old.get(key, {}), new.get(key, {})
            held, found = _named(one.get("pumps")), _named(other.get("pumps"))
            for name in names:
                old_pump, new_pump = held.get(name, {}), found.get(name, {})
                figures = () if key[0] == RESTART else tuple(_figures(old_pump, new_pump))
                checks = tuple(check_changes(old_pump, new_pump))
                yield DutyComparison(str((other or one).get("name")), name, figures, checks)


def _figures(before: Document, after: Document) -> Iterator[Change]:
    yield from (_change(before, after, "", key) for key in SPEEDS)
    yield from (_change(before.get(duty), after.get(duty), duty, key) for duty, key in product(DUTIES, FIGURES))


def _change(before: Any, after: Any, duty: str, key: str) -> Change:
    noise = next(noise for unit, noise in NOISE.items() if key.endswith(f"_{unit}"))
    return Change(f"{duty}.{key}" if duty else key, figure_of(before, key), figure_of(after, key), noise)


def _conditions(pumps: Document) -> dict[tuple[str, str], Document]:
    """Conditions by kind, scenarios by their names too."""
    listed = pumps.get("conditions")
    found = {}
    for one in listed if isinstance(listed, list) else []:
        if isinstance(one, dict):
            kind = str(one.get("kind"))
            found[kind, str(one.get("name")) if kind == "scenario" else ""] = one
    return found


def _named(listed: Any) -> dict[str, Document]:
    held = listed if isinstance(listed, list) else []
    return {str(one.get("name")): one for one in held if isinstance(one, dict)}
