"""Readings of any viscometer to one true flow curve: shear rate and stress at the wall, and what was done to them."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.rheology.instruments import KRIEGER_MARON, RABINOWITSCH, Cylinders, wall_rates
from pipeflow.rheology.quality import cylinder_flags, hysteresis, tube_flags
from pipeflow.rheology.readings import CurveReadings, CylinderReadings, IntArray, Readings, Sample, TubeReadings
from pipeflow.rheology.tube_viscometer import BAGLEY, MOONEY_SLIP, TubeCurve, tube_curve
from pipeflow.sources import Source

ALL_SLIP: Final = "its flow is slip at the wall almost alone"


@dataclass(frozen=True)
class FlowCurve:
    """A flow curve, row by row of the sheet.

    Attributes
    ----------
    shear_rate, shear_stress : Array
        At the wall, 1/s and Pa.
    plain_rate : Array
        What the instrument shows for a Newtonian liquid, 1/s.
    resolution : Array
        Half the last printed digit, relative to the stress.
    lines : IntArray
        Lines of the file.
    left_out : tuple of str
        Why a reading takes no part in the fit; empty for one that does.
    corrections : tuple of str
        What was taken off the readings, and by how much.
    cautions : tuple of str
        What makes readings doubtful.
    sources : tuple of Source
    sample : Sample
    """

    shear_rate: Array
    shear_stress: Array
    plain_rate: Array
    resolution: Array
    lines: IntArray
    left_out: tuple[str, ...]
    corrections: tuple[str, ...]
    cautions: tuple[str, ...]
    sources: tuple[Source, ...]
    sample: Sample

    @property
    def kept(self) -> NDArray[np.bool_]:
        """The readings that take part in the fit."""
        return np.array([not reason for reason in self.left_out], dtype=np.bool_)

    @property
    def tested(self) -> tuple[float, float]:
        """Lowest and highest shear rate of the readings that take part, 1/s."""
        rates = self.shear_rate[self.kept]
        return float(rates.min()), float(rates.max())


def flow_curve(readings: Readings, use: tuple[float, float] | None = None) -> FlowCurve:
    """Work readings out to a flow curve.

    Parameters
    ----------
    readings : CurveReadings, TubeReadings or CylinderReadings
    use : tuple of float or None
        Shear rates, 1/s, outside which readings are left out; the corrections then rest on those within alone.
    """
    curve = _worked_out(readings)
    if use is None:
        return curve
    low, high = use
    within = (curve.shear_rate >= low * (1 - 1e-9)) & (curve.shear_rate <= high * (1 + 1e-9))
    if within.all() or not within.any():
        return _leave_out(curve, within, use)
    return _merged(curve, _worked_out(readings.only(within)), within, use)


def _merged(all_rows: FlowCurve, inner: FlowCurve, within: NDArray[np.bool_], use: tuple[float, float]) -> FlowCurve:
    """Rows within as worked out on their own, the others as first seen."""
    columns = ("shear_rate", "shear_stress", "plain_rate")
    merged: dict[str, Any] = {name: getattr(all_rows, name).copy() for name in columns}
    for name in columns:
        merged[name][within] = getattr(inner, name)
    before = np.array(all_rows.left_out, dtype=object)
    before[within] = inner.left_out
    merged["left_out"] = tuple(before)
    kept = replace(inner, resolution=all_rows.resolution, lines=all_rows.lines, **merged)
    return _leave_out(kept, within, use)


def _leave_out(curve: FlowCurve, within: NDArray[np.bool_], use: tuple[float, float]) -> FlowCurve:
    reason = f"outside the shear rates to be used, {use[0]:g} .. {use[1]:g} 1/s"
    reasons = (before or ("" if row else reason) for before, row in zip(curve.left_out, within, strict=True))
    return replace(curve, left_out=tuple(reasons))


def _worked_out(readings: Readings) -> FlowCurve:
    if isinstance(readings, TubeReadings):
        return _of_tubes(readings)
    if isinstance(readings, CylinderReadings):
        return _of_cylinders(readings)
    if isinstance(readings, CurveReadings):
        cautions = hysteresis(readings.shear_rate, readings.shear_stress, readings.ramps)
        return _curve(
            readings, readings.shear_rate, readings.shear_stress, readings.shear_rate, (), tuple(cautions), ()
        )
    raise TypeError(f"no flow curve is known for {type(readings).__name__}")


def _curve(
    readings: Readings,
    rate: Array,
    stress: Array,
    plain: Array,
    corrections: tuple[str, ...],
    cautions: tuple[str, ...],
    sources: tuple[Source, ...],
) -> FlowCurve:
    nothing = ("",) * rate.size
    resolution, lines, sample = readings.resolution, readings.lines, readings.sample
    return FlowCurve(rate, stress, plain, resolution, lines, nothing, corrections, cautions, sources, sample)


def _of_tubes(readings: TubeReadings) -> FlowCurve:
    curve = tube_curve(readings)
    rate, telling = curve.rate, curve.telling
    flags = tube_flags(readings, rate, curve.stress)
    ramps = hysteresis(rate[telling], curve.stress[telling], readings.ramps[telling])
    cautions = (*flags, *ramps, *_beyond(curve.corrected.follows_law))
    sources = (RABINOWITSCH, *[BAGLEY] * bool(curve.correction.end_length))
    sources += (MOONEY_SLIP,) * (curve.correction.slip_velocity is not None)
    made = _curve(readings, rate, curve.stress, readings.bulk_rate, tuple(_off_tubes(curve)), cautions, sources)
    return replace(made, left_out=tuple("" if tells else ALL_SLIP for tells in telling))


def _off_tubes(curve: TubeCurve) -> list[str]:
    found = curve.correction
    done = [
        _size("shear rate at the wall over 8V/D (Rabinowitsch-Mooney)", (curve.rate / curve.bulk_rate)[curve.telling])
    ]
    index, log_consistency = np.polyfit(np.log(curve.bulk_rate), np.log(curve.stress), 1)
    done.append(f"straight line of ln tau_w on ln 8V/D: n' = {index:.4f}, K' = {np.exp(log_consistency):.4g} Pa.s^n'")
    if found.end_length is not None:
        done.append(f"end loss of {found.end_length:.3g} diameters of tube, off the pressure drop")
    if found.slip_velocity is not None:
        low, high = (1e3 * float(end) for end in (found.slip_velocity.min(), found.slip_velocity.max()))
        power = f"as tau_w^{found.slip_exponent:.2f}"
        done.append(f"slip of {low:.3g} .. {high:.3g} mm/s at the wall, {power}, off the flow")
    return [*done, *found.notes]


def _size(what: str, ratio: Array) -> str:
    return f"{what}: {float(ratio.min()):.3f} .. {float(ratio.max()):.3f}"


def _beyond(follows_law: bool) -> list[str]:
    if follows_law:
        return []
    return ["the readings follow none of the laws to within their scatter: shear rates rest on their slope as well"]


def _of_cylinders(readings: CylinderReadings) -> FlowCurve:
    ratio = readings.radius_ratio
    plain = 2.0 * readings.speed * ratio**2 / (ratio**2 - 1.0)
    found = wall_rates(2.0 * readings.speed, readings.bob_stress, Cylinders(ratio), readings.resolution)
    done = [_size("shear rate at the bob over that of a Newtonian liquid", found.rate / plain)]
    partly = readings.bob_stress / ratio**2 < np.asarray(found.law.yield_stress)
    if partly.any():
        lines = ", ".join(str(line) for line in readings.lines[partly])
        done.append(f"gap sheared in part only, up to the yield stress, at lines {lines}")
    flags = cylinder_flags(readings, found.rate)
    cautions = (*flags, *hysteresis(found.rate, readings.bob_stress, readings.ramps), *_beyond(found.follows_law))
    return _curve(readings, found.rate, readings.bob_stress, plain, tuple(done), cautions, (KRIEGER_MARON,))
