"""Tube viscometer: end loss by length and slip by diameter, then the shear rate at the wall.

End loss and slip are found together with the law: they are the ones that bring the runs of every tube onto one curve.
The end loss is a constant number of diameters of tube (Bagley), slip velocity is a power of the wall stress (Mooney).
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import product

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.rheology.fitting import FINEST_RESOLUTION, aicc
from pipeflow.rheology.forms import Form, Problem
from pipeflow.rheology.instruments import BASES, Corrected, Tube, rates_of_law, settle, wall_rates
from pipeflow.rheology.least_squares import descend
from pipeflow.rheology.readings import TubeReadings
from pipeflow.sources import Source

BAGLEY = Source(
    key="bagley",
    title="End loss of a tube as so many diameters of length, dp = 4 tau_w (L/D + e)",
    citation="Bagley, J. Appl. Phys. 28, 624 (1957)",
)
MOONEY_SLIP = Source(
    key="mooney-slip",
    title="Slip at the wall of tubes of several diameters, 8V/D = G(tau_w) + 8 V_s(tau_w)/D",
    citation="Mooney, J. Rheol. 2, 210 (1931)",
    note="V_s is taken as a power of tau_w; turbulence or a change of the sample between tubes looks like slip",
)

_CLEARLY = 2.0
_LEAST_FLOW = 1e-4
_TELLING_FLOW = 0.05
"""Share of the flow that must be shear for a reading to tell a shear rate."""


@dataclass(frozen=True)
class TubeCorrection:
    """What was taken off the readings of a tube viscometer.

    Attributes
    ----------
    end_length : float or None
        End loss in diameters of tube; None where no two lengths of one diameter were run.
    slip_velocity : Array or None
        Of each reading, m/s; None where no two diameters were run or no slip is seen.
    slip_exponent : float or None
        ``V_s ~ tau_w**m``.
    notes : tuple of str
    """

    end_length: float | None
    slip_velocity: Array | None
    slip_exponent: float | None
    notes: tuple[str, ...]


@dataclass(frozen=True)
class TubeCurve:
    """Wall stress [Pa], ``8V/D`` as read [1/s], the rates at the wall [1/s], and what was taken off.

    ``telling`` is false where the flow is slip almost alone; the rate is nan there.
    """

    stress: Array
    bulk_rate: Array
    rate: Array
    telling: NDArray[np.bool_]
    corrected: Corrected
    correction: TubeCorrection


@dataclass(frozen=True)
class _Trial:
    """End length [diameters], slip velocity [m/s] at the mean wall stress (0 for none) and its exponent."""

    end_length: float = 0.0
    slip: float = 0.0
    exponent: float = 1.0

    def stress(self, readings: TubeReadings) -> Array:
        """Wall stress, Pa."""
        return readings.pressure_drop / (4.0 * (readings.length / readings.diameter + self.end_length))

    def slip_velocity(self, stress: Array) -> Array:
        """Slip velocity of each reading, m/s."""
        return self.slip * (stress / np.exp(np.mean(np.log(stress)))) ** self.exponent

    def sheared_rate(self, readings: TubeReadings) -> Array:
        """``8(V - V_s)/D``, 1/s."""
        return readings.bulk_rate - 8.0 * self.slip_velocity(self.stress(readings)) / readings.diameter


def tube_curve(readings: TubeReadings) -> TubeCurve:
    """Turn the runs of one or several tubes into wall stresses and shear rates."""
    trial, notes = _best_trial(readings)
    stress, sheared = trial.stress(readings), trial.sheared_rate(readings)
    telling = sheared > _TELLING_FLOW * readings.bulk_rate
    corrected = wall_rates(sheared[telling], stress[telling], Tube(), readings.resolution[telling])
    rate = np.full(stress.shape, np.nan)
    rate[telling] = corrected.rate
    slip = trial.slip_velocity(stress) if trial.slip > 0 else None
    correction = TubeCorrection(
        end_length=trial.end_length if _lengths_differ(readings) else None,
        slip_velocity=slip,
        slip_exponent=trial.exponent if trial.slip > 0 else None,
        notes=tuple(notes),
    )
    return TubeCurve(stress, readings.bulk_rate, rate, telling, corrected, correction)


def _lengths_differ(readings: TubeReadings) -> bool:
    ratio = readings.length / readings.diameter
    return any(np.ptp(ratio[readings.diameter == bore]) > 1e-3 * ratio.max() for bore in np.unique(readings.diameter))


def _best_trial(readings: TubeReadings) -> tuple[_Trial, list[str]]:
    """Add a correction only where the readings of the tubes agree clearly better with it."""
    lengths, diameters = _lengths_differ(readings), np.unique(readings.diameter).size
    notes = list(_not_told(lengths, diameters))
    tried = [(False, False), *[(True, False)] * lengths, *[(False, True), (lengths, True)] * (diameters > 1)]
    best, lowest = _Trial(), np.inf
    for end, slip in dict.fromkeys(tried):
        found, misfit = _search(readings, end, slip)
        criterion = aicc(misfit, readings.lines.size, 4 + end + 2 * slip)
        if criterion is not None and criterion < lowest - _CLEARLY:
            best, lowest = found, criterion
    if diameters > 1 and best.slip == 0:
        notes.append("no slip is seen between the tube diameters")
    return best, notes


def _not_told(lengths: bool, diameters: int) -> Iterator[str]:
    if not lengths:
        yield "one length of each tube: the end loss is not known and counted as wall stress"
    if diameters == 1:
        yield "one tube diameter: slip cannot be told from flow"
    elif diameters == 2:
        yield "two tube diameters: slip rests on their difference alone, a third would prove it"


@dataclass(frozen=True)
class _AllTubes:
    """Scatter of the runs of all tubes about one law; unknowns are those of the law, then of the trial."""

    readings: TubeReadings
    scales: Problem
    end: bool
    slip: bool

    @property
    def lower(self) -> Array:
        """Lower bounds."""
        slowest = float(np.log(self.readings.velocity.max())) - 25.0
        return np.array([*self.scales.lower, *[0.0] * self.end, *[slowest, 0.0] * self.slip])

    @property
    def upper(self) -> Array:
        """Upper bounds."""
        shortest = float((self.readings.length / self.readings.diameter).min())
        fastest = float(np.log(self.readings.velocity.max()))
        return np.array([*self.scales.upper, *[20.0 * shortest] * self.end, *[fastest, 6.0] * self.slip])

    def trial(self, unknowns: Array) -> _Trial:
        """The end length and slip among the unknowns."""
        values = iter(unknowns[self.scales.lower.size :])
        end_length = float(next(values)) if self.end else 0.0
        return _Trial(end_length, float(np.exp(next(values))), float(next(values))) if self.slip else _Trial(end_length)

    def unknowns(self, theta: Array, trial: _Trial) -> Array:
        """The unknowns of a law and a trial."""
        added = [trial.end_length] * self.end
        added += [float(np.log(trial.slip)), trial.exponent] if self.slip else []
        return np.clip(np.array([*theta, *added]), self.lower, self.upper)

    def residuals(self, theta: Array) -> Array:
        """``ln`` of the stress of the law over that of the reading, at the flow of the reading."""
        trial = self.trial(theta)
        law = self.scales.law(theta[: self.scales.lower.size])
        share = trial.sheared_rate(self.readings) / self.readings.bulk_rate
        # below the least flow a trial still answers, ever worse, so that the search finds its way back
        share = np.where(
            share > _LEAST_FLOW, share, _LEAST_FLOW * np.exp(np.clip(share / _LEAST_FLOW - 1.0, -300.0, 0.0))
        )
        rate = rates_of_law(law, share * self.readings.bulk_rate, Tube())
        return np.log(law.shear_stress(rate) / trial.stress(self.readings))

    def jacobian(self, theta: Array) -> Array:
        """By differences."""
        at, step = self.residuals(theta), 1e-6
        columns = [(self.residuals(theta + step * unit) - at) / step for unit in np.eye(theta.size)]
        return np.nan_to_num(np.stack(columns, axis=-1))


def _search(readings: TubeReadings, end: bool, slip: bool) -> tuple[_Trial, float]:
    """Least scatter over the law, end length and slip, from several starts; infinite where all flow would be slip."""
    best, lowest = _Trial(), np.inf
    nothing = 1.01 * _floored(np.zeros(readings.lines.shape), readings)
    for start, form in product(_starts(readings, slip), BASES):
        found, misfit = _descend(readings, end, slip, start, form)
        if misfit < lowest:
            best, lowest = found, misfit
        if lowest <= nothing:
            break
    return best, lowest


def _starts(readings: TubeReadings, slip: bool) -> list[_Trial]:
    if not slip:
        return [_Trial()]
    typical = float(np.exp(np.mean(np.log(readings.velocity))))
    velocity, exponent = _mooney(readings)
    return [_Trial(0.0, velocity, exponent), _Trial(0.0, 0.1 * typical, 1.0), _Trial(0.0, 0.02 * typical, 2.0)]


def _descend(readings: TubeReadings, end: bool, slip: bool, start: _Trial, form: Form) -> tuple[_Trial, float]:
    sheared = np.maximum(start.sheared_rate(readings), 0.2 * readings.bulk_rate)
    law = settle(form, sheared, start.stress(readings), Tube())
    tubes = _AllTubes(readings, Problem.of(form, law.rate, start.stress(readings)), end, slip)
    unknowns = descend(tubes, tubes.unknowns(law.theta, start), np.ones_like(sheared), 1e-9)
    trial = tubes.trial(unknowns)
    telling = trial.sheared_rate(readings) > _TELLING_FLOW * readings.bulk_rate
    enough = np.unique(readings.diameter[telling]).size == np.unique(readings.diameter).size
    return trial, _floored(tubes.residuals(unknowns), readings) if enough else np.inf


def _floored(residuals: Array, readings: TubeReadings) -> float:
    sizes = np.maximum(np.abs(residuals), np.maximum(readings.resolution, FINEST_RESOLUTION))
    return float(sizes @ sizes)


def _mooney(readings: TubeReadings) -> tuple[float, float]:
    """Slip velocity at the mean stress and its exponent, from the slope of 8V/D on 1/D at common stresses."""
    stress = _Trial().stress(readings)
    bores = np.unique(readings.diameter)
    low = max(stress[readings.diameter == bore].min() for bore in bores)
    high = min(stress[readings.diameter == bore].max() for bore in bores)
    guess = 0.05 * float(np.exp(np.mean(np.log(readings.velocity))))
    if not low < high:
        return guess, 1.0
    common = np.geomspace(low, high, 5)
    slopes = np.polyfit(1.0 / bores, np.stack([_rate_at(readings, bore, common) for bore in bores]), 1)[0] / 8.0
    if not np.all(slopes > 0):
        return guess, 1.0
    exponent, level = np.polyfit(np.log(common / np.exp(np.mean(np.log(stress)))), np.log(slopes), 1)
    return float(np.exp(level)), float(np.clip(exponent, 0.1, 4.0))


def _rate_at(readings: TubeReadings, bore: float, stress: Array) -> Array:
    """``8V/D`` of the tubes of one bore at given wall stresses, between the readings."""
    rows = readings.diameter == bore
    order = np.argsort(_Trial().stress(readings)[rows])
    known = np.log(_Trial().stress(readings)[rows][order])
    return np.exp(np.interp(np.log(stress), known, np.log(readings.bulk_rate[rows][order])))
