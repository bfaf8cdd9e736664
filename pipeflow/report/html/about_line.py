"""Sections on the line itself: what flows, the route, its losses, the profile."""

from __future__ import annotations

from collections.abc import Iterator

from markupsafe import Markup

from pipeflow.line.elements import Pipe
from pipeflow.report.charts import flow_curve_chart_svg, route_chart_svg
from pipeflow.report.html.about_vendor import vendor_blocks
from pipeflow.report.html.blocks import Block, Chart, Items, Section, Subsection, Text, names_and_values, section, table
from pipeflow.report.rheology_lines import (
    BEYOND_COLUMNS,
    FOLLOWED_COLUMNS,
    LAW_COLUMNS,
    PARAMETER_COLUMNS,
    beyond_note,
    beyond_row,
    followed_row,
    law_row,
    parameter_rows,
    sheet_text,
    used_text,
)
from pipeflow.report.rows import (
    FLOW_COLUMNS,
    PROFILE_COLUMNS,
    ROUTE_COLUMNS,
    TOTALS_COLUMNS,
    basis_rows,
    fittings_counted,
    flow_row,
    number,
    profile_rows,
    route_rows,
    totals_rows,
)
from pipeflow.study.design_file import DesignFile
from pipeflow.study.result import Result
from pipeflow.units import format_value


def line_sections(found: DesignFile) -> Iterator[Section]:
    """Give the sections on the line."""
    result = found.result
    design = format_value(result.case.flow.design, "volume flow")
    yield from section("basis", "Fluid and basis", _basis(result))
    yield from section("route", "Route", _route(result))
    yield from section("flow", f"Flow at design, {design}", _flow(result))
    yield from section("totals", "Totals", _totals(found))
    yield from section("profile", "Pressure and head along the route", _profile(result))


def _basis(result: Result) -> Iterator[Block]:
    yield from names_and_values("Fluid and basis", basis_rows(result.case))
    svg = Markup(flow_curve_chart_svg(result))
    yield Chart(svg, "Flow curve. The bars below are the wall shear rates of the pipes between minimum and maximum "
                "flow, the stroke across them the design flow; dashed is past what was tested.")  # fmt: skip
    yield from _readings(result)
    yield from _beyond_readings(result)


def _readings(result: Result) -> Iterator[Block]:
    case = result.case
    if case.fitted is not None and case.fitted.selected is not None:
        fit = case.fitted.selected
        yield Subsection("Rheology from readings")
        yield Text(f"{case.readings[0]}: {fit.model}, {case.fitted.fit.why}. {used_text(case.fitted)}")
        yield from table("Parameters of the model fitted", PARAMETER_COLUMNS, parameter_rows(fit), (0, 1, 3))
    elif case.sheets:
        yield Subsection("Rheology from readings")
        yield Items(tuple(sheet_text(*each) for each in zip(case.readings, case.sheets, strict=True)))
    if case.followed:
        yield Subsection("Parameters by solids or temperature")
        rows = [followed_row(one) for one in case.followed]
        yield from table("Parameters by solids or temperature", FOLLOWED_COLUMNS, rows, (0, 1, 3, 5))


def _beyond_readings(result: Result) -> Iterator[Block]:
    answers = result.rheology
    if answers.by_law:
        yield Subsection("Laws the readings do not tell apart, at design flow")
        rows = [law_row(law, answers.by_law[0]) for law in answers.by_law]
        yield from table("Losses by rival laws", LAW_COLUMNS, rows)
        if answers.for_design:
            yield Text(f"For design take {answers.for_design.model}, the highest loss.")
    if answers.beyond:
        yield Subsection("Wall shear rates far beyond those tested")
        yield from table("Losses past the rates tested", BEYOND_COLUMNS, [beyond_row(one) for one in answers.beyond])
        yield Text(beyond_note(answers))


def _route(result: Result) -> Iterator[Block]:
    rows = [(f"{place} {name}", *cells) for place, (name, *cells) in enumerate(route_rows(result), start=1)]
    yield from table("Elements of the route in flow order", ROUTE_COLUMNS, rows, (0, 1))
    pipes = [one for one in result.case.route if isinstance(one, Pipe) and (one.fittings or one.loss_coefficient)]
    if pipes:
        yield Items(tuple(f"{pipe.name}: {', '.join(fittings_counted(pipe))}" for pipe in pipes))


def _flow(result: Result) -> Iterator[Block]:
    yield from table("Flow in each element", FLOW_COLUMNS, [flow_row(one) for one in result.elements], (0, 4))


def _totals(found: DesignFile) -> Iterator[Block]:
    result = found.result
    yield from table("Losses and heads of the line", TOTALS_COLUMNS, totals_rows(result), (0, 3))
    profile = result.profile
    upper = f"{number(profile.pump_head_upper)} m of slurry, {number(profile.pump_pressure_upper, 'kPa')} kPa"
    yield Text(f"Pump of the case itself, at design flow: {upper} by the upper figure.")
    if result.spread.head_loss:
        figures = ", ".join(f"{key} {number(head)}" for key, head in result.spread.head_loss.items())
        yield Text(f"Head loss by method, m: {figures}.")
    if result.spread.left_out:
        reasons = "; ".join(f"{key}, {why}" for key, why in result.spread.left_out.items())
        yield Text(f"Not in the upper figure: {reasons}.")
    yield from vendor_blocks(found.vendor)


def _profile(result: Result) -> Iterator[Block]:
    profile = result.profile
    svg = Markup(route_chart_svg(result))
    yield Chart(svg, "Head and pressure along the route at design flow. Heads are metres of the slurry above the start "
                "of the route; the grade line is elevation and pressure head.")  # fmt: skip
    place = f"after {profile.pump_after}" if profile.pump_after else "at the start of the route"
    yield from table(f"Profile, pump {place}", PROFILE_COLUMNS, profile_rows(result))
    yield Text(f"The pump stands {place}. Highest at {profile.highest_point}; lowest at {profile.lowest_point}.")
    if profile.slack and profile.slack.share:
        yield Text(f"The head of the pump is governed by {profile.slack.governed_by}.")
