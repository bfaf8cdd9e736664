"""Pressure drop, sizing and pump duty of pipelines for non-Newtonian slurries and food pastes.

``load_case`` and ``solve`` are loaded on first use, so that ``from pipeflow.friction import ...`` brings in no reader
case files.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pipeflow.case.loading import load_case as load_case
    from pipeflow.study import solve as solve

__version__ = "0.1.0"
__all__ = ["__version__", "load_case", "solve"]

_HOMES = {"load_case": "pipeflow.case.loading", "solve": "pipeflow.study"}


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'pipeflow' has no attribute {name!r}")
    return getattr(import_module(_HOMES[name]), name)
