"""A CSV of viscometer readings: which instrument it is from, its readings and its sample."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any, Final

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.tables import Cell, Column, Table, read_table
from pipeflow.errors import InputError, Problem
from pipeflow.rheology.fitting import LEAST_READINGS
from pipeflow.rheology.readings import CurveReadings, CylinderReadings, Readings, Sample, TubeReadings
from pipeflow.units import NUMBER, UnitError, echo, parse

COLUMNS: Final = {
    "shear_rate": Column(("shear rate",)),
    "shear_stress": Column(("stress",)),
    "diameter": Column(("length",)),
    "length": Column(("length",)),
    "pressure_drop": Column(("pressure",)),
    "flow": Column(("volume flow",)),
    "speed": Column(("rotational speed",)),
    "torque": Column(("torque",)),
    "bob_stress": Column(("stress",)),
    "ramp": Column(words=("up", "down")),
}
"""The columns that are read, with their dimensions."""

KINDS: Final = {
    "flow curve": ("shear_rate", "shear_stress"),
    "tube viscometer": ("pressure_drop", "flow"),
    "concentric cylinders": ("speed", "torque"),
    "concentric cylinders, stress": ("speed", "bob_stress"),
}
"""The columns by which an instrument is known."""

DIMENSIONS: Final = {
    "temperature": "temperature",
    "density": "density",
    "particle_density": "density",
    "particle_size": "length",
    "dwell_time": "time",
    "static_yield_stress": "stress",
    "rest_time": "time",
    "bob_radius": "length",
    "cup_radius": "length",
    "height": "length",
    "diameter": "length",
    "length": "length",
}
"""The keys of the side block that hold a quantity, with its dimension."""

TEXTS: Final = ("sample", "date", "instrument", "note")
CHOICES: Final = {"shear_history": ("fresh", "sheared"), "rotating": ("bob", "cup")}
KEYS: Final = (*TEXTS, "solids", *DIMENSIONS, *CHOICES)
"""What the side block may say."""

_POSITIVE = (
    "shear_rate",
    "shear_stress",
    "diameter",
    "length",
    "pressure_drop",
    "flow",
    "speed",
    "torque",
    "bob_stress",
)


def load_readings(path: str | Path) -> Readings:
    """Read a sheet of viscometer readings.

    Parameters
    ----------
    path : str or Path
        A CSV file as ``docs/flow-curves.md`` says.

    Returns
    -------
    CurveReadings, TubeReadings or CylinderReadings

    Raises
    ------
    InputError
        With everything wrong with the file.
    """
    table = read_table(path, COLUMNS, KEYS)
    return _Sheet(table).readings()


class _Sheet:
    """A table on its way to readings; collects what is wrong with it."""

    def __init__(self, table: Table) -> None:
        self.table = table
        self.problems: list[Problem] = []
        self.side = {key: self._side(key, cells[0]) for key, cells in table.keys.items() if key != "note"}

    def readings(self) -> Readings:
        kind = self._kind()
        makers: dict[str, Callable[[dict[str, Any]], Readings]] = {
            "flow curve": self._curve,
            "tube viscometer": self._tube,
            "concentric cylinders": self._cylinders,
            "concentric cylinders, stress": self._cylinders,
        }
        self._above_zero()
        self._enough(kind)
        made = makers[kind](self._common(kind)) if kind else None
        if self.problems or made is None:
            raise InputError(sorted(self.problems, key=lambda problem: (problem.line or 0, problem.column or 0)))
        return made

    def fault(self, line: int | None, column: int | None, name: str, message: str) -> None:
        self.problems.append(Problem(self.table.file, line, column, name, message))

    def _side(self, key: str, cell: Cell) -> Any:
        if key in DIMENSIONS:
            return self._quantity(key, cell)
        if key == "solids":
            return self._solids(cell)
        if key in CHOICES and cell.text not in CHOICES[key]:
            self.fault(cell.line, cell.column, key, f"found {echo(cell.text)}; accepted: {', '.join(CHOICES[key])}")
        return cell.text

    def _quantity(self, key: str, cell: Cell) -> float | None:
        try:
            value = parse(cell.text, DIMENSIONS[key])
        except UnitError as error:
            self.fault(cell.line, cell.column, key, str(error))
            return None
        if value <= 0:
            self.fault(cell.line, cell.column, key, f"found {echo(cell.text)}; must be above 0")
        return value

    def _solids(self, cell: Cell) -> float | None:
        import re

        match = re.fullmatch(rf"({NUMBER}) *(%?)", cell.text)
        value = float(match[1]) * (0.01 if match[2] else 1.0) if match else -1.0
        if 0 <= value < 1:
            return value
        self.fault(cell.line, cell.column, "solids", f"found {echo(cell.text)}; a fraction is needed, as 0.52 or 52 %")
        return None

    def _kind(self) -> str:
        given = set(self.table.numbers)
        found = next((kind for kind, columns in KINDS.items() if given >= set(columns)), "")
        if not found:
            self.fault(self.table.header_line, None, "", self._unknown_kind(given))
        return found

    def _unknown_kind(self, given: set[str]) -> str:
        from difflib import get_close_matches

        meant = [f"{name}: did you mean {near[0]}?" for name in self.table.unused
                 if (near := get_close_matches(name[:40], COLUMNS, n=1, cutoff=0.6))]  # fmt: skip
        begun = [
            f"{', '.join(sorted(set(columns) - given))} is missing"
            for columns in KINDS.values()
            if given & set(columns)
        ]
        kinds = "; ".join(f"{kind}: {', '.join(columns)}" for kind, columns in KINDS.items())
        return " ".join(
            [*meant, *([f"{begun[0]};"] if begun and not meant else []), f"a sheet has the columns of one of: {kinds}"]
        )

    def _above_zero(self) -> None:
        for name in _POSITIVE:
            values = self.table.numbers.get(name, np.empty(0))
            for index in np.flatnonzero(~(values > 0)):
                cell = self.table.cells[name][index]
                self.fault(cell.line, cell.column, name, f"found {echo(cell.text)}; {_why_above_zero(name)}")

    def _enough(self, kind: str) -> None:
        rows = self.table.lines.size
        if rows < LEAST_READINGS:
            line = int(self.table.lines[-1])
            found = f"{rows} reading" + ("s" if rows != 1 else "")
            self.fault(line, None, "", f"{found}; at least {LEAST_READINGS} are needed to compare models")
            return
        for name in KINDS[kind] if kind else ():
            if np.ptp(self.table.numbers[name]) == 0:
                line = self.table.header_line
                self.fault(line, None, name, "the same in every row; readings at several rates are needed")

    def _common(self, kind: str) -> dict[str, Any]:
        stress = KINDS[kind][1] if kind != "tube viscometer" else "pressure_drop"
        rows = self.table.lines.size
        return {
            "lines": self.table.lines,
            "resolution": self.table.half_digit(stress) if not self.problems else np.zeros(rows),
            "ramps": np.array(self.table.words.get("ramp", [""] * rows)),
            "sample": self._sample(),
        }

    def _sample(self) -> Sample:
        names = ("date", "instrument", "temperature", "solids", "density", "particle_density", "particle_size",
                 "dwell_time", "shear_history", "static_yield_stress", "rest_time")  # fmt: skip
        given = {name: self.side[name] for name in names if name in self.side}
        notes = tuple(cell.text for cell in self.table.keys.get("note", []))
        unused = tuple(f"the column {name} is not used" for name in self.table.unused)
        return Sample(name=self.side.get("sample", ""), notes=(*notes, *unused), **given)

    def _curve(self, common: dict[str, Any]) -> Readings:
        return CurveReadings(
            **common, shear_rate=self.table.numbers["shear_rate"], shear_stress=self.table.numbers["shear_stress"]
        )

    def _tube(self, common: dict[str, Any]) -> Readings:
        columns = {name: self._column_or_key(name) for name in ("diameter", "length")}
        return TubeReadings(
            **common,
            diameter=columns["diameter"],
            length=columns["length"],
            pressure_drop=self.table.numbers["pressure_drop"],
            flow=self.table.numbers["flow"],
        )

    def _column_or_key(self, name: str) -> Array:
        if name in self.table.numbers:
            return self.table.numbers[name]
        value = self.side.get(name)
        if name not in self.side:
            self.fault(
                self.table.header_line, None, name, f"missing; a column {name} [mm], or a line '# {name}: 20 mm'"
            )
        return np.full(self.table.lines.shape, np.nan if value is None else value)

    def _cylinders(self, common: dict[str, Any]) -> Readings:
        radii = [self._key(name, "20 mm") for name in ("bob_radius", "cup_radius")]
        bob, cup = radii
        if not cup > bob and np.isfinite(cup + bob):
            cell = self.table.keys["cup_radius"][0]
            self.fault(cell.line, cell.column, "cup_radius", f"found {echo(cell.text)}; must be above the bob's radius")
        if "bob_stress" in self.table.numbers and "torque" not in self.table.numbers:
            stress, height = self.table.numbers["bob_stress"], self.side.get("height")
        else:
            height = self._key("height", "60 mm")
            stress = self.table.numbers["torque"] / (2.0 * np.pi * bob**2 * height)
        rotating = self.side.get("rotating", "bob")
        return CylinderReadings(
            **common,
            speed=self.table.numbers["speed"],
            bob_stress=stress,
            bob_radius=bob,
            cup_radius=cup,
            height=height,
            rotating=rotating,
        )

    def _key(self, name: str, example: str) -> float:
        if name not in self.side:
            self.fault(self.table.header_line, None, name, f"missing; a line '# {name}: {example}' before the header")
        value = self.side.get(name)
        return np.nan if value is None else float(value)


def _why_above_zero(name: str) -> str:
    if name in ("shear_rate", "speed", "flow"):
        return "must be above 0 (a stress at rest is a static_yield_stress, in the lines before the header)"
    return "must be above 0"
