"""The page of a result in a terminal: 80 columns, readable without colour."""

from __future__ import annotations

import sys
from collections.abc import Container, Iterable, Iterator, Sequence
from dataclasses import fields
from shutil import get_terminal_size

from pipeflow.case.model import Case, Liquid, Solids
from pipeflow.line.elements import Pipe
from pipeflow.report.rheology_lines import rheology_lines
from pipeflow.report.text import PARAMETER_UNITS, WIDTH, paragraph, table
from pipeflow.rheology import Rheology
from pipeflow.study.flows import dry_solids_flow
from pipeflow.study.profile import atmospheric_pressure
from pipeflow.study.result import SAFETY_NOTICE, ElementResult, Result
from pipeflow.units import format_value, significant, to_display
from pipeflow.verdict import Check

MARK = {"ok": "ok", "not checked": "not checked", "caution": "CAUTION", "fail": "FAIL"}
"""The word for each status, the gravest last."""
REGIME_IN_SHORT = {"transitional": "transit.", "turbulent": "turb.", "laminar": "lam."}
STYLE = {"ok": "green", "caution": "yellow", "fail": "bold red", "not checked": "dim"}


def print_result(result: Result) -> None:
    """Print the page of a result and of its scenarios."""
    page = _Page(min(get_terminal_size((WIDTH, 24)).columns, WIDTH))
    page.case(result)
    page.flow(result)
    page.methods(result)
    if result.scenarios:
        page.heading("Scenarios side by side, at design flow")
        columns = ("", "head loss\nm", "upper\nm", "pump head\nupper m", "pressure\nupper kPa", "regime", "checks")
        page.rows(columns, _side_by_side(result), words=(0, 5, 6))
    for name, scenario in result.scenarios.items():
        page.banner(f"Scenario: {name}")
        page.flow(scenario, base=result)
    page.heading("Before relying on this")
    page.text(SAFETY_NOTICE)
    page.print()


class _Page:
    """The page as it is written, in the few shapes it is made of."""

    def __init__(self, width: int) -> None:
        self.width = width
        self.written: list[tuple[str, str]] = []

    def print(self) -> None:
        """Print the page, with its styles where a person reads it; rich is not loaded for a pipe."""
        if not sys.stdout.isatty():
            sys.stdout.write("".join(text for text, _ in self.written))
            return
        from rich.console import Console
        from rich.text import Text

        Console(highlight=False).print(Text.assemble(*self.written), end="", soft_wrap=True)

    def line(self, text: str = "", style: str = "") -> None:
        self.written.append((f"{text}\n", style))

    def banner(self, text: str) -> None:
        self.line()
        self.line("=" * self.width)
        self.line(paragraph(text, self.width), style="bold")

    def heading(self, text: str) -> None:
        self.line()
        self.line(text, style="bold")
        self.line("-" * min(len(text), self.width))

    def text(self, text: str, mark: str = "") -> None:
        """Write a paragraph, ``mark`` hanging before it."""
        self.line(paragraph(text, self.width, mark))

    def rows(self, columns: Sequence[str], rows: Iterable[Sequence[str]], words: Container[int] = (0,)) -> None:
        """Write a table; the columns numbered in ``words`` hold words, the others figures."""
        for line in table(columns, list(rows), words, self.width):
            self.line(line)

    def case(self, result: Result) -> None:
        case = result.case
        title = case.title + (f", revision {case.revision}" if case.revision else "")
        self.line(paragraph(title, self.width), style="bold")
        self.line(case.file)
        if case.notes:
            self.text(case.notes)
        self.heading("Fluid and basis")
        self.rows(("", ""), _basis(case), words=(0, 1))
        self.heading("Route")
        columns = ("element", "size", "bore\nmm", "length\nm", "rise\nm", "roughness\nmm")
        self.rows(columns, _route(result), words=(0, 1))
        for pipe in case.route:
            if isinstance(pipe, Pipe) and (pipe.fittings or pipe.loss_coefficient):
                self.text(", ".join(_counted(pipe)), mark=f"  {pipe.name}: ")

    def flow(self, result: Result, base: Result | None = None) -> None:
        """Write what the flow gives; of a scenario in brief, without what holds for its ``base`` case too."""
        self.heading(f"Flow at design, {format_value(result.case.flow.design, 'volume flow')}")
        columns = (
            "element",
            "V\nm/s",
            "Re_MR",
            "Re_MR\ncritical",
            "regime",
            "wall\nPa",
            "friction\nkPa",
            "minor\nkPa",
        )
        self.rows(columns, (_flow_row(element) for element in result.elements), words=(0, 4))
        self.heading("Totals")
        self.rows(("", "central", "upper", ""), _totals(result), words=(0, 3))
        self.spread(result)
        self.rheology(result)
        self.profile(result)
        self.checks(result, brief=base is not None)
        said = base.cautions if base else ()
        own = [caution for caution in result.cautions if caution not in said]
        if own:
            self.heading("Cautions" if base is None else "Cautions beside those of the case itself")
            for caution in own:
                self.text(caution, mark="! ")

    def spread(self, result: Result) -> None:
        if result.spread.head_loss:
            figures = ", ".join(f"{key} {_number(head)}" for key, head in result.spread.head_loss.items())
            self.text(f"Head loss by method, m: {figures}.", mark="  ")
        if result.spread.left_out:
            reasons = "; ".join(f"{key}, {why}" for key, why in result.spread.left_out.items())
            self.text(f"Not in the upper figure: {reasons}.", mark="  ")

    def rheology(self, result: Result) -> None:
        for line in rheology_lines(result, self.width):
            self.line(line)

    def profile(self, result: Result) -> None:
        profile = result.profile
        place = f"after {profile.pump_after}" if profile.pump_after else "at the start of the route"
        self.heading(f"Profile at design flow, pump {place}")
        columns = ("end of", "distance\nm", "elevation\nm", "head\nm", "pressure\nkPa gauge", "upper\nkPa gauge")
        self.rows(columns, _profile(result))
        self.text(f"Highest at {profile.highest_point}; lowest at {profile.lowest_point}.", mark="  ")
        if profile.slack and profile.slack.share:
            self.text(f"The head of the pump is governed by {profile.slack.governed_by}.", mark="  ")

    def checks(self, result: Result, brief: bool = False) -> None:
        """Write every check, or in brief the figures of those that call for thought and the names of the others."""
        self.heading("Checks")
        if not result.checks:
            self.text("The case states no limit, so none was checked.")
        quiet = ("ok", "not checked") if brief else ()
        for check in result.checks:
            if check.status not in quiet:
                self.written.append((f"{MARK[check.status]:<12}", STYLE[check.status]))
                self.line(f"{_spaced(check.name)}: {_against(check)}")
                self.text(check.basis, mark=" " * 12)
        for status in quiet:
            names = [_spaced(check.name) for check in result.checks if check.status == status]
            if names:
                self.text(", ".join(names), mark=f"{MARK[status]:<12}")

    def methods(self, result: Result) -> None:
        self.heading("Methods")
        for use in result.methods:
            note = f" Note: {use.source.note}." if use.source.note else ""
            self.text(f"{use.source.key}: {use.used_for}. {use.source.citation}.{note}", mark="- ")


