"""Importing this registers every example."""

import flow_curve_examples
import laminar_examples
import line_examples
import measured_friction
import pump_examples
import transition_examples
import turbulent_examples

__all__ = [
    "flow_curve_examples",
    "laminar_examples",
    "line_examples",
    "measured_friction",
    "pump_examples",
    "transition_examples",
    "turbulent_examples",
]
