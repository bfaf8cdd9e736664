"""Charts: same bytes, names on the lines, nothing told by colour alone, nothing on top of another."""

from __future__ import annotations

import re
import subprocess
import sys
from dataclasses import replace
from itertools import combinations

import numpy as np
import pytest
from hostile import NAMES, spoilt
from hypothesis import given
from hypothesis import strategies as st
from reading import read

from pipeflow.case.model import FlowRange
from pipeflow.line.elements import Fluid
from pipeflow.report.charts import flow_curve_chart_svg, route_chart_svg, system_chart_svg, terminal_chart
from pipeflow.report.charts.axis import decade_ends, round_ends
from pipeflow.report.charts.canvas import canvas, drawing, panel, shortened
from pipeflow.report.charts.labels import left_room, spread
from pipeflow.report.text import columns_of
from pipeflow.rheology import Newtonian, PowerLaw
from pipeflow.study import solve
from pipeflow.study.pumping.curve import curve
from pipeflow.study.pumping.result import Condition

SVG = {"route": route_chart_svg, "flow-curve": flow_curve_chart_svg}
SMALLEST_TEXT = 8.0
MARKED = (
    "static 12.3 m",
    "minimum",
    "design",
    "maximum",
    "laminar until",
    "settling below",
    "efficiency, %",
    "NPSH, m",
)
DRAWN = {"document", "svg", "title", "desc", "g", "path", "text", "use", "defs", "clippath", "rect", "pattern"}


def texts(svg: str) -> list[str]:
    return [one.text for one in read(svg).every("text")]


def scaled(condition: Condition, name: str, by: float) -> Condition:
    """A scenario whose heads are those of another, all higher by a share."""
    heads = tuple(by * head for head in condition.system.pump_head_upper)
    return replace(condition, name=name, kind="scenario", system=replace(condition.system, pump_head_upper=heads))


@pytest.mark.parametrize("chart", SVG)
def test_the_same_case_gives_the_same_bytes(chart, thickener):
    assert SVG[chart](thickener.result) == SVG[chart](thickener.result)


def test_a_fresh_process_gives_the_same_bytes(filtrate):
    code = (
        "from pipeflow import load_case, solve\n"
        "from pipeflow.study.pumping.curve import curve\n"
        "from pipeflow.report.charts import *\n"
        "import sys\n"
        "case = load_case(sys.argv[1])\n"
        "sys.stdout.write(route_chart_svg(solve(case)) + system_chart_svg(curve(case)))\n"
    )
    run = subprocess.run([sys.executable, "-c", code, filtrate.case.file], capture_output=True, text=True, check=True)
    assert run.stdout == route_chart_svg(filtrate.result) + system_chart_svg(filtrate.curve)


def test_no_date_and_no_maker_is_written(thickener):
    for svg in (system_chart_svg(thickener.curve), *(chart(thickener.result) for chart in SVG.values())):
        assert "metadata" not in svg
        assert "matplotlib" not in svg.lower()
        assert svg.startswith("<svg ")


def test_a_users_settings_do_not_change_a_chart(filtrate):
    import matplotlib

    before = route_chart_svg(filtrate.result)
    with matplotlib.rc_context({"lines.linewidth": 9, "font.size": 30, "svg.fonttype": "path", "text.usetex": True}):
        assert route_chart_svg(filtrate.result) == before


def test_every_condition_and_pump_is_named_on_the_chart(thickener):
    found = " ".join(texts(system_chart_svg(thickener.curve)))
    assert len(thickener.curve.conditions) > 3
    for name in (*(one.name for one in thickener.curve.conditions), "candidate A", "candidate B", *MARKED):
        assert name in found


def test_duty_points_carry_flow_and_head(thickener):
    duty = thickener.curve.own.pumps[0].duty
    assert f"{duty.flow * 3600:.0f} m³/h, {duty.head:.1f} m" in " ".join(texts(system_chart_svg(thickener.curve)))


