"""The places of a case file: the part of the schema that stands there, and examples of what must be given."""

from __future__ import annotations

from typing import Final

from pipeflow.case.schema import (
    RHEOLOGY_PARTS,
    CasePart,
    EquipmentPart,
    FlowPart,
    FluidPart,
    LimitsPart,
    MethodsPart,
    Part,
    PipePart,
    PumpPart,
    VelocityPart,
    VesselPart,
)

PARTS_AT: Final[dict[tuple[str, ...], type[Part]]] = {
    (): CasePart,
    ("fluid",): FluidPart,
    **{("fluid", "rheology", f"<{model}>"): part for model, part in RHEOLOGY_PARTS.items()},
    ("flow", "<map>"): FlowPart,
    ("source",): VesselPart,
    ("destination",): VesselPart,
    ("route", "<pipe>"): PipePart,
    ("route", "<equipment>"): EquipmentPart,
    ("limits",): LimitsPart,
    ("limits", "velocity"): VelocityPart,
    ("methods",): MethodsPart,
    ("pumps",): PumpPart,
}
"""The part of the schema at a place of the file, the numbers of list items left out."""

REASONS: Final = {
    "flow_index": "no known fluid thickens more steeply",
    "exponent": "the usual one is 2",
}
"""Why a number has its upper bound, by key."""

EXAMPLES: Final = {
    "title": "Thickener underflow line",
    "density": "1420 kg/m3",
    "rheology": "{model: newtonian, viscosity: 21 mPa.s}",
    "model": "herschel-bulkley",
    "flow_curve": "readings.csv",
    "route": "[{pipe: suction line, diameter: 200 mm, length: 12 m}]",
    "viscosity": "21 mPa.s",
    "plastic_viscosity": "21 mPa.s",
    "casson_viscosity": "21 mPa.s",
    "yield_stress": "9.5 Pa",
    "consistency": "0.62 Pa.s^n",
    "flow_index": "0.58",
    "flow": "140 m3/h",
    "design": "140 m3/h",
    "length": "12 m",
    "pressure_loss": "12 kPa",
    "name": "candidate A",
    "kind": "centrifugal",
    "curve": "candidate-a.csv",
}
"""A value for each required key, shown where it is missing."""
