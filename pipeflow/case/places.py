"""The places of a case file: the part of the schema that stands there, and examples of what must be given."""

from __future__ import annotations

from typing import Final

from pipeflow.case.dependence_part import FOLLOWING, LAW_PARTS
from pipeflow.case.flow_curve_part import FlowCurvePart, UsePart
from pipeflow.case.fluid_part import FluidPart, LiquidPart, SolidsPart
from pipeflow.case.job_part import JobPart
from pipeflow.case.limits_part import LimitsPart, PipeWallPart, RestartPart, VelocityPart
from pipeflow.case.part import Part
from pipeflow.case.pumps_part import ImpellerPart, MotorPart, PumpPart, ReciprocatingPart, SpeedsPart
from pipeflow.case.rheology_part import RHEOLOGY_PARTS
from pipeflow.case.route_part import EquipmentPart, PipePart, PumpPlacePart
from pipeflow.case.schema import (
    CasePart,
    DestinationPart,
    DrySolidsPart,
    FlowPart,
    MethodsPart,
    SitePart,
    SourcePart,
)
from pipeflow.case.sizing_part import BoresPart, CostPart, PricePart, SizingPart

_FOLLOWING: Final = [
    (model, parameter, LAW_PARTS[dimension])
    for model, part in RHEOLOGY_PARTS.items()
    for parameter, dimension in FOLLOWING.items()
    if parameter in part.model_fields
]

PARTS_AT: Final[dict[tuple[str, ...], type[Part]]] = {
    (): CasePart,
    ("job",): JobPart,
    ("fluid",): FluidPart,
    **{("fluid", "rheology", f"<{model}>"): part for model, part in RHEOLOGY_PARTS.items()},
    **{
        ("fluid", "rheology", f"<{model}>", parameter, f"<{law}>"): part
        for model, parameter, parts in _FOLLOWING
        for law, part in parts.items()
    },
    ("fluid", "rheology", "<flow_curve>"): FlowCurvePart,
    ("fluid", "rheology", "<flow_curve>", "use"): UsePart,
    ("fluid", "solids"): SolidsPart,
    ("fluid", "liquid"): LiquidPart,
    ("flow", "<map>"): FlowPart,
    ("flow", "<map>", "dry_solids", "<map>"): DrySolidsPart,
    ("site",): SitePart,
    ("source",): SourcePart,
    ("destination",): DestinationPart,
    ("route", "<pipe>"): PipePart,
    ("route", "<equipment>"): EquipmentPart,
    ("route", "<pump>"): PumpPlacePart,
    ("limits",): LimitsPart,
    ("limits", "velocity"): VelocityPart,
    ("restart",): RestartPart,
    ("pipe_wall",): PipeWallPart,
    ("sizing",): SizingPart,
    ("sizing", "bores"): BoresPart,
    ("sizing", "cost"): CostPart,
    ("sizing", "cost", "prices"): PricePart,
    ("methods",): MethodsPart,
    ("pumps",): PumpPart,
    ("pumps", "variable_speed"): SpeedsPart,
    ("pumps", "impeller"): ImpellerPart,
    ("pumps", "motor"): MotorPart,
    ("pumps", "reciprocating"): ReciprocatingPart,
}
"""The part of the schema at a place of the file, the numbers of list items left out."""

REASONS: Final[dict[str, str]] = {
    "flow_index": "no known fluid thickens more steeply",
    "route.<equipment>.exponent": "the usual one is 2",
    "mass_fraction": "a fraction, not a percentage",
    "volume_fraction": "a fraction, not a percentage",
    "fraction_below_45um": "a fraction, not a percentage",
    "interest_rate": "a fraction, not a percentage",
    "pump_efficiency": "a fraction, not a percentage",
    "maintenance": "a fraction of the price a year",
    "joint_factor": "a factor, not a percentage",
    "weld_factor": "a factor, not a percentage",
    "design_factor": "a factor, not a percentage",
    "temperature_derating": "a factor, not a percentage",
    "mill_tolerance": "a fraction of the wall",
    "coefficient_y": "it is 0.4 for ductile metals",
    "hours_per_year": "a year has no more",
    "restart.factor": "1.2 to 1.5 are usual",
    "pumps.motor.margin": "a fraction, not a percentage",
    "cylinders": "figures are known up to a triplex; 3 errs high for more",
    "pumps.reciprocating.constant": "1.4 is that of water without gas, 2.5 that of compressible liquids",
}
"""Why a number has its upper bound, by key or by the place of one."""

EXAMPLES: Final[dict[str, str]] = {
    "title": "Thickener underflow line",
    "density": "1420 kg/m3",
    "fluid.solids.density": "2850 kg/m3",
    "rheology": "{model: newtonian, viscosity: 21 mPa.s}",
    "model": "herschel-bulkley",
    "flow_curve": "readings.csv",
    "shear_rate": "30 .. 300 1/s",
    "law": "power",
    "a": "2500 Pa",
    "fluid.rheology.<newtonian>.viscosity.<power>.a": "0.4 Pa.s",
    "b": "4.2",
    "reference": "0.9 Pa.s",
    "reference_temperature": "20 °C",
    "activation_energy": "24 kJ/mol",
    "route": "[{pipe: suction line, diameter: 200 mm, length: 12 m}]",
    "viscosity": "21 mPa.s",
    "plastic_viscosity": "21 mPa.s",
    "casson_viscosity": "21 mPa.s",
    "zero_shear_viscosity": "12 Pa.s",
    "infinite_shear_viscosity": "21 mPa.s",
    "time_constant": "2 s",
    "half_stress": "8 Pa",
    "rate_offset": "4 1/s",
    "yield_stress": "9.5 Pa",
    "consistency": "0.62 Pa.s^n",
    "flow_index": "0.58",
    "fluid.rheology.<cross>.exponent": "0.8",
    "fluid.rheology.<ellis>.exponent": "2.4",
    "flow": "140 m3/h",
    "design": "140 m3/h",
    "flow.<map>.dry_solids.<map>.design": "55 t/h",
    "length": "12 m",
    "pressure_loss": "12 kPa",
    "name": "candidate A",
    "kind": "centrifugal",
    "curve": "candidate-a.csv",
    "pumps.variable_speed.minimum": "900 rpm",
    "pumps.variable_speed.maximum": "1500 rpm",
    "pumps.impeller.diameter": "390 mm",
    "pumps.motor.power": "55 kW",
    "cylinders": "3",
    "constant": "1.5",
    "pump": "feed pump",
    "sizing.bores.minimum": "50 mm",
    "sizing.bores.maximum": "400 mm",
    "sizing.cost.prices.size": "NPS 6 Sch 40",
    "per_metre": "95",
    "energy_price_per_kwh": "0.14",
    "hours_per_year": "7600",
    "interest_rate": "0.08",
    "years": "15",
    "pump_efficiency": "0.62",
}
"""A value for each required key, shown where it is missing; by key or by the place of one."""


def at_place(words: dict[str, str], parts: tuple[str, ...]) -> str:
    """Look up what is said of a key at its place, or else wherever it stands; empty if nothing is."""
    return words.get(".".join(parts)) or words.get(parts[-1] if parts else "", "")
