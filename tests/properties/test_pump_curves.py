"""Whatever stands in the CSV of a pump's curve, it is read or refused with reasons; what is written is what is read."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, example, given, settings
from hypothesis import strategies as st

from pipeflow.case.loading import load_text
from pipeflow.case.model import Pump, PumpTable
from pipeflow.case.pump_curves import COLUMNS, MAX_POINTS, faults_of, read_curve
from pipeflow.errors import InputError
from pipeflow.units import UNITS

HERE = Path(__file__).parent
GOOD = (HERE.parent / "cli" / "candidate-a.csv").read_text(encoding="utf-8")
KINDS = tuple(COLUMNS)
FREELY = settings(suppress_health_check=[HealthCheck.function_scoped_fixture], deadline=None)


def outcome(path: Path, kind: str) -> PumpTable | InputError:
    try:
        return read_curve(str(path), kind)
    except InputError as error:
        return error


def check_outcome(result: PumpTable | InputError, kind: str) -> None:
    if isinstance(result, InputError):
        assert result.problems
        for problem in result.problems:
            assert problem.message
            assert problem.message.isprintable()
            assert problem.key_path.isprintable()
        return
    columns = (result.flow, result.head, result.pressure, result.efficiency, result.npsh_required)
    assert 3 <= len(result.flow) <= MAX_POINTS
    assert {len(column) for column in columns if column} == {len(result.flow)}
    assert all(np.isfinite(column).all() and (np.array(column) >= 0).all() for column in columns)
    assert max(result.efficiency, default=0.0) <= 1
    rising = result.flow if kind == "centrifugal" else result.pressure
    assert (np.diff(rising) > 0).all()


@given(content=st.binary(max_size=300), kind=st.sampled_from(KINDS))
@example(content=b"flow [m3/h], head [m]\n\xff", kind="centrifugal")
@example(content=b"flow [m3/h], head [m]\n1, " + b"8" * 200_000, kind="centrifugal")
@example(content=b"flow [m3/h], head [m]\n0,5\n1,4\n2,3\n", kind="centrifugal")
@FREELY
def test_any_bytes(tmp_path: Path, content: bytes, kind: str) -> None:
    path = tmp_path / "curve.csv"
    path.write_bytes(content)
    check_outcome(outcome(path, kind), kind)


CELLS = st.sampled_from(["0", "1", "40", "80.5", "1e3", "-2", "", "x", "1e400", "0,5", "72 %", "nan", "#", '"', "0.6"])
HEADS = st.sampled_from(
    ["flow [m3/h]", "head [m]", "pressure [bar]", "efficiency [%]", "efficiency", "npsh_required [ft]", "haed [m]",
     "flow", "head [kPa]", "efficiency [rpm]", "[", ""]
)  # fmt: skip


@given(
    header=st.lists(HEADS, min_size=1, max_size=5),
    rows=st.lists(st.lists(CELLS, min_size=1, max_size=5), max_size=6),
    kind=st.sampled_from(KINDS),
)
@settings(parent=FREELY, max_examples=300)
def test_any_table(tmp_path: Path, header: list[str], rows: list[list[str]], kind: str) -> None:
    path = tmp_path / "curve.csv"
    path.write_text("\n".join(",".join(line) for line in [header, *rows]), encoding="utf-8")
    check_outcome(outcome(path, kind), kind)


@given(place=st.integers(0, len(GOOD) - 1), mark=st.sampled_from(list("0159.,;-#[]%m \n\t\"'x\x07é")))
@settings(parent=FREELY, max_examples=300)
def test_a_good_curve_with_a_character_changed(tmp_path: Path, place: int, mark: str) -> None:
    path = tmp_path / "curve.csv"
    path.write_text(GOOD[:place] + mark + GOOD[place + 1 :], encoding="utf-8")
    check_outcome(outcome(path, "centrifugal"), "centrifugal")


@given(
    flows=st.lists(st.floats(0.1, 1e4), min_size=3, max_size=12, unique=True),
    steps=st.lists(st.floats(0.01, 5), min_size=12, max_size=12),
    units=st.tuples(*(st.sampled_from(list(UNITS[name])) for name in ("volume flow", "length", "length"))),
    delimiter=st.sampled_from([",", ";", "\t"]),
)
@FREELY
def test_what_is_written_is_what_is_read(
    tmp_path: Path, flows: list[float], steps: list[float], units: tuple[str, str, str], delimiter: str
) -> None:
    flows.sort()
    rows = len(flows)
    heads, shares = 100.0 - np.cumsum(steps[:rows]), np.linspace(5, 95, rows)
    factors = [UNITS[name][unit].factor for name, unit in zip(("volume flow", "length", "length"), units, strict=True)]
    table = np.stack([np.array(flows) / factors[0], heads / factors[1], shares, heads / 20 / factors[2]], axis=-1)
    assume(((table > 1e-12) & (table < 1e14)).all())
    header = [f"flow [{units[0]}]", f"head [{units[1]}]", "efficiency [%]", f"npsh_required [{units[2]}]"]
    lines = [delimiter.join(header), *(delimiter.join(map(repr, row)) for row in table.tolist())]
    path = tmp_path / "curve.csv"
    path.write_text("\n".join(lines), encoding="utf-8")
    found = read_curve(str(path), "centrifugal")
    for column, expected in zip(
        (found.flow, found.head, found.efficiency, found.npsh_required),
        (flows, heads, shares / 100, heads / 20),
        strict=True,
    ):
        np.testing.assert_allclose(column, expected, rtol=1e-12)


HEAD = """
title: Small line
fluid: {density: 1 kg/L, rheology: {model: newtonian, viscosity: 1 cP}}
flow: 100 m3/h
route:
"""
SMALL = HEAD + "  - {pipe: suction, diameter: 150 mm, length: 4 m}\n"
ONE = "pumps: [{name: A, kind: centrifugal, curve: candidate-a.csv%s}]\n"


def pump(more: str = "") -> Pump:
    return load_text(SMALL + ONE % more, str(HERE.parent / "cli" / "case.yaml")).pumps[0]


def refusals(text: str) -> list[str]:
    with pytest.raises(InputError) as caught:
        load_text(SMALL + text, str(HERE.parent / "cli" / "case.yaml"))
    return [f"{problem.key_path}  {problem.message}" for problem in caught.value.problems]


@given(speed=st.floats(10, 1e4), of_curve=st.floats(10, 1e4))
@settings(deadline=None)
def test_one_speed_stands_for_the_other(speed: float, of_curve: float) -> None:
    turn = np.pi / 30
    for more, running, measured in (
        (f", speed: {speed!r} rpm", speed, speed),
        (f", curve_speed: {of_curve!r} rpm", of_curve, of_curve),
        (f", speed: {speed!r} rpm, curve_speed: {of_curve!r} rpm", speed, of_curve),
    ):
        found = pump(more)
        assert (found.speed, found.curve_speed) == pytest.approx((running * turn, measured * turn))
    assert (pump().speed, pump().curve_speed) == (None, None)


@given(low=st.floats(10, 1e3), width=st.floats(1, 1e3), speed=st.floats(5, 3e3))
@settings(deadline=None)
def test_a_speed_lies_within_its_range(low: float, width: float, speed: float) -> None:
    ends = f", variable_speed: {{minimum: {low!r} rpm, maximum: {low + width!r} rpm}}"
    found = pump(f"{ends}, curve_speed: {speed!r} rpm")
    inside = low <= speed <= low + width
    assert found.speed == (found.curve_speed if inside else None)
    if not inside:
        assert "outside 'variable_speed'" in refusals(ONE % f"{ends}, speed: {speed!r} rpm")[0]


def test_a_curve_that_changed_is_read_again(tmp_path: Path) -> None:
    path = tmp_path / "curve.csv"
    path.write_text("flow [m3/h], head [m]\n0, 9\n1, 8\n2, 7\n", encoding="utf-8")
    assert read_curve(str(path), "centrifugal").head == (9.0, 8.0, 7.0)
    path.write_text("flow [m3/h], head [m]\n0, 9\n1, 8\n2, 6.5\n", encoding="utf-8")
    assert read_curve(str(path), "centrifugal").head == (9.0, 8.0, 6.5)


def test_a_curve_has_no_more_points_than_a_curve_needs(tmp_path: Path) -> None:
    path = tmp_path / "curve.csv"
    rows = "".join(f"{row}, {1000 - row}\n" for row in range(MAX_POINTS + 1))
    path.write_text(f"flow [m3/h], head [m]\n{rows}", encoding="utf-8")
    result = outcome(path, "centrifugal")
    assert str(result) == f"{path}:{MAX_POINTS + 2}:1  {MAX_POINTS + 1} points; a curve has at most {MAX_POINTS}"


def test_a_droop_near_shut_off_is_a_curve(tmp_path: Path) -> None:
    path = tmp_path / "curve.csv"
    path.write_text("flow [m3/h], head [m]\n0, 29\n40, 30\n80, 28\n120, 22\n", encoding="utf-8")
    assert read_curve(str(path), "centrifugal").head == (29.0, 30.0, 28.0, 22.0)


@pytest.mark.parametrize(
    ("route", "told"),
    [
        ("  - pump: p\n", "route[p].pump  found 'p'; a pump alone; a pipe or equipment is needed"),
        (
            "  - {pipe: p, diameter: 150 mm, length: 4 m}\n  - pump: p\n",
            "route[p].pump  found 'p'; the name 'p' is taken above; names must be unique",
        ),
    ],
)
def test_a_pump_in_the_route_that_cannot_be(route: str, told: str) -> None:
    with pytest.raises(InputError) as caught:
        load_text(HEAD + route)
    assert [f"{problem.key_path}  {problem.message}" for problem in caught.value.problems] == [told]


@pytest.mark.parametrize("position", [0, 1, 2])
def test_the_pump_parts_the_route_where_it_stands(position: int) -> None:
    elements = [
        "  - {pipe: suction, diameter: 150 mm, length: 4 m}\n",
        "  - {equipment: meter, pressure_loss: 5 kPa}\n",
    ]
    elements.insert(position, "  - pump: feed pump\n")
    case = load_text(HEAD + "".join(elements))
    assert [element.name for element in case.route] == ["suction", "meter"]
    assert case.pump_place is not None
    assert (case.pump_place.name, case.pump_place.position) == ("feed pump", position)


def test_solving_shows_the_pump_at_its_place_and_loses_nothing_in_it() -> None:
    from pipeflow.study import solve

    elements = "  - {pipe: suction, diameter: 150 mm, length: 4 m}\n%s  - {equipment: meter, pressure_loss: 5 kPa}\n"
    with_pump = solve(load_text(HEAD + elements % "  - pump: feed pump\n"))
    without = solve(load_text(HEAD + elements % "" + "restart: {pump_after: suction}\n"))
    assert [(one.name, one.kind) for one in with_pump.elements] == [
        ("suction", "pipe"), ("feed pump", "pump"), ("meter", "equipment"),
    ]  # fmt: skip
    assert with_pump.totals == without.totals
    assert with_pump.profile == without.profile
    assert with_pump.checks == without.checks


def test_a_scenario_reaches_pumps_and_the_elements_beside_the_pump() -> None:
    text = SMALL + "  - pump: feed pump\n" + ONE % ", speed: 1480 rpm"
    changes = '{"pumps[A].speed": 980 rpm, "route[suction].length": 9 m, source.lowest_level: -1 m, job.number: 7}'
    case = load_text(f"{text}scenarios: {{slow: {changes}}}\n", str(HERE.parent / "cli" / "case.yaml"))
    slow = case.scenarios["slow"]
    assert slow.pumps[0].speed == pytest.approx(980 * np.pi / 30)
    assert slow.pumps[0].curve_speed == case.pumps[0].speed  # the curve stays that of the case's speed
    assert slow.route[0].length == 9.0
    assert (slow.lowest_level, slow.job.number, case.lowest_level, case.job.number) == (-1.0, "7", None, "")


def test_a_full_job_and_pump() -> None:
    job = "job: {project: P, client: C, number: 12, prepared_by: A, checked_by: B, approved_by: D, date: 2026-03-12}\n"
    more = (
        ", number: 2, arrangement: series, stages: 3, inlet: side, impeller: {diameter: 390 mm, trimmed_to: 370 mm, "
        "outlet_width: 28 mm}, motor: {power: 55 kW, margin: 0.1}, status: assumed"
    )
    case = load_text(job + SMALL + ONE % more, str(HERE.parent / "cli" / "case.yaml"))
    found = case.pumps[0]
    assert vars(case.job) == {
        "project": "P", "client": "C", "number": "12", "prepared_by": "A", "checked_by": "B", "approved_by": "D",
        "date": "2026-03-12",
    }  # fmt: skip
    assert (found.number, found.arrangement, found.stages, found.inlet) == (2, "series", 3, "side")
    assert (found.impeller_diameter, found.trimmed_diameter, found.outlet_width) == (0.39, 0.37, 0.028)
    assert (found.motor_power, found.motor_margin) == (55e3, 0.1)
    assert case.assumed == ("pumps[A]",)
    assert pump(", motor: {power: 55 kW}").motor_margin == pump().motor_margin == 0.15


def test_fractions_under_the_head_of_per_cents_are_told(tmp_path: Path) -> None:
    """0.70 under ``efficiency [%]`` would be a shaft power a hundred times too high."""
    rows = "flow [m3/h], head [m], efficiency [%]\n0, 31, 0.1\n60, 28, 0.5\n100, 24, 0.70\n"
    (tmp_path / "curve.csv").write_text(rows, encoding="utf-8")
    found = faults_of(str(tmp_path / "curve.csv"), "centrifugal")
    assert [(one.line, one.column, one.key_path) for one in found] == [(4, 10, "efficiency")]
    assert "fractions stand under efficiency without a unit" in found[0].message
