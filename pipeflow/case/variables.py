"""The inputs of a case that may be varied, each by the key path a case file writes: the closed table of them.

:func:`pipeflow.case.varying.varied` puts arrays in their place.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, fields
from difflib import get_close_matches
from typing import Final

from pipeflow import units
from pipeflow.case import bounds as possible
from pipeflow.case.bounds import ANY, EXPONENT, FRACTION, INDEX, NOT_NEGATIVE, POSITIVE
from pipeflow.case.bounds import Bounds as Bounds
from pipeflow.case.model import Case, Liquid, Solids
from pipeflow.line.elements import Pipe, Vessel


class VariableError(ValueError):
    """A key path that cannot be varied, or a value that it cannot have; the message says what can."""


IN_MILLIMETRES: Final = ("diameter", "roughness")
IN_MICROMETRES: Final = ("d50", "d85")
"""Keys of the lengths that a reader has in small units."""
SHORT: Final = 0.05
"""Other lengths below which a reader wants millimetres, m."""

PARAMETERS: Final[dict[str, tuple[str, Bounds]]] = {
    "viscosity": ("viscosity", POSITIVE),
    "plastic_viscosity": ("viscosity", POSITIVE),
    "casson_viscosity": ("viscosity", POSITIVE),
    "zero_shear_viscosity": ("viscosity", POSITIVE),
    "infinite_shear_viscosity": ("viscosity", NOT_NEGATIVE),
    "consistency": ("consistency", POSITIVE),
    "yield_stress": ("stress", NOT_NEGATIVE),
    "half_stress": ("stress", POSITIVE),
    "rate_offset": ("shear rate", NOT_NEGATIVE),
    "time_constant": ("time", POSITIVE),
    "flow_index": ("", INDEX),
    "exponent": ("", EXPONENT),
    "transition_exponent": ("", EXPONENT),
}
"""Dimension and possible values of each parameter of a rheology."""


@dataclass(frozen=True)
class Variable:
    """An input that may be varied.

    Attributes
    ----------
    path : str
        Its key path.
    dimension : str
        A dimension of :mod:`pipeflow.units`; empty for a bare number.
    value : float
        What the case gives, SI; nan where it gives nothing.
    bounds : Bounds
        What is possible beside the other inputs of the case, SI.
    agreeing : Bounds, optional
        What does not contradict the others, where that is less: asked of a value that is given, not of a tolerance.
    """

    path: str
    dimension: str
    value: float
    bounds: Bounds = POSITIVE
    agreeing: Bounds | None = None

    def refusal(self, value: float) -> str:
        """Say why the input cannot have a value; empty where it can."""
        asked = (self.bounds,) if self.agreeing is None else (self.bounds, self.agreeing)
        return next((one.refusal(value) for one in asked if not one.hold(value)), "")

    @property
    def unit(self) -> str:
        """Unit or dimension that a reader has it in."""
        key = self.path.rpartition(".")[2]
        return "mm" if key in IN_MILLIMETRES else "µm" if key in IN_MICROMETRES else self.dimension

    def read(self, text: str) -> float:
        """Read a value of this input, as ``14 Pa`` or, of a bare number, ``0.52``.

        Raises
        ------
        VariableError
            The text is none, or the value is not possible.
        """
        try:
            value = units.parse(text, self.dimension) if self.dimension else units.parse_number(text)
        except units.UnitError as error:
            raise VariableError(str(error)) from None
        refusal = self.refusal(value)
        if refusal:
            raise VariableError(f"found {units.echo(text)}; {refusal}")
        return value

    def shown(self, value: float, digits: int = 4) -> str:
        """Write a value of this input for a reader."""
        if not self.dimension:
            return units.significant(value, digits)
        unit = "mm" if self.unit == "length" and abs(value) < SHORT else self.unit
        return units.format_value(value, unit, digits)


def variables(case: Case) -> dict[str, Variable]:
    """Give every input of a case that may be varied, by key path.

    A route in proportion has the path ``flow``; its ends have one each where they differ. A flow given by mass or by
    its dry solids is varied as it was given.
    """
    every = (*_of_fluid(case), *_of_flow(case), *_of_vessels(case), *_of_route(case), *_of_restart(case))
    return {variable.path: variable for variable in every}


def variable(case: Case, path: str) -> Variable:
    """Look one input up.

    Raises
    ------
    VariableError
        The path leads to nothing that can be varied; the message says what was meant, or what can be.
    """
    known = variables(case)
    if path not in known:
        raise VariableError(_why_not(case, path, known))
    return known[path]


def _of_fluid(case: Case) -> Iterator[Variable]:
    density = float(case.fluid.density)
    yield Variable("fluid.density", "density", density, agreeing=possible.of_density(case))
    law = case.fluid.rheology
    beside = possible.of_rheology(law)
    for field in fields(law):  # type: ignore[arg-type]
        dimension, bounds = PARAMETERS[field.name]
        bounds = beside.get(field.name, bounds)
        yield Variable(f"fluid.rheology.{field.name}", dimension, float(getattr(law, field.name)), bounds)
    if case.temperature is not None and any(one.law.variable == "temperature" for one in case.followed):
        yield Variable("fluid.temperature", "temperature", case.temperature)
    if case.solids is not None:
        yield from _of_solids(case, case.solids)


def _of_solids(case: Case, solids: Solids) -> Iterator[Variable]:
    yield Variable("fluid.solids.mass_fraction", "", solids.mass_fraction, FRACTION)
    yield Variable("fluid.solids.volume_fraction", "", solids.volume_fraction, FRACTION)
    liquid = case.liquid or Liquid()
    sizes = possible.of_sizes(solids)
    for key, dimension, value in (
        ("solids.density", "density", solids.density),
        ("solids.d50", "length", solids.d50),
        ("solids.d85", "length", solids.d85),
        ("liquid.density", "density", liquid.density),
        ("liquid.viscosity", "viscosity", liquid.viscosity),
    ):
        if value is not None:
            yield Variable(f"fluid.{key}", dimension, value, sizes.get(key.rpartition(".")[2], POSITIVE))


def flow_path(case: Case) -> str:
    """Key path of the flow as the case gives it."""
    return "flow.dry_solids" if case.flow_given_as == "dry solids" else "flow"


def _of_flow(case: Case) -> Iterator[Variable]:
    flow, path = case.flow, flow_path(case)
    dimension = "mass flow" if case.flow_given_as else "volume flow"
    share = case.solids.mass_fraction if case.flow_given_as == "dry solids" and case.solids else 1.0
    unit = float(case.fluid.density) * share if case.flow_given_as else 1.0
    if flow.design > 0:
        yield Variable(path, dimension, flow.design * unit)
    if not flow.minimum == flow.design == flow.maximum:
        each = {key: getattr(flow, key) * unit for key in ("minimum", "design", "maximum")}
        for key, bounds in possible.of_flows(**each).items():
            yield Variable(f"{path}.{key}", dimension, each[key], bounds)


def _of_vessels(case: Case) -> Iterator[Variable]:
    for name, vessel in (("source", case.source or Vessel()), ("destination", case.destination or Vessel())):
        levels = possible.of_source_level(case.lowest_level) if name == "source" else ANY
        yield Variable(f"{name}.pressure", "pressure", float(vessel.pressure), possible.GAUGE)
        yield Variable(f"{name}.level", "length", float(vessel.level), levels)


def _of_route(case: Case) -> Iterator[Variable]:
    for element in case.route:
        home = f"route[{element.name}]"
        if isinstance(element, Pipe):
            for key, bounds in possible.of_pipe(element).items():
                dimension = "" if key == "loss_coefficient" else "length"
                yield Variable(f"{home}.{key}", dimension, float(getattr(element, key)), bounds)
        else:
            yield Variable(f"{home}.pressure_loss", "pressure", float(element.pressure_loss), NOT_NEGATIVE)


def _of_restart(case: Case) -> Iterator[Variable]:
    measured = case.restart.static_yield_stress
    yield Variable("restart.static_yield_stress", "stress", math.nan if measured is None else measured)


def _why_not(case: Case, path: str, known: dict[str, Variable]) -> str:
    found = f"found {units.echo(path)}"
    home, _, key = path.rpartition(".")
    if key == "size" and f"{home}.diameter" in known:
        return f"{found}; a size is a name, no number: vary {home}.diameter, the inside diameter"
    if path == "fluid.temperature" and case.temperature is not None:
        return f"{found}; nothing in the case follows the temperature"
    if path.startswith(("fluid.solids.", "fluid.liquid.")) and case.solids is None:
        return f"{found}; the case gives no solids, 'fluid.solids'"
    if path.split(".")[0] == "flow" and flow_path(case) in known:
        return f"{found}; the case gives its flow as {flow_path(case)}: {', '.join(_near_kin(flow_path(case), known))}"
    near = get_close_matches(path[: units.ECHO_LENGTH * 3], list(known), n=1, cutoff=0.6)
    meant = f"did you mean {near[0]}? " if near else ""
    return f"{found}; this cannot be varied; {meant}what can: {_offered(home, known)}"


def _near_kin(home: str, known: dict[str, Variable]) -> list[str]:
    return [path for path in known if path == home or path.startswith(f"{home}.")]


def _offered(home: str, known: dict[str, Variable]) -> str:
    """List the inputs beside one another in a map, or else the maps that hold some."""
    keys = [path.rpartition(".")[2] for path in known if path.rpartition(".")[0] == home]
    if home and keys:
        return f"{units.echo(home)[1:-1]}.{'|'.join(keys)}"
    maps = dict.fromkeys("route[NAME]" if path.startswith("route[") else path.partition(".")[0] for path in known)
    return f"{', '.join(f'{name}.…' if name != 'flow' else name for name in maps)} (docs/uncertainty.md)"
