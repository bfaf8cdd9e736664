"""A case as the rest of the program sees it: frozen dataclasses in SI units, no text left but names."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from pipeflow.line.elements import Element, Fluid, Vessel
from pipeflow.operability.pressures import WallInputs
from pipeflow.rheology.conditions import Dependence, Variable
from pipeflow.units import format_value

if TYPE_CHECKING:
    from pipeflow.rheology.sheet import FitResult


@dataclass(frozen=True)
class FlowRange:
    """Volume flow of the slurry, m³/s."""

    minimum: float
    design: float
    maximum: float


@dataclass(frozen=True)
class Limits:
    """What the line must keep to, SI; None where the case states no limit."""

    head_loss: float | None = None
    pressure_loss: float | None = None
    velocity_minimum: float | None = None
    velocity_maximum: float | None = None
    wall_shear_rate: float | None = None
    wall_shear_stress: float | None = None
    temperature_rise: float | None = None
    restart_pressure: float | None = None


@dataclass(frozen=True)
class Restart:
    """The line after a stop: static yield stress in Pa, factor on it, element before the pump; None if not given."""

    static_yield_stress: float | None = None
    factor: float | None = None
    pump_after: str | None = None


@dataclass(frozen=True)
class Cost:
    """What pipe and energy cost: prices a metre by size, that of 100 mm bore and its power of the bore, of a kWh."""

    prices: dict[str, float]
    price_at_100_mm: float | None
    price_exponent: float
    energy_price_per_kwh: float
    hours_per_year: float
    interest_rate: float
    years: float
    pump_efficiency: float
    maintenance: float


@dataclass(frozen=True)
class Sizing:
    """Which pipes vary over which sizes: a series and its ends by name, or bores in m between which one is free."""

    series: str | None = None
    smallest: str | None = None
    largest: str | None = None
    bores: tuple[float, float] | None = None
    pipes: tuple[str, ...] = ()
    cost: Cost | None = None


@dataclass(frozen=True)
class Methods:
    """The methods the case asks for by key; None leaves the choice to the program."""

    turbulent: str | None = None
    critical: str | None = None
    fittings: str | None = None
    deposition: str | None = None


def shown_condition(variable: Variable, value: float) -> str:
    """Write a solids fraction by mass, or a temperature in K, for a reader."""
    return f"{value:.4g}" if variable == "solids" else format_value(value, "temperature")


@dataclass(frozen=True)
class Followed:
    """A rheological parameter, SI, as its law gives it at a condition: a solids fraction by mass, or K."""

    parameter: str
    law: Dependence
    condition: float
    value: float

    @property
    def is_carried_on(self) -> bool:
        """Whether the condition is outside the range tested."""
        return not self.law.holds(self.condition)


@dataclass(frozen=True)
class Solids:
    """The solids of a slurry: density in kg/m³, fractions of the whole, sizes in m; None where not given.

    The fraction not given is worked out with the density of the slurry; ``fraction_given_by`` is ``volume``, or empty
    for the mass.
    """

    density: float
    mass_fraction: float
    volume_fraction: float
    d50: float | None = None
    d85: float | None = None
    fraction_below_45um: float | None = None
    fraction_given_by: str = ""


@dataclass(frozen=True)
class Liquid:
    """The liquid of a slurry: density in kg/m³, viscosity in Pa.s, absolute vapour pressure in Pa; None if not given.

    A density not given is the one the solids leave, where they are known.
    """

    density: float | None = None
    viscosity: float | None = None
    vapour_pressure: float | None = None


@dataclass(frozen=True)
class Site:
    """Where the line stands: altitude in m, or the atmospheric pressure in Pa; the other is None."""

    altitude: float | None = None
    atmospheric_pressure: float | None = None


@dataclass(frozen=True)
class Reciprocating:
    """A pump of pistons: number of cylinders, and the constant k of the acceleration head."""

    cylinders: int
    constant: float


@dataclass(frozen=True)
class PumpTable:
    """Columns of a pump's curve, SI, of one length: flow in m³/s, head in m or pressure in Pa; empty if not given."""

    flow: tuple[float, ...]
    head: tuple[float, ...] = ()
    pressure: tuple[float, ...] = ()
    efficiency: tuple[float, ...] = ()
    npsh_required: tuple[float, ...] = ()


