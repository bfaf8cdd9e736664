"""A case with arrays in the place of some of its inputs: what one vectorised solution of its line takes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np

from pipeflow.arrays import FloatOrArray
from pipeflow.case.model import Case, Solids
from pipeflow.case.variables import Variable, VariableError, flow_path, variable, variables
from pipeflow.line.elements import Element, Fluid, Pipe, Vessel
from pipeflow.rheology import Rheology, mixture


@dataclass(frozen=True, eq=False)
class Slurry:
    """What flows, SI; floats or arrays. Solids and liquid are nan where the case does not know them.

    ``size`` is the d85, or else the d50; ``liquid_viscosity`` in Pa s.
    """

    density: FloatOrArray
    solids_density: FloatOrArray = np.nan
    mass_fraction: FloatOrArray = np.nan
    volume_fraction: FloatOrArray = np.nan
    size: FloatOrArray = np.nan
    liquid_density: FloatOrArray = np.nan
    liquid_viscosity: FloatOrArray = np.nan


@dataclass(frozen=True, eq=False)
class VariedCase:
    """A case some of whose inputs are arrays, SI; what is not varied stays a float.

    Attributes
    ----------
    minimum, design, maximum : float or array
        Volume flows of the slurry, m³/s.
    fluid, route, source, destination
        As :func:`pipeflow.line.route.solve` takes them.
    particle_size : float or array
        d85 of the solids, m; nan where it is not known.
    slurry : Slurry
        Solids and liquid, for the formulas of settling.
    static_yield_stress : float, array or None
        Pa; None where the case gives none.
    is_carried_on : bool or array of bool
        Whether a law of a parameter is asked outside the range it was tested over.
    """

    minimum: FloatOrArray
    design: FloatOrArray
    maximum: FloatOrArray
    fluid: Fluid
    route: tuple[Element, ...]
    source: Vessel
    destination: Vessel
    particle_size: FloatOrArray
    slurry: Slurry
    static_yield_stress: FloatOrArray | None
    is_carried_on: Any


class _Given:
    """The values given, and those of the case for the rest."""

    def __init__(self, case: Case, values: Mapping[str, FloatOrArray]) -> None:
        self.known: dict[str, Variable] = variables(case)
        for path in values:
            if path not in self.known:
                variable(case, path)
        self.values = {path: _floats(value) for path, value in values.items()}

    def __call__(self, path: str, otherwise: FloatOrArray = np.nan) -> FloatOrArray:
        """Value of an input: as given, or that of the case, or else ``otherwise``."""
        if path in self.values:
            return self.values[path]
        return self.known[path].value if path in self.known else otherwise

    def factor(self, path: str) -> FloatOrArray:
        """Value given over that of the case; 1 where it is not varied."""
        return self.values[path] / self.known[path].value if path in self.values else 1.0

    def any_of(self, *paths: str) -> bool:
        """Whether one of these is varied."""
        return any(path in self.values for path in paths)


def _floats(value: FloatOrArray) -> FloatOrArray:
    return float(value) if np.ndim(value) == 0 else np.asarray(value, dtype=np.float64)


def varied(case: Case, values: Mapping[str, FloatOrArray], *, flow: FloatOrArray | None = None) -> VariedCase:
    """Put values in the place of inputs.

    A parameter that follows the solids or the temperature is its law's at what they are, and one varied besides is
    scaled from there by its value over that of the case. The density follows the solids: mixed anew where the case
    mixes it; a stated one in the ratio of the mixtures. A flow given by mass or by its dry solids stays that mass.

    Parameters
    ----------
    case : Case
    values : mapping of str to float or array
        By key path of :func:`pipeflow.case.variables.variables`, SI; the arrays broadcast to one leading shape.
        ``flow`` scales all three flows, and each of them may be varied on top of it.
    flow : float or array, optional
        Volume flow of the slurry, m³/s, for minimum, design and maximum alike, whatever the case gives.

    Returns
    -------
    VariedCase
        A value that is not possible gives figures of nan there, not an error.

    Raises
    ------
    VariableError
        A path that cannot be varied, or both fractions of the solids.
    """
    given = _Given(case, values)
    with np.errstate(all="ignore"):
        slurry = _slurry(case, given)
        rheology, is_carried_on = _rheology(case, given, slurry)
        minimum, design, maximum = _flows(case, given, slurry) if flow is None else (_floats(flow),) * 3
        route = tuple(_element(case, element, given, slurry) for element in case.route)
    static = case.restart.static_yield_stress
    return VariedCase(
        minimum=minimum,
        design=design,
        maximum=maximum,
        fluid=Fluid(slurry.density, rheology),
        route=route,
        source=_vessel(case.source, "source", given),
        destination=_vessel(case.destination, "destination", given),
        particle_size=given("fluid.solids.d85"),
        slurry=slurry,
        static_yield_stress=given.values.get("restart.static_yield_stress", static),
        is_carried_on=is_carried_on,
    )


_MASS, _VOLUME = "fluid.solids.mass_fraction", "fluid.solids.volume_fraction"


def _slurry(case: Case, given: _Given) -> Slurry:
    if case.solids is None:
        return Slurry(given("fluid.density"))
    if given.any_of(_MASS) and given.any_of(_VOLUME):
        raise VariableError(f"{_MASS} and {_VOLUME} are one quantity; vary one of them")
    solids = case.solids
    size = given("fluid.solids.d50") if solids.d85 is None else given("fluid.solids.d85")
    viscosity, solids_density = given("fluid.liquid.viscosity"), given("fluid.solids.density")
    liquid = _liquid_density(case, solids)
    liquid_density = liquid * given.factor("fluid.liquid.density")
    by_volume = given.any_of(_VOLUME) or (solids.fraction_given_by == "volume" and not given.any_of(_MASS))
    mixed = _mixed(given, by_volume, solids_density, liquid_density)
    if case.density_is_mixed:
        density = mixed * given.factor("fluid.density")
    else:
        ratio = _mixed(given, by_volume, solids.density, liquid) / _mixed_as_stated(solids, liquid)
        density = float(case.fluid.density) * given.factor("fluid.density") * ratio
    if not given.any_of(_MASS, _VOLUME, "fluid.solids.density", "fluid.liquid.density", "fluid.density"):
        density = float(case.fluid.density)  # to the last bit, as the case has it
    if by_volume:
        volume = given(_VOLUME)
        mass: FloatOrArray = mixture.mass_fraction(volume, solids_density, mixed)
    else:
        mass, volume = given(_MASS), mixture.volume_fraction(given(_MASS), solids_density, mixed)
    return Slurry(density, solids_density, mass, volume, size, liquid_density, viscosity)


def _liquid_density(case: Case, solids: Solids) -> float:
    """As the case gives it, or what the solids leave."""
    if case.liquid is not None and case.liquid.density is not None:
        return case.liquid.density
    return float(mixture.liquid_density(solids.volume_fraction, solids.density, float(case.fluid.density)))


def _mixed(given: _Given, by_volume: bool, solids_density: FloatOrArray, liquid_density: FloatOrArray) -> FloatOrArray:
    if by_volume:
        return mixture.density_by_volume(given(_VOLUME), solids_density, liquid_density)
    return mixture.density_by_mass(given(_MASS), solids_density, liquid_density)


def _mixed_as_stated(solids: Solids, liquid_density: float) -> float:
    return float(mixture.density_by_mass(solids.mass_fraction, solids.density, liquid_density))


def _rheology(case: Case, given: _Given, slurry: Slurry) -> tuple[Rheology, Any]:
    law = case.fluid.rheology
    names = [field.name for field in fields(law)]  # type: ignore[arg-type]
    parameters: dict[str, Any] = {name: given(f"fluid.rheology.{name}") for name in names}
    is_carried_on: Any = False
    solids_vary = given.any_of(_MASS, _VOLUME, "fluid.solids.density", "fluid.liquid.density")
    for followed in case.followed:
        follows = followed.law
        if not (solids_vary if follows.variable == "solids" else given.any_of("fluid.temperature")):
            continue
        condition = slurry.mass_fraction if follows.variable == "solids" else given("fluid.temperature")
        path = f"fluid.rheology.{followed.parameter}"
        parameters[followed.parameter] = follows.value(condition) * given.factor(path)
        low, high = follows.tested
        slack = 1e-9 * (high - low)
        outside = (np.asarray(condition) < low - slack) | (np.asarray(condition) > high + slack)
        is_carried_on = is_carried_on | outside
    return type(law)(**parameters), is_carried_on


def _flows(case: Case, given: _Given, slurry: Slurry) -> tuple[FloatOrArray, ...]:
    path = flow_path(case)
    scale = given.factor(path) * _by_mass(case, slurry, case.flow_given_as)

    def one(key: str, value: float) -> FloatOrArray:
        if not given.any_of(f"{path}.{key}"):
            return value * scale
        of_case = given.known[f"{path}.{key}"].value
        unit = value / of_case if of_case else _unit_of_flow(case)
        return given(f"{path}.{key}") * unit * scale

    flow = case.flow
    return one("minimum", flow.minimum), one("design", flow.design), one("maximum", flow.maximum)


def _unit_of_flow(case: Case) -> float:
    """Volume flow of the slurry in one unit of the flow as the case gives it."""
    if not case.flow_given_as:
        return 1.0
    share = case.solids.mass_fraction if case.flow_given_as == "dry solids" and case.solids else 1.0
    return 1.0 / (float(case.fluid.density) * share)


def _by_mass(case: Case, slurry: Slurry, given_as: str) -> FloatOrArray:
    """Volume of a mass of slurry, or of dry solids, over what it is in the case; 1 for a volume."""
    if not given_as:
        return 1.0
    before, after = float(case.fluid.density), slurry.density
    if given_as == "dry solids" and case.solids is not None:
        before, after = before * case.solids.mass_fraction, after * slurry.mass_fraction
    return before / after


def _vessel(vessel: Vessel | None, name: str, given: _Given) -> Vessel:
    return replace(vessel or Vessel(), pressure=given(f"{name}.pressure"), level=given(f"{name}.level"))


def _element(case: Case, element: Element, given: _Given, slurry: Slurry) -> Element:
    home = f"route[{element.name}]"
    keys = ("diameter", "length", "rise", "roughness", "loss_coefficient", "pressure_loss")
    changes: dict[str, Any] = {key: given(f"{home}.{key}") for key in keys if given.any_of(f"{home}.{key}")}
    if not isinstance(element, Pipe) and element.at_flow is not None and element.name in case.at_mass_flow:
        changes["at_flow"] = element.at_flow * _by_mass(case, slurry, "mass")
    return replace(element, **changes) if changes else element
