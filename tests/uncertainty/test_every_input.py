"""Every input that can be uncertain, alone: its samples are the single solutions, in every figure and every limit."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from pipeflow.case.loading import load_case, load_text
from pipeflow.case.model import Limits
from pipeflow.case.variables import variables
from pipeflow.case.varying import varied
from pipeflow.line import route
from pipeflow.study.sampling.limits import Failures, limits_of
from pipeflow.study.sampling.line import HEAD_LOSS, POWER, TOTAL_HEAD, Figures
from pipeflow.study.sampling.uncertainty import uncertainty

CASES = sorted((Path(__file__).parents[2] / "cases").glob("*.yaml"))
ALL_LIMITS = Limits(
    head_loss=5.0,
    pressure_loss=5e4,
    velocity_minimum=1.5,
    velocity_maximum=2.0,
    wall_shear_rate=80.0,
    wall_shear_stress=15.0,
    temperature_rise=0.02,
    restart_pressure=1e5,
)


def limited(path: Path):
    return replace(load_case(path), limits=ALL_LIMITS, specific_heat=3500.0)


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.stem)
def test_one_input_alone_is_solved_as_one_by_one(path):
    case = limited(path)
    assert len(limits_of(case)) >= 8
    for name, known in variables(case).items():
        about = 10.0 if np.isnan(known.value) else known.value
        values = about + (abs(about) or 1.0) * np.array([-0.02, 0.0, 0.01])
        if np.isfinite(known.bounds.upper) or np.isfinite(known.bounds.lower):
            values = np.clip(values, known.bounds.lower, known.bounds.upper)
        figures, fails = Figures(case)({name: values}), Failures(case)({name: values})
        assert {value.shape for value in (*figures.values(), *fails.values())} == {(3,)}, name
        for row in (0, 2):
            given = varied(case, {name: float(values[row])})
            alone = route.solve(
                given.design, given.fluid, given.route, given.source, given.destination,
                turbulent=case.methods.turbulent, critical=case.methods.critical, fittings=case.methods.fittings,
                particle_size=given.particle_size,
            )  # fmt: skip
            assert figures[HEAD_LOSS][row] == pytest.approx(float(alone.head_loss), rel=1e-11), name
            assert figures[TOTAL_HEAD][row] == pytest.approx(float(alone.total_head), rel=1e-10, abs=1e-10), name
            by_itself = Failures(case)({name: values[row : row + 1]})
            assert {key: value[row] for key, value in fails.items()} == {
                key: value[0] for key, value in by_itself.items()
            }, name


LEVELS = """
title: Levels alone
fluid: {density: 1250 kg/m3, rheology: {model: newtonian, viscosity: 0.9 Pa.s}}
flow: 30 m3/h
source: {level: 4 m}
destination: {level: 1 m}
route:
  - {pipe: line, diameter: 120 mm, length: 80 m, rise: 6 m}
uncertainty:
"""


@pytest.mark.parametrize(
    ("lines", "half_widths"),
    [
        ("source.level: ± 0.5 m", (0.5,)),
        ("source.pressure: ± 6 kPa", (6000.0 / (1250.0 * 9.80665),)),
        ("route[line].rise: ± 1 m", (1.0,)),
        ("source.level: ± 0.5 m\n  destination.level: ± 1 m", (0.5, 1.0)),
    ],
)
def test_what_moves_no_loss_moves_the_total_head_by_itself(lines, half_widths):
    found = uncertainty(load_text(f"{LEVELS}  {lines}\n"), samples=1024)
    head = found.figures[TOTAL_HEAD]
    assert head.deviation.value == pytest.approx(np.sqrt(np.sum(np.square(half_widths)) / 3.0), rel=2e-3)
    assert found.figures[POWER].deviation.value == pytest.approx(
        head.deviation.value * 1250.0 * 9.80665 * 30.0 / 3600.0, rel=1e-9
    )
    loss = found.figures[HEAD_LOSS]
    assert (loss.deviation.value, loss.p95.error, loss.indices) == (0.0, 0.0, ())
