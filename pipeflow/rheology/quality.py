"""Readings that may not be steady laminar flow of one sample: vortices, turbulence, settling, ramps that differ."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.rheology.readings import CylinderReadings, IntArray, Readings, TubeReadings
from pipeflow.sources import Range, Source

TAYLOR = Source(
    key="taylor-vortices",
    title="Onset of vortices between cylinders, the inner one turning: Re sqrt(gap/R_b) = 41.2",
    citation="Taylor, Phil. Trans. R. Soc. A 223, 289 (1923), from memory",
    ranges=(Range("gap/R_b", None, 0.1),),
    confidence="medium",
    note="for a Newtonian liquid in a narrow gap; the viscosity at the bob is put in",
)

LAMINAR_END = 2100.0
_TAYLOR_NUMBER = 41.2
_SETTLED_SHARE = 0.05
_USUAL_DWELL = 30.0
_BEYOND_SCATTER = 3.0


def tube_flags(readings: TubeReadings, rate: Array, stress: Array) -> Iterator[str]:
    """Runs that may be turbulent or settling."""
    sample = readings.sample
    if sample.density is None:
        yield "turbulent runs are not looked for: the sheet gives no density"
    else:
        reynolds = 8.0 * sample.density * readings.velocity**2 / stress
        turbulent = reynolds > LAMINAR_END
        if turbulent.any():
            over = f"Re_MR up to {reynolds.max():.0f}, above {LAMINAR_END:.0f}"
            yield f"likely turbulent, {over}: {_at(readings, turbulent)}"
    fallen = _settling_velocity(readings, rate, stress)
    if fallen is not None:
        yield from _settling(readings, fallen * readings.length / readings.velocity > 0.1 * readings.diameter, "0.1 D")


def cylinder_flags(readings: CylinderReadings, rate: Array) -> Iterator[str]:
    """Readings with likely vortices or settling."""
    density = readings.sample.density
    if readings.rotating == "bob":
        if density is None:
            yield "vortices are not looked for: the sheet gives no density"
        else:
            yield from _vortices(readings, rate, density)
    fallen = _settling_velocity(readings, rate, readings.bob_stress)
    if fallen is not None and readings.height is not None:
        dwell = readings.sample.dwell_time or _USUAL_DWELL
        deep = fallen * dwell > _SETTLED_SHARE * readings.height
        yield from _settling(readings, deep, f"{_SETTLED_SHARE:.0%} of the height in {dwell:g} s")


def _vortices(readings: CylinderReadings, rate: Array, density: float) -> Iterator[str]:
    gap = readings.cup_radius - readings.bob_radius
    viscosity = readings.bob_stress / rate
    reynolds = density * readings.speed * readings.bob_radius * gap / viscosity
    swirling = reynolds * np.sqrt(gap / readings.bob_radius) > _TAYLOR_NUMBER
    if swirling.any():
        yield f"likely Taylor vortices, which raise the torque: {_at(readings, swirling)}"


def _settling_velocity(readings: Readings, rate: Array, stress: Array) -> Array | None:
    """Stokes' velocity in the viscosity at the wall [m/s]; None where the sheet does not describe the solids."""
    sample = readings.sample
    if sample.particle_size is None or sample.particle_density is None or sample.density is None:
        return None
    weight = (sample.particle_density - sample.density) * STANDARD_GRAVITY
    return np.asarray(weight * sample.particle_size**2 / (18.0 * stress / rate))


def _settling(readings: Readings, doubtful: NDArray[np.bool_], far: str) -> Iterator[str]:
    if doubtful.any():
        yield f"the solids may settle, by more than {far}: {_at(readings, doubtful)}"


def _at(readings: Readings, rows: NDArray[np.bool_]) -> str:
    return lines_of(readings.lines, rows)


def lines_of(lines: IntArray, rows: NDArray[np.bool_]) -> str:
    """Name the lines of some rows, at most eight."""
    chosen = [str(line) for line in lines[rows]]
    word = "line" if len(chosen) == 1 else "lines"
    more = f" and {len(chosen) - 8} more" if len(chosen) > 8 else ""
    return f"{word} {', '.join(chosen[:8])}{more}"


def split_ramps(rate: Array, named: NDArray[np.str_]) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Rows of the up and of the down ramp, as named or else by the order of the rows."""
    if np.any(named != ""):
        return named == "up", named == "down"
    top = int(np.argmax(rate))
    rising = bool(np.all(np.diff(rate[: top + 1]) >= 0)) and bool(np.all(np.diff(rate[top:]) <= 0))
    if not rising or top == 0:
        return np.ones(rate.size, dtype=np.bool_), np.zeros(rate.size, dtype=np.bool_)
    rows = np.arange(rate.size)
    return rows <= top, rows >= top


def hysteresis(rate: Array, stress: Array, named: NDArray[np.str_]) -> Iterator[str]:
    """Whether the ramp down differs from the ramp up by more than the readings scatter."""
    up, down = split_ramps(rate, named)
    if np.unique(rate[up]).size < 3 or np.unique(rate[down]).size < 3:
        return
    common = (rate >= max(rate[up].min(), rate[down].min())) & (rate <= min(rate[up].max(), rate[down].max()))
    level, scatter_up = _smooth(rate, stress, up)
    gap = np.log(stress[common & down]) - level[common & down]
    if gap.size < 2:
        return
    scatter = max(scatter_up, _smooth(rate, stress, down)[1], 1e-4)
    mean = float(gap.mean())
    if abs(mean) > _BEYOND_SCATTER * scatter * np.sqrt(2.0 / gap.size):
        kind = "below" if mean < 0 else "above"
        yield (
            f"the ramp down runs {abs(np.expm1(mean)):.1%} {kind} the ramp up, beyond the scatter of {scatter:.1%}: "
            "the sample changes while it is sheared"
        )


def _smooth(rate: Array, stress: Array, rows: NDArray[np.bool_]) -> tuple[Array, float]:
    """``ln tau`` of a smooth line through some rows, at every row, and the scatter about it."""
    degree = min(3, np.unique(rate[rows]).size - 2)
    line = np.polynomial.Polynomial.fit(np.log(rate[rows]), np.log(stress[rows]), degree)
    left = np.log(stress[rows]) - line(np.log(rate[rows]))
    freedom = max(int(rows.sum()) - degree - 1, 1)
    return np.asarray(line(np.log(rate))), float(np.sqrt(left @ left / freedom))