def _counted(pipe: Pipe) -> list[str]:
    counts = [f"{count:g} x {key.replace('_', ' ')}" for key, count in pipe.fittings.items()]
    return counts + ([f"further K {pipe.loss_coefficient:g}"] if pipe.loss_coefficient else [])


def _profile(result: Result) -> list[tuple[str, ...]]:
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
            _number(point.distance, "m"),
            _number(point.elevation, "m"),
            _number(point.head, "m"),
            _number(point.pressure, "kPa"),
            _number(point.pressure_upper, "kPa"),
        )
        for name, point in named
    ]


def _place(index: int, element: str, before_pump: int) -> str:
    if index > 1:
        return element
    return "before the pump" if before_pump == 1 else "start of the route"


def _side_by_side(result: Result) -> Iterator[tuple[str, ...]]:
    for name, one in (("the case", result), *result.scenarios.items()):
        regimes = dict.fromkeys(element.regime for element in one.elements if element.regime)
        statuses = {check.status for check in one.checks}
        worst = next((mark for status, mark in reversed(MARK.items()) if status in statuses), "none stated")
        yield (
            name,
            _number(one.totals.head_loss),
            _number(one.totals.head_loss_upper),
            _number(one.profile.pump_head_upper),
            _number(one.profile.pump_pressure_upper, "kPa"),
            " / ".join(REGIME_IN_SHORT.get(regime, regime) for regime in regimes),
            worst,
        )


def _spaced(name: str) -> str:
    return name.replace("_", " ")


def _against(check: Check) -> str:
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


def _basis(case: Case) -> Iterator[tuple[str, str]]:
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
            f"{_number(flows.minimum, 'm3/h')} .. {format_value(flows.maximum, 'm3/h')}",
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


def _route(result: Result) -> Iterator[tuple[str, ...]]:
    for element in result.elements:
        if element.kind != "pipe":
            yield element.name, element.kind, "", "", "", ""
        else:
            yield (
                element.name,
                element.size or "by bore",
                _number(element.diameter, "mm"),
                _number(element.length, "m"),
                _number(element.rise, "m"),
                _number(element.roughness, "mm", 2),
            )


def _flow_row(element: ElementResult) -> tuple[str, ...]:
    if element.kind != "pipe":
        loss = _number(element.equipment_loss, "kPa") if element.kind == "equipment" else ""
        return element.name, "", "", "", "", "", "", loss
    return (
        element.name,
        _number(element.velocity, "m/s", 3),
        _number(element.reynolds_mr),
        _number(element.reynolds_critical),
        element.regime or "",
        _number(element.wall_shear_stress, "Pa"),
        _number(element.friction_loss, "kPa"),
        _number(element.fitting_loss, "kPa"),
    )


def _totals(result: Result) -> Iterator[tuple[str, ...]]:
    totals = result.totals
    yield (
        "pipe friction",
        _number(totals.friction_loss, "kPa"),
        _number(totals.friction_loss_upper, "kPa"),
        "kPa",
    )
    yield "fittings", _number(totals.fitting_loss, "kPa"), "", "kPa"
    yield "equipment", _number(totals.equipment_loss, "kPa"), "", "kPa"
    yield "head loss", _number(totals.head_loss), _number(totals.head_loss_upper), "m of slurry"
    yield "static head", _number(totals.static_head), "", "m of slurry"
    yield "total head", _number(totals.total_head), _number(totals.total_head_upper), "m of slurry"
    required = (_number(figure, "kPa") for figure in (totals.pressure_required, totals.pressure_required_upper))
    yield "pressure required", *required, "kPa"
    if result.profile.slack_upper and result.profile.slack_upper.share:
        profile = result.profile
        heads = (profile.pump_head, profile.pump_head_upper)
        pressures = (profile.pump_pressure, profile.pump_pressure_upper)
        yield "PUMP HEAD, slack flow", *(_number(head) for head in heads), "m of slurry"
        yield "PUMP PRESSURE, slack flow", *(_number(pressure, "kPa") for pressure in pressures), "kPa"


def _number(value: float | None, unit: str | None = None, digits: int = 4) -> str:
    if value is None:
        return "-"
    return significant(to_display(value, unit) if unit else value, digits)
