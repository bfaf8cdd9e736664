"""Length over which the flow of a pipe develops."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.friction import Regime
from pipeflow.operability.limits import at_most
from pipeflow.operability.state import LineState
from pipeflow.sources import Range, Source
from pipeflow.verdict import Check

LANGHAAR = Source(
    key="langhaar",
    title="Entrance length of laminar flow of a Newtonian liquid",
    citation="Langhaar, J. Appl. Mech. 9, A55 (1942): 0.0575 Re D",
    note="99 % of the velocity on the axis",
)
POOLE_RIDLEY = Source(
    key="poole-ridley",
    title="Entrance length of laminar flow of a power-law fluid",
    citation="Poole & Ridley, J. Fluids Eng. 129, 1140 (2007)",
    ranges=(Range("n'", 0.4, 1.5), Range("Re_MR", None, 1000.0)),
    confidence="medium",
    note="from memory; yield fluids by the local index",
)
TURBULENT_ENTRANCE = Source(
    key="turbulent-entrance",
    title="Entrance length of turbulent flow",
    citation="4.4 Re^(1/6) D, as read in lecture notes",
    confidence="medium",
)
DEVELOPING_SHARE = 0.1
"""Share of the line's length in which flow may develop before its loss is in doubt (common practice)."""


def langhaar(reynolds: FloatOrArray) -> Array:
    """``L/D = 0.0575 Re``."""
    return np.asarray(0.0575 * np.asarray(reynolds))


def poole_ridley(reynolds_mr: FloatOrArray, flow_index: FloatOrArray) -> Array:
    """``L/D = [(0.246 n² - 0.675 n + 1.03)^1.6 + (0.0567 Re_MR)^1.6]^(1/1.6)``."""
    n = np.asarray(flow_index)
    creeping = 0.246 * n**2 - 0.675 * n + 1.03
    return np.asarray((creeping**1.6 + (0.0567 * np.asarray(reynolds_mr)) ** 1.6) ** (1.0 / 1.6))


def turbulent_entrance(reynolds_mr: FloatOrArray) -> Array:
    """``L/D = 4.4 Re^(1/6)``."""
    return np.asarray(4.4 * np.asarray(reynolds_mr) ** (1.0 / 6.0))


def entrance_check(state: LineState, is_newtonian: bool) -> Check:
    """Hold the pipe in which the flow at maximum flow still develops to a tenth of the line; beyond is a caution.

    Pipes of one bore in a row are one run, with one entrance.
    """
    flow = state.line.pipes
    reynolds, index = flow.reynolds_mr[state.maximum], flow.local_flow_index[state.maximum]
    turbulent = state.regimes(state.maximum) == Regime.TURBULENT
    laminar = langhaar(reynolds) if is_newtonian else poole_ridley(reynolds, index)
    length = np.where(turbulent, turbulent_entrance(reynolds), laminar) * state.diameter
    starts = np.flatnonzero(np.diff(state.diameter, prepend=np.nan) != 0)
    runs = np.add.reduceat(state.length, starts)
    developing = np.minimum(length[starts], runs)
    first = int(starts[developing.argmax()])
    source = TURBULENT_ENTRANCE if turbulent[first] else LANGHAAR if is_newtonian else POOLE_RIDLEY
    basis = (
        f"over which flow develops at maximum flow, each bore once, most of it in {state.names[first]} where it takes "
        f"{length[first]:.3g} m; against a tenth of the line, common practice: there the loss is higher"
    )
    value = float(developing.sum())
    found = at_most("entrance_length", value, value, DEVELOPING_SHARE * float(runs.sum()), "m", basis, source.key)
    return found if found.status == "ok" else replace(found, status="caution")
