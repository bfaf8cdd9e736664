"""The laminar tube flow that belongs to each rheology."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import fields, replace
from typing import Any

import numpy as np

from pipeflow.arrays import Array
from pipeflow.friction.general_laminar import ByPartsTube, EllisTube
from pipeflow.friction.laminar import CassonTube, GeneralizedPowerLawTube, TubeLaw
from pipeflow.rheology import Casson, Ellis, GeneralRheology, Rheology
from pipeflow.rheology.models import GeneralizedPowerLaw


def tube_law(rheology: Rheology, like: Callable[[object], Array] = np.asarray) -> TubeLaw:
    """Give the laminar tube flow of a rheology; ``like`` brings each parameter to the shape of the pipes.

    A general law that is not rising gets a yield stress of nan, so that its pipes have no answer.
    """
    if isinstance(rheology, GeneralizedPowerLaw):
        law = rheology.as_herschel_bulkley()
        consistency, index = _above_zero(like(law.consistency)), _above_zero(like(law.flow_index))
        return GeneralizedPowerLawTube(like(law.yield_stress), np.log(consistency), index)
    if isinstance(rheology, Casson):
        return CassonTube(like(rheology.yield_stress), np.log(_above_zero(like(rheology.casson_viscosity))))
    parameters: dict[str, Any] = {f.name: like(getattr(rheology, f.name)) for f in fields(rheology)}  # type: ignore[arg-type]
    if isinstance(rheology, Ellis):
        return EllisTube(replace(rheology, **parameters), like(0.0))
    if isinstance(rheology, GeneralRheology):
        yield_stress = np.where(rheology.is_rising(), rheology.yield_stress, np.nan)
        return ByPartsTube(replace(rheology, **parameters), like(yield_stress))  # type: ignore[type-var]
    raise TypeError(f"no laminar tube flow is known for {type(rheology).__name__}")


def _above_zero(values: Array) -> Array:
    return np.where(values > 0, values, np.nan)
