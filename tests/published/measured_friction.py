"""EX-STANTON. Water in smooth brass pipes and thick oil, measured by T. E. Stanton and J. R. Pannell in 1914.

Phil. Trans. R. Soc. A 214, 199, digitised by A. Trettel (CC-BY-4.0, the lines at the head of the file); read. The
acceptance asked with the collection: the median of the turbulent rows within 2 % of the smooth law.
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from functools import cache

import numpy as np
from examples import FOLDER, Quantities, published

from pipeflow.arrays import Array
from pipeflow.friction import wall_shear_stress
from pipeflow.rheology import Newtonian

LINES = (FOLDER / "stanton_pannell_1914.csv").read_text(encoding="utf-8").splitlines()
ROWS = [row for row in csv.DictReader(line for line in LINES if line[0] != "#") if not row["flag"]]


@dataclass(frozen=True)
class Summary:
    """Deviations of the program from a set of measurements: predicted over measured wall stress, less 1."""

    title: str
    deviation: Array

    @property
    def median(self) -> float:
        """Middle one."""
        return float(np.median(self.deviation))

    @property
    def within_95(self) -> float:
        """What 95 % of them keep to, in size."""
        return float(np.quantile(np.abs(self.deviation), 0.95))

    @property
    def farthest(self) -> float:
        """The largest in size."""
        return float(np.abs(self.deviation).max())


def deviations(rows: list[dict[str, str]]) -> Array:
    """Predicted over measured wall stress, less 1; the viscosity from the table's Reynolds number."""
    columns = {
        name: np.array([float(row[name]) for row in rows]) for name in ("D_m", "V_m_s", "tau_w_Pa", "f_darcy", "Re")
    }
    density = 8 * columns["tau_w_Pa"] / (columns["f_darcy"] * columns["V_m_s"] ** 2)
    viscosity = density * columns["V_m_s"] * columns["D_m"] / columns["Re"]
    ours = wall_shear_stress(columns["V_m_s"], columns["D_m"], density, Newtonian(viscosity))
    return np.asarray(ours / columns["tau_w_Pa"] - 1)


@cache
def turbulent_water() -> Summary:
    """Water above Re 4000."""
    rows = [row for row in ROWS if row["fluid"] == "Water" and float(row["Re"]) > 4000]
    return Summary("water, turbulent (Re above 4000), smooth brass and steel", deviations(rows))


@cache
def laminar_oil() -> Summary:
    """Thick oil, all of it laminar."""
    return Summary("thick oil, laminar", deviations([row for row in ROWS if row["fluid"] != "Water"]))


@published("EX-STANTON")
def stanton_and_pannell() -> Quantities:
    """Median of the turbulent rows; read."""
    return {"median_dev_turbulent_vs_prandtl": turbulent_water().median}
