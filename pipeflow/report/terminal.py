"""The page of a result in a terminal: 80 columns, readable without colour."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import fields
from textwrap import fill

from rich.console import Console
from rich.table import Table
from rich.text import Text

from pipeflow.case.model import Case
from pipeflow.line.elements import Pipe
from pipeflow.rheology import Rheology
from pipeflow.study import SAFETY_NOTICE, ElementResult, Result
from pipeflow.units import format_value, significant, to_display
from pipeflow.verdict import Check

WIDTH = 80
MARK = {"ok": "ok", "caution": "CAUTION", "fail": "FAIL", "not checked": "not checked"}
STYLE = {"ok": "green", "caution": "yellow", "fail": "bold red", "not checked": "dim"}
PARAMETERS = {
    "viscosity": "viscosity",
    "plastic_viscosity": "viscosity",
    "casson_viscosity": "viscosity",
    "consistency": "consistency",
    "yield_stress": "stress",
}


def print_result(result: Result, console: Console | None = None) -> None:
    """Print the page of a result and of its scenarios."""
    console = console or Console(highlight=False)
    console.width = min(console.width, WIDTH)
    page = _Page(console)
    page.result(result)
    for name, scenario in result.scenarios.items():
        page.heading(f"Scenario: {name}")
        page.scenario(scenario)
    page.heading("Before relying on this")
    page.text(SAFETY_NOTICE)


class _Page:
    """A console with the few shapes the page is made of."""

    def __init__(self, console: Console) -> None:
        self.console = console

    def heading(self, text: str) -> None:
        self.console.print()
        self.console.print(Text(text, style="bold"))
        self.console.print(Text("-" * min(len(text), self.console.width)))

    def text(self, text: str, indent: str = "") -> None:
        self.console.print(
            Text(fill(text, self.console.width, initial_indent=indent, subsequent_indent=" " * len(indent)))
        )

    def rows(self, columns: Iterable[str], rows: Iterable[Iterable[str]], names: int = 1) -> None:
        """Print a table; its first ``names`` columns are words, the others figures."""
        table = Table(box=None, padding=(0, 1, 0, 0), pad_edge=False, header_style="dim")
        for index, column in enumerate(columns):
            table.add_column(column, justify="left" if index < names else "right", overflow="fold")
        for row in rows:
            table.add_row(*(Text(cell) for cell in row))
        self.console.print(table)

    def result(self, result: Result) -> None:
        case = result.case
        title = f"{case.title}" + (f"  (revision {case.revision})" if case.revision else "")
        self.console.print(Text(fill(title, self.console.width), style="bold"))
        self.console.print(Text(case.file))
        if case.notes:
            self.text(case.notes)
        self.heading("Fluid and basis")
        self.rows(("", ""), _basis(case), names=2)
        self.heading("Route")
        self.rows(
            ("element", "size", "bore mm", "length m", "rise m", "rough. mm", "fittings"),
            _route(result),
            names=2,
        )
        self.scenario(result)
        self.heading("Methods")
        for use in result.methods:
            self.text(f"{use.source.key}: {use.source.citation}. For {use.used_for}.", indent="  ")

    def scenario(self, result: Result) -> None:
        self.heading(f"Flow at design, {format_value(result.case.flow.design, 'volume flow')}")
        columns = ("element", "m/s", "Re_MR", "critical", "regime", "wall Pa", "friction kPa", "fittings kPa")
        self.rows(columns, (_flow_row(element) for element in result.elements))
        self.heading("Totals")
        self.rows(("", "central", "upper", ""), _totals(result))
        self.checks(result)
        if result.cautions:
            self.heading("Cautions")
            for caution in result.cautions:
                self.text(caution, indent="! ")

    def checks(self, result: Result) -> None:
        self.heading("Checks")
        if not result.checks:
            self.text("No limit is stated in the case, so none was checked.")
        for check in result.checks:
            line = Text(f"{MARK[check.status]:<8}", style=STYLE[check.status])
            self.console.print(line.append(Text(f"{check.name}: {_against(check)}", style="default")))
            self.text(check.basis, indent=" " * 8)


def _against(check: Check) -> str:
    unit = "kPa" if check.unit == "Pa" else check.unit
    if check.value is None or check.limit is None:
        return "no figure"
    value, limit = (format_value(figure, unit) for figure in (check.value, check.limit))
    kind = "at least" if check.name.endswith("_minimum") else "at most"
    upper = f" (upper {format_value(check.value_upper, unit)})" if check.value_upper is not None else ""
    return f"{value}{upper}, {kind} {limit}"


def _basis(case: Case) -> Iterator[tuple[str, str]]:
    yield "density", format_value(case.fluid.density, "kg/m3")
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
            pressure, level = format_value(vessel.pressure, "kPa"), format_value(vessel.level, "m")
            yield name, f"{pressure} gauge, level {level}"


def _parameters(rheology: Rheology) -> Iterator[tuple[str, str]]:
    for field in fields(rheology):  # type: ignore[arg-type]
        value = getattr(rheology, field.name)
        dimension = PARAMETERS.get(field.name)
        shown = format_value(value, dimension) if dimension else significant(value)
        yield f"  {field.name.replace('_', ' ')}", shown


def _route(result: Result) -> Iterator[tuple[str, ...]]:
    fittings = {pipe.name: pipe.fittings for pipe in result.case.route if isinstance(pipe, Pipe)}
    for element in result.elements:
        if element.kind == "equipment":
            yield element.name, "equipment", "", "", "", "", ""
            continue
        counts = ", ".join(f"{count:g} {key}" for key, count in fittings[element.name].items())
        yield (
            element.name,
            element.size or "by bore",
            _number(element.diameter, "mm"),
            _number(element.length, "m"),
            _number(element.rise, "m"),
            _number(element.roughness, "mm", 2),
            counts,
        )


def _flow_row(element: ElementResult) -> tuple[str, ...]:
    if element.kind == "equipment":
        return element.name, "", "", "", "", "", "", _number(element.equipment_loss, "kPa")
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


def _number(value: float | None, unit: str | None = None, digits: int = 4) -> str:
    if value is None:
        return "-"
    return significant(to_display(value, unit) if unit else value, digits)
