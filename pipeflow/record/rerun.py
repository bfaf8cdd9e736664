"""A case solved again and held against its record, or against the case of a revision, with the reasons of a change."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Literal

import numpy as np

from pipeflow.case.files import printable
from pipeflow.case.loading import load_case
from pipeflow.case.model import Case
from pipeflow.errors import InputError
from pipeflow.record.changes import Document
from pipeflow.record.comparison import Comparison, LineComparison, compare, failing
from pipeflow.record.explanation import PROGRAM, Explanation, explain
from pipeflow.record.inputs import Json, UnknownInputsError, decoded, differences, without_folder
from pipeflow.record.mixes import line_of
from pipeflow.record.store import (
    Record,
    UnusableRecordError,
    keep_aside,
    read,
    record_of,
    record_path,
    versions,
    write,
    written,
)
from pipeflow.study import solve

Outcome = Literal["compared", "no record", "unusable record", "refused"]

GOOD, MOVED, UNUSABLE = 0, 1, 2
FELT = (
    "fluid.density",
    "fluid.rheology",
    "flow.design",
    "route",
    "source",
    "destination",
    "methods.turbulent",
    "methods.critical",
    "methods.fittings",
    "solids.d85",
)
"""Inputs that reach the totals, by their paths in a laid-out case."""
TOLD = ("scenarios", "file")
"""What is told otherwise."""
ALONG = ("sizes", "default_roughness", "followed", "fitted", "sheets", "density_is_mixed")
"""What goes along with other inputs, or is shown by them."""
_FOLLOWS = re.compile(r"uncertainty\[.*\]\.(middle|spread|least|most)")
"""Figures of a stated tolerance, which follow the input it is of."""
AS_WRITTEN = {
    "solids": "fluid.solids",
    "liquid": "fluid.liquid",
    "temperature": "fluid.temperature",
    "specific_heat": "fluid.specific_heat",
    "tested_shear_rate": "fluid.rheology.tested",
    "readings": "fluid.rheology.flow_curve",
    "hold_times": "hold times",
    "assumed": "status of inputs",
    "lowest_level": "source.lowest_level",
    "pump_place": "place of the pump",
}
"""Keys of the case file for parts of a case of another name."""
OF_A_PUMP = {
    "table": "curve",
    "speed_minimum": "variable_speed.minimum",
    "speed_maximum": "variable_speed.maximum",
    "impeller_diameter": "impeller.diameter",
    "trimmed_diameter": "impeller.trimmed_to",
    "outlet_width": "impeller.outlet_width",
    "motor_power": "motor.power",
    "motor_margin": "motor.margin",
}
"""Keys of a pump likewise; its curve is one input."""
_FIELD_OF_A_PUMP = re.compile(r"(pumps\[.*\]\.)(\w+).*")
PUMPS_NOT_THERE = "pumps: not in the record"
NO_PART = 1e-12
"""A part below this fraction of the figure is none."""


@dataclass(frozen=True)
class Options:
    """How cases are held against their records: tolerance as a fraction; whether the records are written."""

    tolerance: float = 1e-3
    accept: bool = False


@dataclass(frozen=True)
class Rerun:
    """One case solved again.

    Attributes
    ----------
    outcome : str
        ``compared``; or why nothing could be: ``no record``, ``unusable record``, or the case is ``refused``.
    said : tuple of str
        What the user must be told beside the figures: reasons, records written or kept.
    moved : bool
        Something moved by more than the tolerance, or a check fails that did not.
    inputs_changed : bool
        By their digest.
    comparison : Comparison or None
    explanations : dict of str to Explanation
        Of each line whose totals moved, by its scenario; the case itself is the empty name.
    unexplained : dict of str to str
        Why there is none, likewise.
    without_effect : tuple of str
        Inputs that changed and moved no total.
    within_tolerance : tuple of str
        Where pumps moved and no total did: inputs that changed and reach the totals.
    program : dict of str to tuple of str
        Versions before and after, where they differ.
    fails : tuple of str
        Checks that fail now; and that no pump holds, where there are any.
    lacks_pumps : bool
        The record is of a case with pumps, and has no figures of them.
    pumps_moved : bool
        Something of the pumps is among what moved.
    """

    file: str
    outcome: Outcome
    said: tuple[str, ...] = ()
    title: str = ""
    moved: bool = False
    accepted: bool = False
    inputs_changed: bool = False
    comparison: Comparison | None = None
    explanations: dict[str, Explanation] = field(default_factory=dict)
    unexplained: dict[str, str] = field(default_factory=dict)
    without_effect: tuple[str, ...] = ()
    within_tolerance: tuple[str, ...] = ()
    program: dict[str, tuple[str, str]] = field(default_factory=dict)
    fails: tuple[str, ...] = ()
    lacks_pumps: bool = False
    pumps_moved: bool = False

    @property
    def name(self) -> str:
        """The file, fit for a page."""
        return printable(self.file)

    @property
    def exit_code(self) -> int:
        """0 nothing moved or accepted; 1 moved, a check fails, nothing to compare with; 2 unusable."""
        if self.outcome == "refused":
            return UNUSABLE
        if self.accepted:
            return GOOD
        return MOVED if self.moved or self.fails or self.lacks_pumps or self.outcome != "compared" else GOOD


@dataclass(frozen=True)
class _Before:
    """What a case is held against; ``program`` is empty where the present one solved it."""

    inputs: Json
    digest: str
    results: Document
    program: dict[str, str]


def rerun(file: str, options: Options = Options()) -> Rerun:
    """Solve a case again and hold it against its record; write the record where that is asked for.

    Parameters
    ----------
    file : str
        The case file; its record is beside it.
    options : Options

    Returns
    -------
    Rerun
        Never raises for a file that cannot be used: the outcome is then ``refused``.
    """
    try:
        now = _present(file)
        found = _against_record(file, now, options)
        return _accepted(file, now, found) if options.accept else found
    except InputError as refused:
        return Rerun(file, "refused", tuple(str(problem) for problem in refused.problems))


def rerun_since(file: str, past: Mapping[str, str | None], revision: str, options: Options = Options()) -> Rerun:
    """Solve a case again and hold it against the case that it was in a revision, solved by the same program.

    Parameters
    ----------
    file : str
    past : mapping of str to str or None
        Where each case lies as it was; None where the revision has no such file.
    revision : str
        Its name, for messages.
    options : Options
    """
    try:
        now = _present(file)
    except InputError as refused:
        return Rerun(file, "refused", tuple(str(problem) for problem in refused.problems))
    there = past.get(file)
    if there is None:
        return _alone(file, now, "no record", f"not in revision {revision}")
    try:
        then = _present(there)
    except InputError as refused:
        why = "; ".join(str(replace(problem, file=revision)) for problem in refused.problems)
        return _alone(file, now, "unusable record", f"as it was, the case can't be read: {why}")
    return _compared(file, now, _Before(then.inputs, then.digest, then.results, {}), options)


def _present(file: str) -> Record:
    case = load_case(file)
    bare = without_folder(case)
    return record_of(bare, solve(bare))


def _against_record(file: str, now: Record, options: Options) -> Rerun:
    try:
        record = read(record_path(file))
    except UnusableRecordError as why:
        return _alone(file, now, "unusable record", f"the record can't be used: {why}")
    if record is None:
        return _alone(file, now, "no record", "no record yet: pipeflow rerun --accept writes it")
    return _compared(file, now, _Before(record.inputs, record.digest, record.results, record.program), options)


def _alone(file: str, now: Record, outcome: Outcome, why: str) -> Rerun:
    return Rerun(file, outcome, (why,), str(now.results["title"]), fails=failing(now.results))


def _accepted(file: str, now: Record, found: Rerun) -> Rerun:
    path, text = record_path(file), written(now)
    said = found.said if found.outcome == "unusable record" else ()
    if found.outcome == "unusable record":
        said = (*said, f"kept as {keep_aside(path).name}")
    if found.outcome == "compared" and path.read_text(encoding="utf-8") == text:
        return replace(found, accepted=True, said=said)
    write(path, text)
    return replace(found, accepted=True, said=(*said, f"record written: {path.name}"))


def _compared(file: str, now: Record, before: _Before, options: Options) -> Rerun:
    lacks_pumps = _lacks_pumps(before, now)
    comparison = compare(before.results, {**now.results, "pumps": None} if lacks_pumps else now.results)
    explanations, unexplained = _explained(now, before, comparison, options.tolerance)
    pumps_moved = comparison.pumps_moved(options.tolerance)
    by_pumps_alone = pumps_moved and not (explanations or unexplained)
    fresh = versions()
    return Rerun(
        file,
        "compared",
        (PUMPS_NOT_THERE,) if lacks_pumps else (),
        title=str(now.results["title"]),
        moved=comparison.is_beyond(options.tolerance),
        inputs_changed=before.digest != now.digest,
        comparison=comparison,
        explanations=explanations,
        unexplained=unexplained,
        without_effect=tuple(_without_effect(before, now, explanations)) if before.digest != now.digest else (),
        within_tolerance=tuple(_changed(before, now, felt=True)) if by_pumps_alone else (),
        program={name: (old, fresh[name]) for name, old in before.program.items() if fresh.get(name, old) != old},
        fails=failing(now.results),
        lacks_pumps=lacks_pumps,
        pumps_moved=pumps_moved,
    )


def _lacks_pumps(before: _Before, now: Record) -> bool:
    """Whether there were pumps and are, and the record, of an earlier version, has no figures of them."""
    return bool(before.inputs.get("pumps")) and "pumps" in now.results and "pumps" not in before.results


def _explained(
    now: Record, before: _Before, comparison: Comparison, tolerance: float
) -> tuple[dict[str, Explanation], dict[str, str]]:
    lines = [line for line in comparison.lines if line.moved_totals(tolerance)]
    if not lines:
        return {}, {}
    try:
        old, new = _case(before.inputs), _case(now.inputs)
    except UnknownInputsError as why:
        return {}, {line.scenario: f"the record is of another version: {why}" for line in lines}
    found: dict[str, Explanation] = {}
    unexplained: dict[str, str] = {}
    for line in lines:
        one = _explanation(old, new, line)
        if isinstance(one, Explanation):
            found[line.scenario] = one
        else:
            unexplained[line.scenario] = one
    return found, unexplained


def _case(inputs: Json) -> Case:
    case = decoded(inputs)
    if not isinstance(case, Case):
        raise UnknownInputsError("its inputs are no case")
    return case


def _explanation(old: Case, new: Case, line: LineComparison) -> Explanation | str:
    change = np.array([np.nan if total.difference is None else total.difference for total in line.totals])
    if not np.all(np.isfinite(change)):
        return "a total has no figure before or after the change"
    before, after = (case.scenarios.get(line.scenario) if line.scenario else case for case in (old, new))
    if before is None or after is None:
        return "the record does not hold the inputs of the scenario"
    found = explain(line_of(before), line_of(after), change)
    return found or "a line with some inputs as before and some as after has no answer"


def _without_effect(before: _Before, now: Record, explanations: dict[str, Explanation]) -> Iterator[str]:
    """Inputs that reach no total, by their keys, and groups of inputs whose parts are all nothing."""
    yield from _changed(before, now, felt=False)
    groups = dict.fromkeys(group for found in explanations.values() for group in found.groups if group != PROGRAM)
    yield from (group for group in groups if all(_is_nothing(found, group) for found in explanations.values()))


def _changed(before: _Before, now: Record, *, felt: bool) -> Iterator[str]:
    """Inputs that reach the totals, or do not, by their keys; of a scenario those that are not the case's own."""
    own = list(_changed_of(before.inputs, now.inputs, felt))
    yield from own
    old, new = _scenarios(before.inputs), _scenarios(now.inputs)
    for name in (name for name in new if name in old):
        yield from (f"{name}: {path}" for path in _changed_of(old[name], new[name], felt) if path not in own)


