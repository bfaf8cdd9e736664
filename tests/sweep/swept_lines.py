"""Small invented lines that a sweep or an envelope is taken over."""

from __future__ import annotations

from pipeflow.case.loading import load_text
from pipeflow.case.model import Case

FORM = """
title: Line of the tests
fluid:
  {fluid}
flow: {flow}
source: {{level: 2 m}}
destination: {{level: 3 m}}
route:
  - pipe: long pipe
    diameter: {diameter}
    length: 400 m
    rise: 4 m
{more}
"""
NEWTONIAN = "density: 1000 kg/m3\n  rheology: {model: newtonian, viscosity: 0.5 Pa.s}"
BINGHAM = "density: 1300 kg/m3\n  rheology: {model: bingham, yield_stress: 6 Pa, plastic_viscosity: 20 mPa.s}"
FOLLOWING = """solids: {density: 2650 kg/m3, mass_fraction: 0.4, d85: 60 µm}
  liquid: {density: 998 kg/m3, viscosity: 1 mPa.s}
  rheology:
    model: bingham
    yield_stress: {law: power, a: 130 Pa, b: 4, tested: 0.3 .. 0.415}
    plastic_viscosity: 12 mPa.s"""
SETTLING = """density: 1150 kg/m3
  solids: {density: 2650 kg/m3, mass_fraction: 0.2, d85: 0.3 mm}
  liquid: {density: 998 kg/m3, viscosity: 1 mPa.s}
  rheology: {model: bingham, yield_stress: 0.6 Pa, plastic_viscosity: 4 mPa.s}"""
LIMITED = "limits: {head_loss: 14 m, velocity: {minimum: 0.8 m/s, maximum: 2.2 m/s}, restart_pressure: 230 kPa}\n"
STATIC = "restart: {static_yield_stress: 11 Pa}\n"


def line(fluid: str = BINGHAM, flow: str = "100 m3/h", more: str = "", diameter: str = "150 mm") -> Case:
    """The line of a fluid."""
    return load_text(FORM.format(fluid=fluid, flow=flow, more=more, diameter=diameter))
