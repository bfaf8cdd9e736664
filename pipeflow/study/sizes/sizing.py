"""Size a case: every size of a series, or a free bore, against every limit at every flow and in every scenario."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import groupby
from typing import Any

import numpy as np

from pipeflow import sizing
from pipeflow.case.model import Case, Limits
from pipeflow.errors import InputError, Problem
from pipeflow.friction import Regime
from pipeflow.line.catalogue import INCH, MATERIALS, find_size, sizes_of
from pipeflow.line.elements import Element, Pipe, Vessel
from pipeflow.line.fittings import DEFAULT_METHOD, EXIT, resistance
from pipeflow.line.route import LineFlow
from pipeflow.study.checks import checks, stopped_line
from pipeflow.study.flows import DESIGN, MAXIMUM, MINIMUM, pipes_of
from pipeflow.study.sizes.economy import Bore, Economy, cost_per_year, economy
from pipeflow.units import format_si, format_value
from pipeflow.verdict import Check

OWN = "the case"
ROUGHEST = 0.1
"""Highest roughness over bore, as a case may have it."""
RISING_LIMITS = (
    "head_loss", "pressure_loss", "velocity_maximum", "wall_shear_rate", "wall_shear_stress", "temperature_rise",
    "restart_pressure",
)  # fmt: skip


@dataclass(frozen=True)
class Candidate:
    """One size of the pipes that vary, SI.

    Losses, velocities and Reynolds numbers of the first pipe that varies are of the case itself at design flow, with
    the exceptions their names tell; ``head_loss_upper`` is at maximum flow in the scenario of the highest pressure
    loss.
    ``deposition_margin``, ``restart_pressure``, ``rating`` and ``residence_time`` are the worst of all scenarios;
    ``on_central`` names the checks that hold on the central figure alone, ``excess`` is how far the worst fails.
    """

    size: str
    diameter: float
    head_loss: float
    head_loss_maximum: float
    head_loss_upper: float
    governing_scenario: str
    velocity: float
    velocity_minimum: float
    velocity_maximum: float
    regime: str
    reynolds_mr: float
    reynolds_critical: float
    wall_shear_stress: float
    wall_shear_rate: float
    deposition_margin: float | None
    restart_pressure: float | None
    rating: float | None
    residence_time: float | None
    cost_per_year: float | None
    passes: bool
    fails: tuple[str, ...]
    cautions: tuple[str, ...]
    on_central: tuple[str, ...]
    excess: float


@dataclass(frozen=True)
class SizingResult:
    """The sizes tried, the one to choose (the smallest that passes) and what it costs to be wrong by one size."""

    case: Case
    series: str | None
    pipes: tuple[str, ...]
    candidates: tuple[Candidate, ...]
    selected: Candidate | None
    nearest: Candidate | None
    economy: Economy | None
    notes: tuple[str, ...]


def size(case: Case) -> SizingResult:
    """Size the pipes that vary.

    Raises
    ------
    InputError
        The case states no limit, or says no sizes to try.
    """
    if case.limits == Limits() and not any(one.limits != Limits() for one in case.scenarios.values()):
        raise refused(case, "limits", "missing; a line is sized against limits: give one, as {head_loss: 60 m}")
    pipes = varying(case)
    cases = {OWN: case, **case.scenarios}
    if case.sizing.bores is not None:
        series, bores, notes = None, *_free_bore(case, cases, pipes)
    else:
        series, bores = _series(case, pipes)
        notes = ()
    candidates = tuple(_candidates(cases, bores, pipes))
    passing = [one for one in candidates if one.passes]
    return SizingResult(
        case=case,
        series=series,
        pipes=pipes,
        candidates=candidates,
        selected=passing[0] if passing else None,
        nearest=None if passing or not candidates else min(candidates, key=lambda one: one.excess),
        economy=economy([one.size for one in passing], [one.cost_per_year for one in passing]),
        notes=(*notes, *_contradictions(case), *_on_the_central_figure(candidates)),
    )


def refused(case: Case, key: str, message: str) -> InputError:
    """Word what a command asks of a case that is right in itself."""
    return InputError([Problem(case.file, None, None, key, message)])


def varying(case: Case) -> tuple[str, ...]:
    """Names of the pipes that vary, in flow order."""
    names = [pipe.name for pipe in pipes_of(case)]
    wanted = case.sizing.pipes or tuple(names)
    if not names:
        raise refused(case, "route", "no pipe to size")
    return tuple(name for name in names if name in wanted)


def _series(case: Case, pipes: Sequence[str]) -> tuple[str, list[Bore]]:
    asked, first = case.sizing, case.sizes.get(pipes[0])
    of_first = find_size(first) if first else None
    series = asked.series or (of_first.series if of_first else None)
    if series is None:
        message = f"missing; {pipes[0]} is given by its bore: give the series, as 'NPS Sch 40', or 'bores'"
        raise refused(case, "sizing.series", message)
    ends = [find_size(name) if name else None for name in (asked.smallest, asked.largest)]
    low, high = ends[0].inside_diameter if ends[0] else 0.0, ends[1].inside_diameter if ends[1] else np.inf
    sizes = [one for one in sizes_of(series) if low <= one.inside_diameter <= high]
    return series, [Bore(one.name, one.inside_diameter, one.nominal_diameter, one) for one in sizes]


def methods_of(case: Case) -> sizing.MethodKeys:
    """Methods the case asks for."""
    return sizing.MethodKeys(case.methods.turbulent, case.methods.critical, case.methods.fittings)


def variant(case: Case) -> sizing.Variant:
    """Lay a case out as a line to be varied."""
    stopped = stopped_line(case)
    method = case.methods.fittings or DEFAULT_METHOD
    limits = {name: getattr(case.limits, name) for name in RISING_LIMITS}
    if stopped is None:
        del limits["restart_pressure"]
    if case.specific_heat is None:
        del limits["temperature_rise"]
    return sizing.Variant(
        flows=np.array([case.flow.design, case.flow.minimum, case.flow.maximum]),
        fluid=case.fluid,
        route=case.route,
        source=case.source or Vessel(),
        destination=case.destination or Vessel(),
        particle_size=case.particle_size,
        limits={name: limit for name, limit in limits.items() if limit is not None},
        static_yield_stress=stopped.static_yield_stress * stopped.factor if stopped else 0.0,
        laminar_resistance=tuple(_laminar_resistance(pipe, method) for pipe in pipes_of(case)),
        specific_heat=np.nan if case.specific_heat is None else case.specific_heat,
    )


def _laminar_resistance(pipe: Pipe, method: str) -> float:
    counts = {key: count for key, count in pipe.fittings.items() if key != EXIT}
    return float(resistance(counts, pipe.diameter, pipe.nominal_diameter, method)[0])


def alike(cases: dict[str, Case]) -> Iterator[dict[str, Case]]:
    """Group cases that differ in numbers only, so that each group is one call."""

    def form(named: tuple[str, Case]) -> str:
        one = replace(variant(named[1]), limits={})
        return repr((sizing.skeleton(one), methods_of(named[1])))

    for _, group in groupby(sorted(cases.items(), key=form), key=form):
        yield dict(group)


def _free_bore(case: Case, cases: dict[str, Case], pipes: tuple[str, ...]) -> tuple[list[Bore], tuple[str, ...]]:
    """The smallest bore at which every limit holds that a wider bore eases."""
    least, most = case.sizing.bores or (0.0, 0.0)
    found: list[tuple[float, str, str]] = []
    for group in alike(cases):
        names = list(group)
        for root in sizing.roots(
            [variant(one) for one in group.values()],
            sizing.with_bore(frozenset(pipes), INCH),
            (least, most),
            methods_of(next(iter(group.values()))),
            falling=True,
        ):
            found.append((root.value, root.limit, names[root.variant]))
    bore, limit, name = max(found, default=(least, "", ""))
    if bore <= least:
        return [_free(least)], ("the narrowest bore of the case meets every limit that a wider one eases",)
    if bore > most:
        return [_free(most)], (f"{limit} ({name}) is not met by any bore up to {most * 1e3:.4g} mm",)
    return [_free(bore * (1.0 + sizing.ROOT_MARGIN))], (f"the bore is settled by {limit} ({name})",)


def _free(bore: float) -> Bore:
    return Bore(format_value(bore, "mm", 6), bore, bore / INCH, None)


def _candidates(cases: dict[str, Case], bores: list[Bore], pipes: tuple[str, ...]) -> Iterator[Candidate]:
    solved: dict[str, tuple[LineFlow, int]] = {}
    for group in alike(cases):
        line = _grid(list(group.values()), bores, pipes)
        solved |= {name: (line, place) for place, name in enumerate(group)}
    for index, bore in enumerate(bores):
        lines = {name: sizing.at(line, (index, place)) for name, (line, place) in solved.items()}
        yield _candidate({name: with_bore(cases[name], bore, pipes) for name in cases}, lines, bore, pipes)


def _grid(cases: list[Case], bores: list[Bore], pipes: tuple[str, ...]) -> LineFlow:
    tried = sizing.Bores(
        np.array([bore.diameter for bore in bores]),
        np.array([bore.nominal for bore in bores]),
        np.array([_roughness(cases[0], bore, pipes) for bore in bores]),
    )
    assumed = [frozenset(case.default_roughness) for case in cases]
    variants = [replace(variant(case), limits={}) for case in cases]
    return sizing.solve_grid(variants, tried, frozenset(pipes), assumed, methods_of(cases[0]))


def _roughness(case: Case, bore: Bore, pipes: tuple[str, ...]) -> float:
    material = bore.size.material if bore.size else case.default_roughness.get(pipes[0], "steel")
    return MATERIALS[material].roughness


def with_bore(case: Case, bore: Bore, pipes: tuple[str, ...]) -> Case:
    """Give the case with another bore of the pipes that vary."""
    rough = _roughness(case, bore, pipes)

    def varied(element: Element) -> Element:
        if not isinstance(element, Pipe) or element.name not in pipes:
            return element
        roughness = rough if element.name in case.default_roughness else element.roughness
        return replace(element, diameter=bore.diameter, nominal_diameter=bore.nominal, roughness=roughness)

    named = dict.fromkeys(pipes, bore.size.name) if bore.size else {}
    sizes = {name: one for name, one in case.sizes.items() if name not in pipes} | named
    return replace(case, route=tuple(varied(element) for element in case.route), sizes=sizes)


def _candidate(cases: dict[str, Case], lines: dict[str, LineFlow], bore: Bore, pipes: tuple[str, ...]) -> Candidate:
    found = {name: list(checks(cases[name], lines[name])) for name in cases}
    own, line = cases[OWN], lines[OWN]
    place = [pipe.name for pipe in pipes_of(own)].index(pipes[0])
    governing = max(lines, key=lambda name: float(lines[name].pressure_loss_upper[MAXIMUM]))
    fails = (*_worst(found, "fail"), *_too_rough(own, pipes))
    flow = line.pipes
    return Candidate(
        size=bore.name,
        diameter=bore.diameter,
        head_loss=float(line.head_loss[DESIGN]),
        head_loss_maximum=float(lines[governing].head_loss[MAXIMUM]),
        head_loss_upper=float(lines[governing].head_loss_upper[MAXIMUM]),
        governing_scenario=governing,
        velocity=float(line.velocity[DESIGN, place]),
        velocity_minimum=float(line.velocity[MINIMUM, place]),
        velocity_maximum=float(line.velocity[MAXIMUM, place]),
        regime=Regime(int(flow.regime[DESIGN, place])).name.lower().replace("_", " "),
        reynolds_mr=float(flow.reynolds_mr[DESIGN, place]),
        reynolds_critical=float(flow.reynolds_critical[DESIGN, place]),
        wall_shear_stress=float(flow.wall_shear_stress[MAXIMUM, place]),
        wall_shear_rate=float(flow.wall_shear_rate[MAXIMUM, place]),
        deposition_margin=_least(found, "deposition", lambda check: check.value / check.limit),
        restart_pressure=_least(found, "restart_pressure", lambda check: check.value, highest=True),
        rating=_least(found, "pipe_wall", lambda check: check.limit),
        residence_time=_least(found, "residence_time", lambda check: check.value),
        cost_per_year=cost_per_year(own, line, bore, pipes),
        passes=not fails,
        fails=fails,
        cautions=_worst(found, "caution"),
        on_central=tuple(
            dict.fromkeys(check.name for _, check in _of_status(found, "caution") if check.value_upper is not None)
        ),
        excess=max((_excess(check) for _, check in _of_status(found, "fail")), default=0.0),
    )


def _too_rough(case: Case, pipes: tuple[str, ...]) -> Iterator[str]:
    for pipe in pipes_of(case):
        if pipe.name in pipes and pipe.roughness > ROUGHEST * pipe.diameter:
            yield f"roughness of {pipe.name} {format_value(float(pipe.roughness), 'mm')}, at most a tenth of the bore"


def _of_status(found: dict[str, list[Check]], status: str) -> Iterator[tuple[str, Check]]:
    for name, made in found.items():
        yield from ((name, check) for check in made if check.status == status)


def _worst(found: dict[str, list[Check]], status: str) -> tuple[str, ...]:
    """Word the checks of a status, each once, in the scenario where it is farthest from its limit."""
    worst: dict[str, tuple[str, Check]] = {}
    for name, check in _of_status(found, status):
        if check.name not in worst or _excess(check) > _excess(worst[check.name][1]):
            worst[check.name] = (name, check)
    return tuple(_said(name, check) for name, check in worst.values())


def _least(found: dict[str, list[Check]], name: str, figure: Any, highest: bool = False) -> float | None:
    values = []
    for check in (check for made in found.values() for check in made if check.name == name):
        try:
            values.append(float(figure(check)))
        except TypeError:  # a check without its figure
            continue
    return (max(values) if highest else min(values)) if values else None


def _excess(check: Check) -> float:
    """How far a failed check is beyond its limit: a ratio above 1."""
    if check.value is None or not check.limit or check.value <= 0 or check.limit <= 0:
        return np.inf
    return check.limit / check.value if check.sense == "at least" else check.value / check.limit


def _said(name: str, check: Check) -> str:
    """``head_loss 75.2 m, at most 60 m (thick)``."""
    if check.value is None or check.limit is None:
        return f"{check.name}: {check.basis}{_in(name)}"
    value, limit = (format_si(figure, check.unit) for figure in (check.value, check.limit))
    return f"{check.name} {value}, {check.sense} {limit}{_in(name)}"


def _in(name: str) -> str:
    return "" if name == OWN else f" ({name})"


def _on_the_central_figure(candidates: Sequence[Candidate]) -> Iterator[str]:
    """Say so where the size to choose passes on the central figure alone."""
    passing = [one for one in candidates if one.passes]
    if passing and passing[0].on_central:
        sure = next((one.size for one in passing if not one.on_central), "none of these sizes")
        names = ", ".join(passing[0].on_central)
        yield f"{passing[0].size} meets {names} on the central figure alone, a caution; {sure} meets all on the upper"


def _contradictions(case: Case) -> Iterator[str]:
    low, high = case.limits.velocity_minimum, case.limits.velocity_maximum
    if low and high and case.flow.maximum * low > case.flow.minimum * high:
        yield (
            f"no bore keeps {low:.3g} m/s at minimum flow and {high:.3g} m/s at maximum flow: the flows are "
            f"{case.flow.maximum / case.flow.minimum:.3g} apart, the limits {high / low:.3g}"
            if case.flow.minimum > 0
            else "no bore keeps a least velocity at a minimum flow of 0"
        )
