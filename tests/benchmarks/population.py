"""A population of yield-fluid pipes in every regime, for the benchmarks."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scalar_loop import Pipe

from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Rheology

MODELS = ("bingham", "herschel-bulkley", "casson")


@dataclass(frozen=True)
class Pipes:
    """Pipes of one model; arrays of one length."""

    model: str
    velocity: np.ndarray
    tau_y: np.ndarray
    k: np.ndarray
    n: np.ndarray
    diameter: np.ndarray
    density: np.ndarray
    roughness: np.ndarray

    def rheology(self) -> Rheology:
        if self.model == "bingham":
            return Bingham(self.tau_y, self.k)
        if self.model == "casson":
            return Casson(self.tau_y, self.k)
        return HerschelBulkley(self.tau_y, self.k, self.n)

    def arguments(self) -> tuple[np.ndarray, np.ndarray, np.ndarray, Rheology]:
        return self.velocity, self.diameter, self.density, self.rheology()

    def one(self, i: int) -> Pipe:
        columns = (self.tau_y, self.k, self.n, self.diameter, self.density, self.roughness)
        return Pipe(self.model == "casson", *(float(column[i]) for column in columns))


def population(count: int, seed: int = 7) -> list[Pipes]:
    """``count`` pipes in equal shares of the three models: pastes and slurries, 25 mm to 0.6 m, 0.05 to 8 m/s."""
    rng = np.random.default_rng(seed)
    shares = [count // 3, count // 3, count - 2 * (count // 3)]
    return [_pipes(model, share, rng) for model, share in zip(MODELS, shares, strict=True)]


def _pipes(model: str, count: int, rng: np.random.Generator) -> Pipes:
    n = rng.uniform(0.3, 1.0, count) if model == "herschel-bulkley" else np.ones(count)
    viscosity = 10.0 ** rng.uniform(-2.5, 0, count)
    k = viscosity * 100.0 ** (1.0 - n)  # the same stress at 100 1/s
    diameter = 10.0 ** rng.uniform(np.log10(0.025), np.log10(0.6), count)
    roughness = rng.choice([0.0, 5e-5], count)
    tau_y = 10.0 ** rng.uniform(-1, 2, count)
    velocity = 10.0 ** rng.uniform(np.log10(0.05), np.log10(8.0), count)
    return Pipes(model, velocity, tau_y, k, n, diameter, rng.uniform(1000.0, 1800.0, count), roughness)
