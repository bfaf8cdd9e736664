"""What every page says of a result, row by row: the words and the figures, laid out by the page that shows them."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import fields

from pipeflow.case.model import Case, Liquid, Solids
from pipeflow.line.elements import Pipe
from pipeflow.report.text import PARAMETER_UNITS
from pipeflow.rheology import Rheology
from pipeflow.study.flows import dry_solids_flow
from pipeflow.study.profile import atmospheric_pressure
from pipeflow.study.result import ElementResult, Result
from pipeflow.units import format_value, significant, to_display
from pipeflow.verdict import Check

MARK = {"ok": "ok", "not checked": "not checked", "caution": "CAUTION", "fail": "FAIL"}
"""The word for each status, the gravest last."""
REGIME_IN_SHORT = {"transitional": "transit.", "turbulent": "turb.", "laminar": "lam."}
ROUTE_COLUMNS = ("element", "size", "bore\nmm", "length\nm", "rise\nm", "roughness\nmm")
FLOW_COLUMNS = (
    "element", "V\nm/s", "Re_MR", "Re_MR\ncritical", "regime", "wall\nPa", "friction\nkPa", "minor\nkPa",
)  # fmt: skip
TOTALS_COLUMNS = ("", "central", "upper", "")
PROFILE_COLUMNS = ("end of", "distance\nm", "elevation\nm", "head\nm", "pressure\nkPa gauge", "upper\nkPa gauge")
SCENARIO_COLUMNS = ("", "head loss\nm", "upper\nm", "pump head\nupper m", "pressure\nupper kPa", "regime", "checks")


def fittings_counted(pipe: Pipe) -> list[str]:
    """The fittings of a pipe with their numbers, and its further coefficient."""
    counts = [f"{count:g} x {key.replace('_', ' ')}" for key, count in pipe.fittings.items()]
    return counts + ([f"further K {pipe.loss_coefficient:g}"] if pipe.loss_coefficient else [])


def profile_rows(result: Result) -> list[tuple[str, ...]]:
    """The start of the route, the end of every element, and the line right after the pump."""
    profile = result.profile
    named = []
    for index, point in enumerate(profile.points[:-1]):
        if index == 1 or (index > 1 and point.place == "end"):
            named.append((_place(index, point.element, profile.before_pump), point))
        if index == profile.before_pump:
            named.append(("after the pump", profile.after_pump))
    return [
        (
            name,
            number(point.distance, "m"),
            number(point.elevation, "m"),
            number(point.head, "m"),
            number(point.pressure, "kPa"),
            number(point.pressure_upper, "kPa"),
        )
        for name, point in named
    ]


def _place(index: int, element: str, before_pump: int) -> str:
    if index > 1:
        return element
    return "before the pump" if before_pump == 1 else "start of the route"


def scenario_rows(result: Result) -> Iterator[tuple[str, ...]]:
    """The case and each scenario: losses, pump head and pressure, regimes, the gravest check."""
    for name, one in (("the case", result), *result.scenarios.items()):
        regimes = dict.fromkeys(element.regime for element in one.elements if element.regime)
        yield (
            name,
            number(one.totals.head_loss),
            number(one.totals.head_loss_upper),
            number(one.profile.pump_head_upper),
            number(one.profile.pump_pressure_upper, "kPa"),
            " / ".join(REGIME_IN_SHORT.get(regime, regime) for regime in regimes),
            worst_mark(one.checks),
        )


def worst_mark(checks: Iterable[Check]) -> str:
    """The word for the gravest of some checks."""
    statuses = {check.status for check in checks}
    return next((mark for status, mark in reversed(MARK.items()) if status in statuses), "none stated")


def spaced(name: str) -> str:
    """A key as words."""
    return name.replace("_", " ")


def against_limit(check: Check) -> str:
    """The value of a check against its limit."""
    unit = "kPa" if check.unit == "Pa" and max(abs(check.value or 0.0), abs(check.limit or 0.0)) >= 1e3 else check.unit
    if check.value is None:
        return "no figure"
    if check.limit is None:
        return _figure(check.value, unit)
    value, limit = (_figure(figure, unit) for figure in (check.value, check.limit))
    upper = f" (upper {_figure(check.value_upper, unit)})" if check.value_upper is not None else ""
    return f"{value}{upper}, {check.sense} {limit}"


def _figure(value: float, unit: str) -> str:
    if unit == "Pa/m":
        return f"{significant(value / 1e3)} kPa/m"
    return format_value(value, unit) if unit else significant(value)


def basis_rows(case: Case) -> Iterator[tuple[str, str]]:
    """What flows, how much of it, and between which ends: name and value."""
    mixed = ", mixed of solids and liquid" if case.density_is_mixed else ""
    yield "density", format_value(float(case.fluid.density), "kg/m3") + mixed
    if case.temperature is not None:
        yield "temperature", format_value(case.temperature, "°C")
    if case.solids:
        yield from _solids(case, case.solids)
    if case.liquid:
        yield from _liquid(case.liquid)
    yield "rheology", case.fluid.rheology.key
    yield from _parameters(case.fluid.rheology)
    if case.tested_shear_rate:
        low, high = (significant(rate) for rate in case.tested_shear_rate)
        yield "  tested over", f"{low} .. {high} 1/s"
    flows = case.flow
    yield "flow, design", format_value(flows.design, "volume flow")
    if flows.minimum != flows.maximum:
        yield (
            "  minimum .. maximum",
            f"{number(flows.minimum, 'm3/h')} .. {format_value(flows.maximum, 'm3/h')}",
        )
    for name, vessel in (("source", case.source), ("destination", case.destination)):
        if vessel:
            pressure, level = format_value(float(vessel.pressure), "kPa"), format_value(float(vessel.level), "m")
            free = ", free discharge" if vessel.discharge == "free" else ""
            yield name, f"{pressure} gauge, level {level}{free}"
    if case.site:
        atmosphere = atmospheric_pressure(case)
        yield "atmosphere", format_value(atmosphere or 0.0, "kPa") + " absolute"


def _solids(case: Case, solids: Solids) -> Iterator[tuple[str, str]]:
    yield "solids", format_value(solids.density, "kg/m3")
    yield "  by mass, by volume", f"{100 * solids.mass_fraction:.4g} %, {100 * solids.volume_fraction:.4g} %"
    yield "  dry, at design flow", format_value(dry_solids_flow(case) or 0.0, "t/h")
    for name, size in (("d50", solids.d50), ("d85", solids.d85)):
        if size is not None:
            yield f"  {name}", format_value(size, "µm")


def _liquid(liquid: Liquid) -> Iterator[tuple[str, str]]:
    for name, value, unit in (
        ("liquid", liquid.density, "kg/m3"),
        ("  its viscosity", liquid.viscosity, "mPa.s"),
        ("  its vapour pressure", liquid.vapour_pressure, "kPa"),
    ):
        if value is not None:
            yield name, format_value(value, unit)


def _parameters(rheology: Rheology) -> Iterator[tuple[str, str]]:
    for field in fields(rheology):  # type: ignore[arg-type]
        value = getattr(rheology, field.name)
        shown = f"{significant(value)} {PARAMETER_UNITS[field.name]}".rstrip()
        yield f"  {field.name.replace('_', ' ')}", shown


def route_rows(result: Result) -> Iterator[tuple[str, ...]]:
    """Each element with its size and length."""
    for element in result.elements:
        if element.kind != "pipe":
            yield element.name, element.kind, "", "", "", ""
        else:
            yield (
                element.name,
                element.size or "by bore",
                number(element.diameter, "mm"),
                number(element.length, "m"),
                number(element.rise, "m"),
                number(element.roughness, "mm", 2),
            )


def flow_row(element: ElementResult) -> tuple[str, ...]:
    """What flows in one element at design flow, and what it loses."""
    if element.kind != "pipe":
        loss = number(element.equipment_loss, "kPa") if element.kind == "equipment" else ""
        return element.name, "", "", "", "", "", "", loss
    return (
        element.name,
        number(element.velocity, "m/s", 3),
        number(element.reynolds_mr),
        number(element.reynolds_critical),
        element.regime or "",
        number(element.wall_shear_stress, "Pa"),
        number(element.friction_loss, "kPa"),
        number(element.fitting_loss, "kPa"),
    )


def totals_rows(result: Result) -> Iterator[tuple[str, ...]]:
    """Losses and heads of the line: name, central and upper figure, unit."""
    totals = result.totals
    yield (
        "pipe friction",
        number(totals.friction_loss, "kPa"),
        number(totals.friction_loss_upper, "kPa"),
        "kPa",
    )
    yield "fittings", number(totals.fitting_loss, "kPa"), "", "kPa"
    yield "equipment", number(totals.equipment_loss, "kPa"), "", "kPa"
    yield "head loss", number(totals.head_loss), number(totals.head_loss_upper), "m of slurry"
    yield "static head", number(totals.static_head), "", "m of slurry"
    yield "total head", number(totals.total_head), number(totals.total_head_upper), "m of slurry"
    required = (number(figure, "kPa") for figure in (totals.pressure_required, totals.pressure_required_upper))
    yield "pressure required", *required, "kPa"
    if result.profile.slack_upper and result.profile.slack_upper.share:
        profile = result.profile
        heads = (profile.pump_head, profile.pump_head_upper)
        pressures = (profile.pump_pressure, profile.pump_pressure_upper)
        yield "PUMP HEAD, slack flow", *(number(head) for head in heads), "m of slurry"
        yield "PUMP PRESSURE, slack flow", *(number(pressure, "kPa") for pressure in pressures), "kPa"


def number(value: float | None, unit: str | None = None, digits: int = 4) -> str:
    """A figure in a display unit; a dash where there is none."""
    if value is None:
        return "-"
    return significant(to_display(value, unit) if unit else value, digits)
