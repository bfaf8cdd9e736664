"""Pipe sizes by their trade names, from the tables in ``pipeflow/data``.

The tables hold recalled figures of open standards (each file says which): check against the standard before ordering.
"""

from __future__ import annotations

import csv
from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from importlib.resources import files

INCH = 0.0254


@dataclass(frozen=True)
class PipeSize:
    """One size of one series; lengths in m, ``nominal_diameter`` in inches."""

    name: str
    material: str
    outside_diameter: float
    wall: float
    nominal_diameter: float

    @property
    def inside_diameter(self) -> float:
        """Outside diameter less two walls, m."""
        return self.outside_diameter - 2.0 * self.wall


@dataclass(frozen=True)
class Material:
    """A pipe material: ``roughness`` in m is the usual value of a new pipe (common practice)."""

    name: str
    roughness: float


MATERIALS = {
    material.name: material
    for material in (
        Material("steel", 0.05e-3),
        Material("polyethylene", 0.007e-3),
        Material("sanitary", 0.0015e-3),
    )
}


def table(name: str) -> list[dict[str, str]]:
    """Rows of a table of ``pipeflow/data``, by column, its ``#`` lines of source left out."""
    text = files("pipeflow").joinpath("data").joinpath(name).read_text(encoding="utf-8")
    return list(csv.DictReader(line for line in text.splitlines() if not line.startswith("#")))


def find_size(name: str) -> PipeSize | None:
    """Look a size up by its name in any spacing and case: ``NPS 8 Sch 40``, ``OD 160 SDR 11``, ``BPE 1-1/2``."""
    return _by_name().get(_normal(name))


@cache
def size_names() -> tuple[str, ...]:
    """The names of every size of the catalogue, in the order of the tables."""
    return tuple(size.name for size in _by_name().values())


def _normal(name: str) -> str:
    return "".join(name.casefold().split())


@cache
def _by_name() -> dict[str, PipeSize]:
    return {_normal(size.name): size for size in (*_steel(), *_polyethylene(), *_sanitary())}


def _steel() -> Iterator[PipeSize]:
    for row in table("pipe_asme_b36_10m.csv"):
        outside, wall = float(row["OD_in"]) * INCH, float(row["wall_in"]) * INCH
        yield PipeSize(f"NPS {row['NPS']} Sch {row['schedule']}", "steel", outside, wall, _inches(row["NPS"]))


def _polyethylene() -> Iterator[PipeSize]:
    for row in table("pipe_pe_iso4427.csv"):
        outside, wall = float(row["OD_mm"]) / 1e3, float(row["min_wall_mm"]) / 1e3
        inside_in_inches = (outside - 2 * wall) / INCH
        yield PipeSize(f"OD {row['OD_mm']} SDR {row['SDR']}", "polyethylene", outside, wall, inside_in_inches)


def _sanitary() -> Iterator[PipeSize]:
    for row in table("tube_sanitary.csv"):
        outside, wall = float(row["OD_mm"]) / 1e3, float(row["wall_mm"]) / 1e3
        if row["series"] == "ASME BPE":
            name, nominal = f"BPE {row['size']}", _inches(row["size"])
        else:
            series = "series 1" if "series 1" in row["series"] else "series 2"
            name, nominal = f"DIN 11850 {series} {row['size']}", (outside - 2 * wall) / INCH
        yield PipeSize(name, "sanitary", outside, wall, nominal)


def _inches(text: str) -> float:
    """Read a nominal size in inches as the trade writes it, ``1-1/2``."""
    return float(sum(Fraction(part) for part in text.split("-")))