def test_lines_differ_by_dash_or_mark(thickener):
    """Conditions and the case are drawn with distinct patterns; without colour they are still apart."""
    svg = system_chart_svg(thickener.curve)
    lines = re.findall(r'<path d="[^"]*"[^>]*style="fill: none;([^"]*)"/>', svg)
    dashes = {dash for line in lines for dash in re.findall(r"stroke-dasharray: ([^;]*)", line)}
    assert len(dashes) >= len(thickener.curve.conditions)


def test_charts_are_black_and_white(thickener):
    for svg in (system_chart_svg(thickener.curve), *(chart(thickener.result) for chart in SVG.values())):
        for red, green, blue in re.findall(r"#([0-9a-f]{2})([0-9a-f]{2})([0-9a-f]{2})", svg):
            assert red == green == blue


def test_text_is_large_enough_to_print(thickener):
    for svg in (system_chart_svg(thickener.curve), *(chart(thickener.result) for chart in SVG.values())):
        sizes = [float(size) for size in re.findall(r"font-size: ([0-9.]+)px", svg)]
        assert sizes
        assert min(sizes) >= SMALLEST_TEXT


def test_a_chart_says_what_it_shows(thickener):
    root = read(system_chart_svg(thickener.curve)).children[0]
    assert root.attributes["role"] == "img"
    assert root.attributes["aria-labelledby"] == root.every("title")[0].attributes["id"]
    assert "candidate A on the central curve" in root.every("desc")[0].text


def test_twelve_scenarios_are_all_named(filtrate):
    names = [f"solids {place} per cent of the slip as it comes" for place in range(12)]
    own = filtrate.curve.own
    scenarios = [scaled(own, name, 1 + 0.004 * place) for place, name in enumerate(names)]
    result = replace(filtrate.curve, conditions=(own, *scenarios))
    found = read(system_chart_svg(result)).every("text")
    named = {one.text: float(one.attributes["y"]) for one in found if one.text.startswith("solids")}
    assert set(named) == {shortened(name, 22) for name in names}
    assert np.diff(sorted(named.values())).min() >= SMALLEST_TEXT
    assert all(f"  {letter}  " in terminal_chart(result) for letter in "abcdefghijklm")


@pytest.mark.parametrize(
    "changes",
    [
        {"flow": FlowRange(0.0, 0.0, 0.0)},
        {"flow": FlowRange(0.01, 0.01, 0.01)},
        {"flow": FlowRange(1e-4, 0.05, 0.4)},
        {"fluid": Fluid(1000.0, Newtonian(1e-3))},
        {"fluid": Fluid(1300.0, PowerLaw(40.0, 0.2))},
        {"tested_shear_rate": (1e-4, 2e-4)},
    ],
)
def test_odd_cases_have_charts(changes, case_of):
    case = replace(case_of("kaolin-slip"), scenarios={}, **changes)
    result, curves = solve(case), curve(case)
    for svg in (system_chart_svg(curves), *(chart(result) for chart in SVG.values())):
        assert "nan" not in svg.split("</desc>")[1]
        read(svg)
    terminal_chart(curves)


@pytest.mark.parametrize("first", range(0, len(NAMES), 4))
def test_names_are_text_in_a_chart(first, case_of):
    case = spoilt(case_of("thin-filtrate"), first)
    result = solve(case)
    for svg in (system_chart_svg(curve(case)), *(chart(result) for chart in SVG.values())):
        tree = read(svg)
        assert {one.tag for one in tree.every()} <= DRAWN
        assert not [key for one in tree.every() for key in one.attributes if key.startswith("on")]
        assert all(char.isprintable() or char.isspace() for char in svg)


def test_readings_and_their_laws_are_drawn(readings):
    found = " ".join(texts(flow_curve_chart_svg(readings.result)))
    assert "readings, solids 0.48" in found
    assert "herschel-bulkley" in found
    assert "tested to" in found


def test_a_law_is_drawn_without_readings(thickener):
    found = " ".join(texts(flow_curve_chart_svg(thickener.result)))
    assert "herschel-bulkley" in found
    assert "wall, suction line" in found


def test_the_terminal_chart_has_80_columns_of_plain_text(thickener):
    chart = terminal_chart(thickener.curve)
    lines = chart.split("\n")
    assert max(columns_of(line) for line in lines) <= 80
    assert "\x1b" not in chart
    assert not any(line != line.rstrip() for line in lines)
    assert "candidate A: central 165 m3/h" in chart
    assert "@" in chart


