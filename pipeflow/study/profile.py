"""The profile of a case at design flow: pressure and head along the route, slack flow behind a high point."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from pipeflow.case.model import Case
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line.profile import GradeLine, Profile, profile
from pipeflow.line.route import LineFlow
from pipeflow.line.site import SEA_LEVEL_PRESSURE, standard_atmosphere
from pipeflow.study.flows import DESIGN, element_before_pump, pump_position
from pipeflow.study.result import ProfilePoint, ProfileResult, SlackResult


def atmospheric_pressure(case: Case) -> float | None:
    """Absolute pressure of the air at the site, Pa; None where the case does not say."""
    if case.site is None:
        return None
    if case.site.atmospheric_pressure is not None:
        return case.site.atmospheric_pressure
    return float(standard_atmosphere(case.site.altitude or 0.0))


def profile_of(case: Case, line: LineFlow) -> ProfileResult:
    """Read the solved line at its nodes, the pump where the case has it, else at the start of the route.

    Slack flow is checked with the pressure of the site and of the vapour. Where the case does not give them but the
    pressure would fall below a vacuum at sea level, it is checked against that vacuum.
    """
    atmosphere, vapour = atmospheric_pressure(case), case.liquid.vapour_pressure if case.liquid else None
    missing = {"site": atmosphere, "fluid.liquid.vapour_pressure": vapour}
    found = read_along(case, line, atmosphere, vapour)
    impossible = found.central.slack is None and _lowest(case, found) < -SEA_LEVEL_PRESSURE
    if impossible:
        found = read_along(case, line, atmosphere or SEA_LEVEL_PRESSURE, vapour or 0.0)
    points, before_pump = tuple(_points(found)), 2 * pump_position(case) + 1
    heads = (float(found.central.pump_head[DESIGN]), float(found.upper.pump_head[DESIGN]))
    pressures = tuple(float(case.fluid.density) * STANDARD_GRAVITY * head for head in heads)
    return ProfileResult(
        points=points,
        pump_after=element_before_pump(case),
        before_pump=before_pump,
        after_pump=_raised(points[before_pump], heads, pressures),
        pump_head=heads[0],
        pump_head_upper=heads[1],
        pump_pressure=pressures[0],
        pump_pressure_upper=pressures[1],
        highest_point=str(found.nodes[int(found.highest_point[DESIGN])]),
        lowest_point=str(found.nodes[int(found.lowest_point[DESIGN])]),
        lowest_pressure=_lowest(case, found),
        lowest_pressure_at=str(found.nodes[int(found.central.lowest_pressure[DESIGN])]),
        highest_pressure_at=str(found.nodes[int(found.upper.highest_pressure[DESIGN])]),
        slack=_slack(found, found.central),
        slack_upper=_slack(found, found.upper),
        slack_by_vacuum=impossible,
        needed_for_slack=tuple(key for key, value in missing.items() if value is None),
    )


def read_along(case: Case, line: LineFlow, atmosphere: float | None, vapour: float | None) -> Profile:
    """Read a line at its nodes; its high points ask for what they need where both absolute pressures, Pa, are known."""
    return profile(
        line,
        case.fluid,
        case.route,
        case.source,
        case.destination,
        pump_position=pump_position(case),
        atmospheric_pressure=atmosphere,
        vapour_pressure=vapour,
    )


def _lowest(case: Case, found: Profile) -> float:
    """Lowest gauge pressure along the route, Pa."""
    return _without_rounding(found.along_route(found.central, case.fluid.density)[DESIGN].min())


def _points(found: Profile) -> Iterator[ProfilePoint]:
    for index, node in enumerate(found.nodes):
        yield ProfilePoint(
            node.element,
            node.place,
            distance=float(found.distance[DESIGN, index]),
            elevation=float(found.elevation[DESIGN, index]),
            head=float(found.central.total_head[DESIGN, index]),
            head_upper=float(found.upper.total_head[DESIGN, index]),
            pressure=_without_rounding(found.central.pressure[DESIGN, index]),
            pressure_upper=_without_rounding(found.upper.pressure[DESIGN, index]),
        )


def _raised(point: ProfilePoint, heads: tuple[float, ...], pressures: tuple[float, ...]) -> ProfilePoint:
    """The point with the central and upper head of the pump, m, and its pressure, Pa, added."""
    return replace(
        point,
        head=point.head + heads[0],
        head_upper=point.head_upper + heads[1],
        pressure=point.pressure + pressures[0],
        pressure_upper=point.pressure_upper + pressures[1],
    )


def _without_rounding(pressure: float) -> float:
    """Pressure to a microPascal: what heads that should cancel leave is none."""
    return round(float(pressure), 6) + 0.0


def _slack(found: Profile, grade: GradeLine) -> SlackResult | None:
    if grade.slack is None:
        return None
    share = grade.slack.share[DESIGN]
    return SlackResult(
        head_required=float(grade.slack.head_required[DESIGN]),
        head_without=float(grade.slack.head_without[DESIGN]),
        governed_by=str(found.nodes[int(grade.slack.governing[DESIGN])]),
        share={name: float(part) for name, part in zip(found.elements, share, strict=True) if part > 0},
    )