@dataclass(frozen=True)
class Pump:
    """A candidate pump, SI; None where the case does not say.

    Attributes
    ----------
    kind : str
        ``centrifugal`` or ``positive-displacement``.
    curve : str
        Path of its curve as written in the case.
    table : PumpTable
        The curve read.
    speed, curve_speed : float or None
        Running speed and that of the curve, rad/s.
    speed_minimum, speed_maximum : float or None
        Ends of a variable speed, rad/s.
    number : int
        Pumps of this kind that run together, ``arrangement`` tells how: ``series`` or ``parallel``.
    stages : int
        Impellers in one pump, which the curve holds all of.
    impeller_diameter, trimmed_diameter, outlet_width : float or None
        Of the curve, as it will be cut, and the width of the passage at the outlet, m.
    inlet : str
        ``end`` or ``side``.
    motor_power, motor_margin : float or None, float
        Rated power of a motor that is there, W, and the share kept spare.
    relief_pressure : float or None
        Setting of the relief valve, Pa.
    torque_limit : float or None
        N m.
    test_viscosity : float or None
        Of the liquid of a positive-displacement pump's curve, Pa s.
    """

    name: str
    kind: str
    curve: str
    table: PumpTable = PumpTable(())
    speed: float | None = None
    curve_speed: float | None = None
    speed_minimum: float | None = None
    speed_maximum: float | None = None
    number: int = 1
    arrangement: str = "parallel"
    stages: int = 1
    impeller_diameter: float | None = None
    trimmed_diameter: float | None = None
    outlet_width: float | None = None
    inlet: str = "end"
    motor_power: float | None = None
    motor_margin: float = 0.15
    relief_pressure: float | None = None
    torque_limit: float | None = None
    test_viscosity: float | None = None
    reciprocating: Reciprocating | None = None


@dataclass(frozen=True)
class PumpPlace:
    """Where the pump stands in the route: its name, and the number of elements before it."""

    name: str
    position: int


@dataclass(frozen=True)
class Job:
    """What the design file says of the document; empty where the case does not."""

    project: str = ""
    client: str = ""
    number: str = ""
    prepared_by: str = ""
    checked_by: str = ""
    approved_by: str = ""
    date: str = ""


@dataclass(frozen=True)
class Uncertain:
    """An input that is not known exactly, SI.

    Attributes
    ----------
    path : str
        Its key path.
    kind : str
        ``rectangular``, any value as likely from ``middle - spread`` to ``middle + spread``, or ``normal``, with
        ``spread`` for its standard deviation.
    least, most : float
        Ends of what is possible; infinite where there is none.
    text : str
        As written.
    """

    path: str
    kind: str
    middle: float
    spread: float
    least: float
    most: float
    text: str


@dataclass(frozen=True)
class Case:
    """One case file, read.

    Attributes
    ----------
    file : str
        The path as the user gave it.
    sizes : dict of str to str
        The catalogue size of each pipe given by ``size``, by pipe name.
    default_roughness : dict of str to str
        Material whose default roughness stands in for a value the case does not give, by pipe name.
    tested_shear_rate : tuple of float, optional
        Lowest and highest shear rate over which the rheology was measured, 1/s.
    fitted : FitResult, optional
        The fit behind the rheology, where the case names one sheet of readings.
    readings : tuple of str
        Files of the readings, one or several.
    sheets : tuple of FitResult
        The fit of each.
    followed : tuple of Followed
        The parameters that follow the solids or the temperature.
    temperature : float, optional
        Temperature of the fluid, K.
    specific_heat : float, optional
        Of the fluid, J/(kg K).
    hold_times : dict of str to float
        Least residence time of the fastest particle, s, by the name of the pipe that is a hold tube.
    pump_place : PumpPlace, optional
        Where the pump stands; at the source without one.
    uncertainty : tuple of Uncertain
        Inputs that are not known exactly.
    lowest_level : float, optional
        Of the liquid in the source above the route's start, m: what suction is judged at.
    job : Job
        What the design file says of the document.
    density_is_mixed : bool
        The density of the fluid is worked out from solids and liquid.
    flow_given_as : str
        ``mass`` or ``dry solids`` where the case gives its flow so; empty for a volume flow of the slurry.
    at_mass_flow : tuple of str
        Equipment whose loss is stated at a mass flow of the slurry.
    assumed : tuple of str
        Key paths of the maps whose inputs the case says are assumed, in file order of the keys.
    scenarios : dict of str to Case
        The case with each named set of changes made.
    """

    file: str
    title: str
    revision: str
    notes: str
    fluid: Fluid
    flow: FlowRange
    source: Vessel | None
    destination: Vessel | None
    route: tuple[Element, ...]
    limits: Limits = Limits()
    restart: Restart = Restart()
    pipe_wall: WallInputs | None = None
    sizing: Sizing = Sizing()
    methods: Methods = Methods()
    sizes: dict[str, str] = field(default_factory=dict)
    default_roughness: dict[str, str] = field(default_factory=dict)
    tested_shear_rate: tuple[float, float] | None = None
    fitted: FitResult | None = None
    readings: tuple[str, ...] = ()
    sheets: tuple[FitResult, ...] = ()
    followed: tuple[Followed, ...] = ()
    pumps: tuple[Pump, ...] = ()
    pump_place: PumpPlace | None = None
    uncertainty: tuple[Uncertain, ...] = ()
    lowest_level: float | None = None
    job: Job = Job()
    solids: Solids | None = None
    liquid: Liquid | None = None
    site: Site | None = None
    temperature: float | None = None
    specific_heat: float | None = None
    hold_times: dict[str, float] = field(default_factory=dict)
    density_is_mixed: bool = False
    flow_given_as: str = ""
    at_mass_flow: tuple[str, ...] = ()
    assumed: tuple[str, ...] = ()
    scenarios: dict[str, Case] = field(default_factory=dict)

    @property
    def particle_size(self) -> float:
        """The d85 of the solids, m; nan where it is not known."""
        return math.nan if self.solids is None or self.solids.d85 is None else self.solids.d85
