"""What rests on the rheology being right: the line by rival laws, and past the shear rates tested by another answer."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace
from pathlib import PurePath
from typing import TYPE_CHECKING

import numpy as np

from pipeflow.case.model import Case, shown_condition
from pipeflow.friction.methods import critical_criterion, turbulent_method
from pipeflow.line.route import LineFlow
from pipeflow.rheology import Rheology
from pipeflow.rheology.conditions import ARRHENIUS, SOLIDS_LAWS, Variable
from pipeflow.rheology.models import Casson, GeneralizedPowerLaw
from pipeflow.rheology.tangent import FAR, continued_by_tangent, is_far
from pipeflow.sources import Source
from pipeflow.study.flows import DESIGN, distinct_flows, pipes_of, solved
from pipeflow.study.readings.result import BeyondTested, LawLoss, RheologyAnswers
from pipeflow.study.result import MethodUse
from pipeflow.verdict import Check

if TYPE_CHECKING:
    from pipeflow.rheology.sheet import FitResult

_ON_LOSSES = ("head_loss", "pressure_loss")
"""Checks that stand or fall with the losses."""


def rheology_answers(case: Case, line: LineFlow, flows: tuple[float, ...]) -> RheologyAnswers:
    """Work the answers out.

    Parameters
    ----------
    case : Case
    line : LineFlow
        The case solved.
    flows : tuple of float
        The flows it was solved at, m³/s, that of design first.
    """
    by_law = tuple(_by_law(case, line, case.fitted)) if case.fitted and case.fitted.fit.rivals else ()
    tested = case.tested_shear_rate
    if tested is None or not is_far(line.pipes.wall_shear_rate, tested):
        return RheologyAnswers(by_law)
    tangent = _tangent_of(case.fluid.rheology, tested[1])
    other, method = _by_tangent(case, line, tangent, flows)
    return RheologyAnswers(by_law, tuple(_beyond(case, line, other, flows)), tested[1], method)


def beyond_tested(case: Case, line: LineFlow, flows: tuple[float, ...]) -> RheologyAnswers:
    """Tell where the shear rates are far beyond those tested, without another law solved: enough for the checks."""
    tested = case.tested_shear_rate
    if tested is None or not is_far(line.pipes.wall_shear_rate, tested):
        return RheologyAnswers()
    return RheologyAnswers(beyond=tuple(_beyond(case, line, None, flows)), highest_tested=tested[1])


def _solve(case: Case, law: Rheology, flows: tuple[float, ...], methods: tuple[str | None, str | None]) -> LineFlow:
    asked = replace(case.methods, turbulent=methods[0], critical=methods[1])
    return solved(replace(case, fluid=replace(case.fluid, rheology=law)), asked, np.array(flows))


def _methods_for(case: Case, law: Rheology) -> tuple[str | None, str | None]:
    """Keys of the turbulent method and the criterion that the case asks for, where they are made for a law."""
    turbulent, critical = case.methods.turbulent, case.methods.critical
    if turbulent and law.key not in turbulent_method(case.fluid.rheology, turbulent).models:
        turbulent = None
    if critical and law.key not in critical_criterion(case.fluid.rheology, critical).models:
        critical = None
    return turbulent, critical


def _by_law(case: Case, line: LineFlow, fitted: FitResult) -> Iterator[LawLoss]:
    yield _loss(case.fluid.rheology.key, line)
    for model in fitted.fit.rivals:
        law = fitted.fit.of(model).law
        if law is not None:
            yield _loss(model, _solve(case, law, (case.flow.design,), _methods_for(case, law)))


def _loss(model: str, line: LineFlow) -> LawLoss:
    return LawLoss(model, float(line.pressure_loss[DESIGN]), float(line.pressure_loss_upper[DESIGN]))


def _tangent_of(law: Rheology, last_rate: float) -> Rheology | None:
    """Give the law carried on by its tangent: itself where it is straight, None where none is known."""
    if isinstance(law, GeneralizedPowerLaw) and np.all(np.asarray(law.as_herschel_bulkley().flow_index) == 1.0):
        return law
    if isinstance(law, GeneralizedPowerLaw | Casson):
        return continued_by_tangent(law, last_rate)
    return None


def _by_tangent(
    case: Case, line: LineFlow, tangent: Rheology | None, flows: tuple[float, ...]
) -> tuple[LineFlow | None, str]:
    """Solve by the tangent, by the turbulent method of the law itself where that can be."""
    law = case.fluid.rheology
    if tangent is None or tangent is law:
        return (None if tangent is None else line), ""
    own = turbulent_method(law, case.methods.turbulent)
    default = turbulent_method(tangent).source.key
    fits = tangent.key in own.models
    solved = _solve(case, tangent, flows, (own.source.key if fits else default, _methods_for(case, tangent)[1]))
    return solved, "" if fits else default


def _beyond(case: Case, line: LineFlow, other: LineFlow | None, flows: tuple[float, ...]) -> Iterator[BeyondTested]:
    assert case.tested_shear_rate is not None
    names = [pipe.name for pipe in pipes_of(case)]
    for index, name in enumerate(distinct_flows(case)):
        rates = line.pipes.wall_shear_rate[index]
        far = rates > FAR * case.tested_shear_rate[1]
        if far.any():
            yield BeyondTested(
                at=name,
                flow=flows[index],
                pipes=tuple(pipe for pipe, is_one in zip(names, far, strict=True) if is_one),
                wall_shear_rate=float(np.nanmax(rates)),
                pressure_loss=float(line.pressure_loss[index]),
                pressure_loss_upper=float(line.pressure_loss_upper[index]),
                pressure_loss_tangent=None if other is None else float(other.pressure_loss[index]),
                pressure_loss_tangent_upper=None if other is None else float(other.pressure_loss_upper[index]),
            )


def rheology_checks(answers: RheologyAnswers, checks: Iterable[Check]) -> Iterator[Check]:
    """Give the checks; none on losses is better than a caution where the rheology is a guess."""
    for check in checks:
        if answers.beyond and check.status == "ok" and check.name in _ON_LOSSES:
            yield replace(check, status="caution", basis=f"{check.basis}, its rheology a guess past the rates tested")
        else:
            yield check
    if answers.beyond:
        yield _range_check(answers)


def _by_rate(beyond: BeyondTested) -> float:
    return beyond.wall_shear_rate


def _range_check(answers: RheologyAnswers) -> Check:
    fastest = max(answers.beyond, key=_by_rate)
    basis = f"at {fastest.at} in {', '.join(fastest.pipes)}; up to {FAR:g} times the highest rate tested"
    return Check("tested_shear_rate", "caution", fastest.wall_shear_rate, FAR * answers.highest_tested, "1/s", basis)


def rheology_cautions(case: Case, answers: RheologyAnswers) -> Iterator[str]:
    """Say what the readings leave open, and what the other answers come to."""
    yield from _about_readings(case)
    yield from _about_conditions(case)
    if answers.by_law:
        yield from _about_rivals(answers)
    if answers.beyond:
        yield _about_tangent(max(answers.beyond, key=_by_rate))


def _about_readings(case: Case) -> Iterator[str]:
    """Give what the sheets say, the same words once."""
    files: dict[str, list[str]] = {}
    for file, sheet in zip(case.readings, case.sheets, strict=True):
        for text in (*sheet.curve.corrections, *sheet.cautions):
            files.setdefault(text, []).append(PurePath(file).name)
    for text, names in files.items():
        of = "readings" if len(names) == len(case.sheets) else f"readings of {', '.join(names)}"
        yield f"{of}: {text}"


def _about_conditions(case: Case) -> Iterator[str]:
    """Say which laws of the solids or the temperature are carried on past what was tested."""
    names: dict[tuple[Variable, float, tuple[float, float]], list[str]] = {}
    for followed in case.followed:
        if followed.is_carried_on:
            place = (followed.law.variable, followed.condition, followed.law.tested)
            names.setdefault(place, []).append(followed.parameter.replace("_", " "))
    for (variable, condition, tested), parameters in names.items():
        here, low, high = (shown_condition(variable, value) for value in (condition, *tested))
        yield f"{', '.join(parameters)} carried on to {variable} of {here}, tested over {low} .. {high}: a guess"


def _about_rivals(answers: RheologyAnswers) -> Iterator[str]:
    taken, *rivals = answers.by_law
    highest = answers.for_design
    assert highest is not None
    for rival in rivals:
        more = rival.pressure_loss - taken.pressure_loss
        yield (
            f"the readings support {rival.model} as well as {taken.model}, or better: it loses {abs(more) / 1e3:.4g} "
            f"kPa {'more' if more > 0 else 'less'} at design flow, {100 * more / taken.pressure_loss:+.2g} %"
        )
    as_solved = ", as solved here" if highest is taken else f", not {taken.model} as solved here"
    yield f"for design take the law with the highest loss, {highest.model}{as_solved}"


def _about_tangent(beyond: BeyondTested) -> str:
    start = f"rheology past {FAR:g} times the highest shear rate tested, at {beyond.at} in {', '.join(beyond.pipes)}"
    if beyond.pressure_loss_tangent is None:
        return f"{start}: the losses are a guess"
    by_law, by_tangent = beyond.pressure_loss / 1e3, beyond.pressure_loss_tangent / 1e3
    if beyond.pressure_loss_tangent == beyond.pressure_loss:
        return f"{start}: {by_law:.4g} kPa by the law, which is straight and its own tangent; it is a guess"
    return f"{start}: {by_law:.4g} kPa by the law, {by_tangent:.4g} kPa by its tangent; either is a guess"


def rheology_methods(case: Case, answers: RheologyAnswers) -> Iterator[MethodUse]:
    """Methods behind the rheology itself."""
    for source in dict.fromkeys(source for sheet in case.sheets for source in sheet.methods):
        yield MethodUse(source, "rheology from readings")
    by_source: dict[Source, list[str]] = {}
    for followed in case.followed:
        source = ARRHENIUS if followed.law.variable == "temperature" else SOLIDS_LAWS
        by_source.setdefault(source, []).append(followed.parameter.replace("_", " "))
    for source, names in by_source.items():
        yield MethodUse(source, ", ".join(names))
    if answers.tangent_method:
        source = turbulent_method(case.fluid.rheology, answers.tangent_method).source
        yield MethodUse(source, "turbulent friction by the tangent of the law")
