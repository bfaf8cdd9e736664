"""Charts of results: SVG to print, and plain text for a terminal.

The libraries that draw are loaded by the chart that is asked for. Every chart reads in black and white: lines differ by
dash and marker and carry their names.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pipeflow.study.pumping.result import CurveResult
    from pipeflow.study.ranges.envelope import Envelope
    from pipeflow.study.ranges.sweeping import Sweep
    from pipeflow.study.result import Result
    from pipeflow.study.sampling.uncertainty import UncertaintyResult


def system_chart_svg(result: CurveResult) -> str:
    """The system curves of a case with its pumps on them, an SVG document 170 mm wide."""
    from pipeflow.report.charts.system import system_chart

    return system_chart(result)


def route_chart_svg(result: Result) -> str:
    """Head and elevation along the route at design flow, an SVG document 170 mm wide."""
    from pipeflow.report.charts.along_route import route_chart

    return route_chart(result)


def flow_curve_chart_svg(result: Result) -> str:
    """The flow curve with readings, law and the wall shear rates of the line, an SVG document 170 mm wide."""
    from pipeflow.report.charts.flow_curve import flow_curve_chart

    return flow_curve_chart(result)


def tornado_chart_svg(result: UncertaintyResult) -> str:
    """Head loss by each uncertain input, an SVG document 170 mm wide; empty where none moves it."""
    from pipeflow.report.charts.tornado import tornado_chart

    return tornado_chart(result)


def terminal_chart(result: CurveResult) -> str:
    """The system curves of a case with its pumps on them, in plain text of 80 columns."""
    from pipeflow.report.charts.in_terminal import system_in_terminal

    return system_in_terminal(result)


def sweep_chart_svg(sweep: Sweep) -> str:
    """A sweep of one input as lines, or of two as a map, an SVG document 170 mm wide."""
    if len(sweep.axes) == 1:
        from pipeflow.report.charts.sweep import sweep_chart

        return sweep_chart(sweep)
    from pipeflow.report.charts.sweep_map import sweep_map

    return sweep_map(sweep)


def envelope_chart_svg(envelope: Envelope) -> str:
    """The duty envelope as a map, an SVG document 170 mm wide."""
    from pipeflow.report.charts.envelope import envelope_chart

    return envelope_chart(envelope)


def sweep_in_terminal(sweep: Sweep) -> str:
    """Head loss over one input, in plain text of 80 columns."""
    from pipeflow.report.charts.terminal_losses import losses_in_terminal

    return losses_in_terminal(sweep)
