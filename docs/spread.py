"""Measure how far the turbulent methods lie apart over a grid, and write ``docs/method-spread.md``.

``python docs/spread.py``, or ``--check`` to compare with the page and change nothing.
"""

from __future__ import annotations

import sys
from collections.abc import Iterator
from pathlib import Path

import numpy as np
from pages import write_or_compare

from pipeflow.arrays import Array
from pipeflow.friction import Regime, solve_pipes
from pipeflow.friction.methods import DEFAULT, FAMILY, TURBULENT
from pipeflow.friction.solver import critical_velocities
from pipeflow.rheology import Bingham, HerschelBulkley, PowerLaw, Rheology

PAGE = Path(__file__).parent / "method-spread.md"
INDICES = (0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0)
REYNOLDS = np.geomspace(6e3, 1e5, 25)
VELOCITY_RATIOS = (1.6, 2.0, 2.5, 3.5)
PARTICLE_SIZE = 50e-6
INTRODUCTION = """# How far the turbulent methods lie apart

Written by `docs/spread.py`; smooth pipe, figures in per cent. They say how far published methods disagree, not which is
right: no measurement is in them. Wall shear stress at the same velocity is compared with the central method's.
"""


def page() -> str:
    """Give the text of the page."""
    return "\n".join([INTRODUCTION, *_power_law(), *_yield_fluids(), *_critical()]) + "\n"


def _power_law() -> Iterator[str]:
    """Every method against Dodge–Metzner at fully turbulent Re_MR up to 1e5."""
    keys = [key for key, m in TURBULENT.items() if "power-law" in m.models and not m.needs_particle_size]
    yield from ("## Power-law fluids against dodge-metzner, Re_MR 6e3 to 1e5", "")
    yield from _header("n", keys)
    for n in INDICES:
        ratios = {
            key: _power_law_stress(n, key) / _power_law_stress(n, DEFAULT["power-law"].source.key) for key in keys
        }
        yield _row(f"{n:g}", [_span(ratios[key]) for key in keys])
    yield ""


def _power_law_stress(n: float, method: str) -> Array:
    diameter, density, velocity = 0.1, 1000.0, 2.0
    consistency = density * velocity ** (2 - n) * diameter**n / (8 ** (n - 1) * ((3 * n + 1) / (4 * n)) ** n * REYNOLDS)
    return solve_pipes(velocity, diameter, density, PowerLaw(consistency, n), method=method).wall_shear_stress


def _yield_fluids() -> Iterator[str]:
    """Every method against Wilson–Thomas at multiples of the velocity at which turbulent flow begins."""
    for title, fluid in (("Bingham plastics", _bingham()), ("Herschel–Bulkley fluids", _herschel_bulkley())):
        rheology, diameter = fluid
        keys = [key for key, method in TURBULENT.items() if rheology.key in method.models]
        yield from (f"## {title} against wilson-thomas, median and 5 to 95 % of {diameter.size} pipes", "")
        yield "V over the end of laminar flow; only pipes that wilson-thomas has turbulent there, of at most 8 m/s;"
        yield f"slatter with d85 {PARTICLE_SIZE * 1e6:g} µm."
        yield ""
        yield from _header("V/V_c", keys)
        edge = solve_pipes(1.0, diameter, 1200.0, rheology, with_edges=True).critical_velocity
        for ratio in VELOCITY_RATIOS:
            yield _row(f"{ratio:g}", [_quantiles(_against(rheology, diameter, edge * ratio, key)) for key in keys])
        yield ""


def _bingham() -> tuple[Rheology, Array]:
    diameter, stress, viscosity = _grid((0.05, 0.1, 0.2, 0.4), (2.0, 8.0, 25.0), (0.005, 0.015, 0.05))
    return Bingham(stress, viscosity), diameter


def _herschel_bulkley() -> tuple[Rheology, Array]:
    diameter, stress, n, scale = _grid((0.05, 0.1, 0.2, 0.4), (2.0, 8.0, 25.0), (0.45, 0.6, 0.75, 0.9), (0.01, 0.02))
    return HerschelBulkley(stress, scale * 500.0 ** (1.0 - n), n), diameter


def _grid(*axes: tuple[float, ...]) -> tuple[Array, ...]:
    return tuple(axis.ravel() for axis in np.meshgrid(*axes))


def _against(rheology: Rheology, diameter: Array, velocity: Array, key: str) -> Array:
    central = solve_pipes(velocity, diameter, 1200.0, rheology)
    other = solve_pipes(velocity, diameter, 1200.0, rheology, method=key, particle_size=PARTICLE_SIZE)
    turbulent = (central.regime == Regime.TURBULENT) & (velocity <= 8.0)
    return (other.wall_shear_stress / central.wall_shear_stress)[turbulent]


def _critical() -> Iterator[str]:
    """Every criterion against Slatter's."""
    yield from (
        "## End of laminar flow against slatter, median and 5 to 95 %",
        "",
        "| fluids | criterion | % |",
        "|---|---|---|",
    )
    for title, (rheology, diameter) in (("Bingham", _bingham()), ("Herschel–Bulkley", _herschel_bulkley())):
        found = critical_velocities(diameter, 1200.0, rheology)
        for key, velocity in found.items():
            yield _row(title, [key, _quantiles(velocity / found["slatter"])])
    yield ""
    family = ", ".join(method.source.key for method in FAMILY)
    yield f"The upper figure of a result is the highest of: {family}, where they know the fluid."


def _header(first: str, keys: list[str]) -> Iterator[str]:
    yield _row(first, keys)
    yield "|---" * (len(keys) + 1) + "|"


def _row(first: str, cells: list[str]) -> str:
    return f"| {first} | {' | '.join(cells)} |"


def _span(ratios: Array) -> str:
    return f"{100 * (ratios.min() - 1):+.0f} .. {100 * (ratios.max() - 1):+.0f}"


def _quantiles(ratios: Array) -> str:
    known = ratios[np.isfinite(ratios)]
    if not known.size:
        return "-"
    low, middle, high = (100 * (np.quantile(known, q) - 1) for q in (0.05, 0.5, 0.95))
    return f"{middle:+.0f} [{low:+.0f} .. {high:+.0f}]"


if __name__ == "__main__":
    sys.exit(write_or_compare(PAGE, page()))
