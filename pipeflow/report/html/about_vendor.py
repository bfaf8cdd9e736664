"""What the pump's vendor is to be told: every duty of the line, the governing one marked, and what flows."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import fields

from pipeflow.report.html.blocks import Block, Subsection, Text, table
from pipeflow.report.rows import number
from pipeflow.report.text import PARAMETER_UNITS
from pipeflow.rheology import Rheology
from pipeflow.study.pumping.vendor import HIGHEST_HEAD, HIGHEST_POWER, VendorDuty
from pipeflow.units import format_value, significant

UPPER = (
    "To the vendor of the pump goes the upper figure: published methods for turbulent and transitional flow differ, "
    "and a pump chosen by the lowest of them may not deliver. In laminar flow, which is exact, both figures are one."
)
DUTY_COLUMNS = (
    "condition", "at", "flow\nm3/h", "upper head\nm", "pressure\nkPa", "hydraulic\nkW", "NPSHa\nm", "governs by",
)  # fmt: skip
FLUID_COLUMNS = ("condition", "density\nkg/m3", "solids\n% by mass", "rheology")


def vendor_blocks(duties: Sequence[VendorDuty]) -> Iterator[Block]:
    """Give the duties, why they are upper figures, and what flows in each condition."""
    if not duties:
        return
    yield Subsection("For the pump's vendor")
    governing = governing_text(duties)
    if governing:
        yield Text(f"Governing duty, upper figure: {governing}{_another_power(duties)}.", "strong")
    yield Text(UPPER)
    yield from table("Duties for the pump's vendor", DUTY_COLUMNS, [_duty_row(one) for one in duties], (0, 1, 7))
    yield Text("Heads are metres of what flows; NPSH available is at the lowest level of the source, a dash where the "
               "case does not give the site and the vapour pressure.")  # fmt: skip
    fluids = {one.condition: one for one in duties}.values()
    yield from table("What flows, for the pump's vendor", FLUID_COLUMNS, [_fluid_row(one) for one in fluids], (0, 3))


def governing_text(duties: Sequence[VendorDuty]) -> str:
    """``32.68 m, 474.3 kPa at 155.0 m3/h (thick, maximum flow)``: the duty of the highest head; empty without one."""
    highest = next((one for one in duties if HIGHEST_HEAD in one.governs), None)
    if highest is None:
        return ""
    flow = format_value(highest.flow, "volume flow")
    figures = f"{number(highest.head)} m, {number(highest.pressure, 'kPa')} kPa at {flow}"
    return f"{figures} ({highest.condition}, {highest.at} flow)"


def _another_power(duties: Sequence[VendorDuty]) -> str:
    """``; the most power, 25.82 kW, is asked for in thick at maximum flow``: where that is another duty."""
    most = next((one for one in duties if HIGHEST_POWER in one.governs and HIGHEST_HEAD not in one.governs), None)
    if most is None:
        return ""
    power = format_value(most.power or 0.0, "kW")
    return f"; the most hydraulic power, {power}, is asked for in {most.condition} at {most.at} flow"


def _duty_row(duty: VendorDuty) -> tuple[str, ...]:
    return (
        duty.condition,
        duty.at,
        number(duty.flow, "m3/h"),
        number(duty.head),
        number(duty.pressure, "kPa"),
        number(duty.power, "kW"),
        number(duty.npsh_available, digits=3),
        ", ".join(duty.governs),
    )


def _fluid_row(duty: VendorDuty) -> tuple[str, ...]:
    fluid, solids = duty.case.fluid, duty.case.solids
    share = number(None if solids is None else 100.0 * solids.mass_fraction, digits=3)
    return duty.condition, number(float(fluid.density), "kg/m3"), share, rheology_text(fluid.rheology)


def rheology_text(law: Rheology) -> str:
    """``bingham: yield stress 9.500 Pa, plastic viscosity 0.02000 Pa.s``: a law with its parameters."""
    parameters = (
        f"{field.name.replace('_', ' ')} {significant(getattr(law, field.name))} {PARAMETER_UNITS[field.name]}".rstrip()
        for field in fields(law)  # type: ignore[arg-type]
    )
    return f"{law.key}: {', '.join(parameters)}"