def test_every_letter_of_the_key_stands_on_the_terminal_chart(thickener):
    """Conditions that are alike, and so on one line, have their letters beside each other."""
    own = thickener.curve.own
    alike = [replace(own, name=name, kind="scenario") for name in ("worn pipe", "another", "a third")]
    chart = terminal_chart(replace(thickener.curve, conditions=(own, *alike)))
    drawn, key = chart.split("+---")[0], chart.split("\n\n")[-1]
    letters = re.findall(r"^  ([a-z0-9])  ", key, re.MULTILINE)
    assert letters == ["a", "b", "c", "d", "1", "2"]
    plot = drawn.replace("head, m", "").split("\n")
    on_lines = "".join(line.partition("|")[2] for line in plot)
    assert all(letter in on_lines for letter in letters)
    assert "@" in on_lines


def test_a_duty_of_the_same_flow_but_another_head_is_drawn_apart(thickener):
    """As of a variable speed, which gives the design flow on either curve."""
    own = thickener.curve.own
    first = own.pumps[0]
    pump = replace(first, duty_upper=replace(first.duty, head=1.05 * first.duty.head))
    result = replace(thickener.curve, conditions=(replace(own, pumps=(pump,)),))
    found = " ".join(texts(system_chart_svg(result)))
    assert "candidate A central" in found
    assert f"{1.05 * first.duty.head:.1f} m" in found
    assert "candidate A on the upper curve" in read(system_chart_svg(result)).every("desc")[0].text


@pytest.mark.parametrize("ticks", [[0.0, 500.0], [-100.0, 12000.0], [-0.05, 0.05]])
def test_a_vertical_axis_has_room_for_ticks_and_name(ticks):
    from matplotlib.backends.backend_agg import FigureCanvasAgg

    with drawing("room"):
        figure = canvas(2.0)
        axes = panel(figure, 2.0, 0.5, 2.0, 1.0)
        axes.set_ylim(ticks[0], ticks[-1])
        axes.set_yticks(ticks)
        axes.set_ylabel("pressure,\nkPa gauge")
        renderer = FigureCanvasAgg(figure).get_renderer()
        taken = (axes.get_window_extent().x0 - axes.yaxis.get_tightbbox(renderer).x0) / figure.dpi
        assert taken <= left_room(axes) <= taken + 0.15


def test_only_the_chart_that_is_drawn_loads_what_draws_it():
    code = "import pipeflow.report.charts, sys; print([m for m in ('matplotlib', 'plotille') if m in sys.modules])"
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert run.stdout.strip() == "[]"


@given(
    st.lists(st.tuples(st.floats(0, 100), st.floats(1, 5)), max_size=15),
)
def test_spread_labels_keep_off_one_another(labels):
    wanted, extents = [at for at, _ in labels], [extent for _, extent in labels]
    found = spread(wanted, extents, 0.0, 100.0)
    for (one, first), (other, second) in combinations(zip(found, extents, strict=True), 2):
        assert abs(one - other) >= (first + second) / 2 - 1e-9
    if sum(extents) <= 100:
        assert all(
            extent / 2 - 1e-9 <= at <= 100 - extent / 2 + 1e-9 for at, extent in zip(found, extents, strict=True)
        )


@given(st.floats(-1e6, 1e6), st.floats(1e-6, 1e6))
def test_round_ends_hold_their_values(low, span):
    first, last, step = round_ends(low, low + span)
    assert first <= low + 1e-6 * step
    assert last >= low + span - 1e-6 * step
    assert 1 <= round((last - first) / step) <= 10
    assert np.isclose(step / 10 ** np.floor(np.log10(step * (1 + 1e-12))), [1, 2, 5, 10]).any()


@given(st.floats(1e-4, 1e4), st.floats(1.1, 1e6))
def test_decades_hold_their_values(low, times):
    first, last, ticks = decade_ends(low, low * times)
    assert first <= low * (1 + 1e-9)
    assert last >= low * times * (1 - 1e-9)
    assert ticks[0] == first
    assert ticks[-1] == last
