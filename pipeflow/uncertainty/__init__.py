"""How sure an answer is: uncertain inputs sampled, the spread of the outputs and what it comes from.

Works on any ``evaluate(dict of arrays) -> dict of arrays``. Loads scipy, and is itself loaded only where asked for.
"""

from pipeflow.uncertainty.analysis import Analysis, Estimate, Index, Settings, analyse, inputs_of, points
from pipeflow.uncertainty.distributions import Distribution, Normal, Rectangular
from pipeflow.uncertainty.factors import Correlated, Factor, Independent

__all__ = [
    "Analysis",
    "Correlated",
    "Distribution",
    "Estimate",
    "Factor",
    "Independent",
    "Index",
    "Normal",
    "Rectangular",
    "Settings",
    "analyse",
    "inputs_of",
    "points",
]
