"""The page of a result in a terminal: 80 columns, readable without colour."""

from __future__ import annotations

import sys
from collections.abc import Container, Iterable, Sequence
from shutil import get_terminal_size

from pipeflow.line.elements import Pipe
from pipeflow.report.rheology_lines import rheology_lines
from pipeflow.report.rows import (
    FLOW_COLUMNS,
    MARK,
    PROFILE_COLUMNS,
    ROUTE_COLUMNS,
    SCENARIO_COLUMNS,
    TOTALS_COLUMNS,
    against_limit,
    basis_rows,
    fittings_counted,
    flow_row,
    number,
    profile_rows,
    route_rows,
    scenario_rows,
    spaced,
    totals_rows,
)
from pipeflow.report.text import WIDTH, paragraph, table
from pipeflow.study.result import SAFETY_NOTICE, Result
from pipeflow.units import format_value

STYLE = {"ok": "green", "caution": "yellow", "fail": "bold red", "not checked": "dim"}


def print_result(result: Result) -> None:
    """Print the page of a result and of its scenarios."""
    page = _Page(min(get_terminal_size((WIDTH, 24)).columns, WIDTH))
    page.case(result)
    page.flow(result)
    page.methods(result)
    if result.scenarios:
        page.heading("Scenarios side by side, at design flow")
        page.rows(SCENARIO_COLUMNS, scenario_rows(result), words=(0, 5, 6))
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
        self.rows(("", ""), basis_rows(case), words=(0, 1))
        self.heading("Route")
        self.rows(ROUTE_COLUMNS, route_rows(result), words=(0, 1))
        for pipe in case.route:
            if isinstance(pipe, Pipe) and (pipe.fittings or pipe.loss_coefficient):
                self.text(", ".join(fittings_counted(pipe)), mark=f"  {pipe.name}: ")

    def flow(self, result: Result, base: Result | None = None) -> None:
        """Write what the flow gives; of a scenario in brief, without what holds for its ``base`` case too."""
        self.heading(f"Flow at design, {format_value(result.case.flow.design, 'volume flow')}")
        self.rows(FLOW_COLUMNS, (flow_row(element) for element in result.elements), words=(0, 4))
        self.heading("Totals")
        self.rows(TOTALS_COLUMNS, totals_rows(result), words=(0, 3))
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
            figures = ", ".join(f"{key} {number(head)}" for key, head in result.spread.head_loss.items())
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
        self.rows(PROFILE_COLUMNS, profile_rows(result))
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
                self.line(f"{spaced(check.name)}: {against_limit(check)}")
                self.text(check.basis, mark=" " * 12)
        for status in quiet:
            names = [spaced(check.name) for check in result.checks if check.status == status]
            if names:
                self.text(", ".join(names), mark=f"{MARK[status]:<12}")

    def methods(self, result: Result) -> None:
        self.heading("Methods")
        for use in result.methods:
            note = f" Note: {use.source.note}." if use.source.note else ""
            self.text(f"{use.source.key}: {use.used_for}. {use.source.citation}.{note}", mark="- ")