def _scenarios(inputs: Json) -> dict[str, Json]:
    held = inputs.get("scenarios")
    entries = held.get("entries") if isinstance(held, dict) else None
    return entries if isinstance(entries, dict) else {}


def _changed_of(before: Json, after: Json, felt: bool) -> Iterator[str]:
    changed = list(dict.fromkeys(map(_as_a_pump_has_it, differences(before, after))))
    # a flow given by one figure is least, design and most at once
    felt_here = (*FELT, "flow") if "flow.design" in changed else FELT
    for path in (path for path in changed if not _FOLLOWS.fullmatch(path)):
        head, _, rest = path.partition(".")
        if _is_below(path, felt_here) is felt and head not in ALONG and not _is_below(path, TOLD):
            yield f"{AS_WRITTEN.get(head, head)}.{rest}" if rest else AS_WRITTEN.get(head, head)


def _is_below(path: str, keys: Sequence[str]) -> bool:
    return any(path == key or path.startswith((f"{key}.", f"{key}[")) for key in keys)


def _as_a_pump_has_it(path: str) -> str:
    """The key of the case file for a field of a pump; any other path as it is."""
    match = _FIELD_OF_A_PUMP.fullmatch(path)
    return f"{match[1]}{OF_A_PUMP.get(match[2], match[2])}" if match else path


def _is_nothing(found: Explanation, group: str) -> bool:
    if group not in found.groups:
        return True
    scale = np.abs(found.parts).max(axis=0)
    return bool(np.all(np.abs(found.parts[found.groups.index(group)]) <= NO_PART * scale))
