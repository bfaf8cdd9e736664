"""Pipe sizes by their trade names, from the tables in ``pipeflow/data``.

The tables hold recalled figures of open standards (each file says which): check against the standard before
ordering.
"""

from __future__ import annotations

import csv
from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from pathlib import Path

DATA = Path(__file__).parent.parent / "data"
INCH = 0.0254
DIN_SERIES = {
    "DIN 11850 series 1": "DIN 11850 series 1",
    "DIN 11850 series 2 (DIN 11866 A)": "DIN 11850 series 2",
}


@dataclass(frozen=True)
class PipeSize:
    """One size of one series.

    Attributes
    ----------
    name : str
        As written in a case file, ``NPS 8 Sch 40``.
    material : str
        Key of :data:`MATERIALS`.
    outside_diameter, wall : float
        Of the standard, m; of polyethylene the minimum wall.
    nominal_diameter : float
        Nominal size in inches, as the fitting constants want it; the inside diameter of metric series.
    series : str
        The sizes that differ in bore alone, ``NPS Sch 40``.
    standard : str
    confidence : str
        How sure the recalled figures are, ``high`` or ``medium``.
    """

    name: str
    material: str
    outside_diameter: float
    wall: float
    nominal_diameter: float
    series: str = ""
    standard: str = ""
    confidence: str = "high"

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


@cache
def table(name: str) -> tuple[dict[str, str], ...]:
    """Rows of a table of ``pipeflow/data``, by column, its ``#`` lines of source left out."""
    text = (DATA / name).read_text(encoding="utf-8")
    return tuple(csv.DictReader(line for line in text.splitlines() if not line.startswith("#")))


def find_size(name: str) -> PipeSize | None:
    """Look a size up by its name, in any spacing and case: ``NPS 8 Sch 40``, ``OD 160 SDR 11``."""
    return _by_name().get(_normal(name))


@cache
def size_names() -> tuple[str, ...]:
    """Name every size of the catalogue, in the order of the tables."""
    return tuple(size.name for size in _by_name().values())


@cache
def series_names() -> tuple[str, ...]:
    """Name the series: ``NPS Sch 40``, ``OD SDR 11``, ``BPE``, ``DIN 11850 series 2``."""
    return tuple(dict.fromkeys(size.series for size in _by_name().values()))


def sizes_of(series: str) -> tuple[PipeSize, ...]:
    """Give the sizes of a series, named in any spacing and case, in ascending bore; none if unknown.

    Examples
    --------
    >>> [size.name for size in sizes_of("bpe")][:3]
    ['BPE 1/4', 'BPE 3/8', 'BPE 1/2']
    """
    return _by_series().get(_normal(series), ())


def _normal(name: str) -> str:
    return "".join(name.casefold().split())


@cache
def _by_name() -> dict[str, PipeSize]:
    return {_normal(size.name): size for size in (*_steel(), *_polyethylene(), *_sanitary())}


@cache
def _by_series() -> dict[str, tuple[PipeSize, ...]]:
    ascending = sorted(_by_name().values(), key=lambda size: size.inside_diameter)
    return {_normal(name): tuple(size for size in ascending if size.series == name) for name in series_names()}


def _steel() -> Iterator[PipeSize]:
    for file, standard in (
        ("pipe_asme_b36_10m.csv", "ASME B36.10M"),
        ("pipe_asme_b36_19m.csv", "ASME B36.19M"),
    ):
        for row in table(file):
            yield PipeSize(
                name=f"NPS {row['NPS']} Sch {row['schedule']}",
                material="steel",
                outside_diameter=float(row["OD_in"]) * INCH,
                wall=float(row["wall_in"]) * INCH,
                nominal_diameter=_inches(row["NPS"]),
                series=f"NPS Sch {row['schedule']}",
                standard=standard,
                confidence=row["confidence"],
            )


def _polyethylene() -> Iterator[PipeSize]:
    for row in table("pipe_pe_iso4427.csv"):
        outside, wall = float(row["OD_mm"]) / 1e3, float(row["min_wall_mm"]) / 1e3
        yield PipeSize(
            name=f"OD {row['OD_mm']} SDR {row['SDR']}",
            material="polyethylene",
            outside_diameter=outside,
            wall=wall,
            nominal_diameter=(outside - 2 * wall) / INCH,
            series=f"OD SDR {row['SDR']}",
            standard="ISO 4427-2",
            confidence=row["confidence"],
        )


def _sanitary() -> Iterator[PipeSize]:
    for row in table("tube_sanitary.csv"):
        outside, wall = float(row["OD_mm"]) / 1e3, float(row["wall_mm"]) / 1e3
        imperial = row["series"] == "ASME BPE"
        series = "BPE" if imperial else DIN_SERIES[row["series"]]
        yield PipeSize(
            name=f"{series} {row['size']}",
            material="sanitary",
            outside_diameter=outside,
            wall=wall,
            nominal_diameter=_inches(row["size"]) if imperial else (outside - 2 * wall) / INCH,
            series=series,
            standard="ASME BPE" if imperial else "DIN 11850",
            confidence=row["confidence"],
        )


def _inches(text: str) -> float:
    """Read a nominal size in inches as the trade writes it, ``1-1/2``."""
    return float(sum(Fraction(part) for part in text.split("-")))
