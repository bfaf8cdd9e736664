"""Cases for the tests of records: the demo cases, and a small one that can be changed key by key."""

from __future__ import annotations

from pathlib import Path

from hypothesis import strategies as st

from pipeflow.case.loading import load_text
from pipeflow.case.model import Case

ROOT = Path(__file__).parents[2]
CASES = sorted((ROOT / "cases").glob("*.yaml"))

DEFAULTS = {
    "title": "Two pipes",
    "density": "1400 kg/m3",
    "yield_stress": "8 Pa",
    "consistency": "0.5 Pa.s^n",
    "flow_index": "0.6",
    "flow": "140 m3/h",
    "level": "3 m",
    "length": "200 m",
    "bore": "150 mm",
    "roughness": "0.05 mm",
    "elbows": "4",
    "loss": "12 kPa",
    "turbulent": "wilson-thomas",
    "limit": "60 m",
}
TEXT = """\
title: {title}
fluid:
  density: {density}
  rheology:
    {{model: herschel-bulkley, yield_stress: {yield_stress}, consistency: {consistency}, flow_index: {flow_index}}}
flow: {flow}
source: {{level: {level}}}
route:
  - {{pipe: first, diameter: 200 mm, length: 10 m, roughness: {roughness}, fittings: {{entrance: 1}}}}
  - {{equipment: meter, pressure_loss: {loss}}}
  - pipe: second
    diameter: {bore}
    length: {length}
    rise: 6 m
    roughness: {roughness}
    fittings: {{elbow_90: {elbows}, exit: 1}}
methods: {{turbulent: {turbulent}}}
limits: {{head_loss: {limit}}}
"""


def text_of(**changes: str) -> str:
    """The text of the small case, with some of its values changed."""
    return TEXT.format(**{**DEFAULTS, **changes})


def case_of(**changes: str) -> Case:
    """The small case."""
    return load_text(text_of(**changes))


CHANGES = st.fixed_dictionaries(
    {},
    optional={
        "title": st.sampled_from(["Two pipes", "Another"]),
        "density": st.floats(1050, 1800).map(lambda v: f"{v:.9g} kg/m3"),
        "yield_stress": st.floats(0.5, 60).map(lambda v: f"{v:.9g} Pa"),
        "consistency": st.floats(0.05, 5).map(lambda v: f"{v:.9g} Pa.s^n"),
        "flow_index": st.floats(0.35, 1.0).map(lambda v: f"{v:.9g}"),
        "flow": st.floats(20, 300).map(lambda v: f"{v:.9g} m3/h"),
        "level": st.floats(0.01, 9).map(lambda v: f"{v:.9g} m"),
        "length": st.floats(20, 900).map(lambda v: f"{v:.9g} m"),
        "bore": st.floats(100, 200).map(lambda v: f"{v:.9g} mm"),
        "roughness": st.floats(0.001, 0.4).map(lambda v: f"{v:.9g} mm"),
        "elbows": st.integers(0, 12).map(str),
        "loss": st.floats(0.01, 80).map(lambda v: f"{v:.9g} kPa"),
        "turbulent": st.sampled_from(["wilson-thomas", "dodge-metzner"]),
        "limit": st.floats(1, 90).map(lambda v: f"{v:.9g} m"),
    },
)
"""Any values of the small case."""
