"""Published fits and viscometer examples (06_ in this folder)."""

from __future__ import annotations

import numpy as np
import yaml
from examples import FOLDER, FOOT, INCH, POUND, Quantities, departs, published

from pipeflow.rheology import Newtonian
from pipeflow.rheology.fitting import fit_curve
from pipeflow.rheology.instruments import Cylinders, rates_of_law

POUND_FORCE = POUND * 9.80665


def inputs(identity: str) -> dict[str, list[float]]:
    """Give the readings of an entry."""
    entries = yaml.safe_load((FOLDER / "06_flow_curve_fitting.yaml").read_text(encoding="utf-8"))
    return next(entry["inputs"] for entry in entries if entry["id"] == identity)


@published("FIT-BROD-15.2")
def brodkey_hershey_15_2() -> Quantities:
    """Brodkey & Hershey 1988, Example 15.2, p. 774; read in a public reworking: ln tau_w on ln 8V/D, its n' and K'."""
    read = inputs("FIT-BROD-15.2")
    fit = fit_curve(np.array(read["8V/D_1/s"]), np.array(read["tau_w_Pa"])).of("power-law")
    assert fit.parameters is not None
    return {"n'": fit.parameters["flow_index"], "K'": fit.parameters["consistency"]}


@published("FIT-ABUL-5.3")
def abulencia_theodore_5_3() -> Quantities:
    """Abulencia & Theodore 2009, Examples 5.3-5.4, p. 45; read in a public reworking of the example."""
    bob, gap, height, torque, speed = 0.125 * FOOT, 0.001 * INCH, 0.5 * FOOT, 15.3 * POUND_FORCE * FOOT, 26.2
    stress = torque / (2 * np.pi * bob**2 * height)
    rate = float(rates_of_law(Newtonian(1.0), np.array([2 * speed]), Cylinders(1 + gap / bob))[0])
    return {
        "tau": stress / (POUND_FORCE / FOOT**2),
        "shear_rate": departs(
            rate, "printed for a plane gap; at the bob of a round one it is higher by 1.5 gap/radius"
        ),
        "mu": stress / rate / (POUND / FOOT),
    }
