"""A CSV table with units in its header, read strictly: every number with its line, every fault of the file at once.

Lines before the header that start with ``#`` are a side block: ``# key: value``, or free text without a colon.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from difflib import get_close_matches
from pathlib import Path
from typing import Final

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.files import read_text_file
from pipeflow.errors import InputError, Problem
from pipeflow.units import NUMBER, UnitError, accepted, echo, parse

MAX_BYTES: Final = 2000 * 1024
MAX_ROWS: Final = 10_000
MAX_LINE: Final = 20_000
MAX_PROBLEMS: Final = 50
SMALLEST, LARGEST = 1e-15, 1e15
"""Sizes of an SI value beyond which the figure is a slip."""

_HEADER = re.compile(r"\s*([^\[\]]*?)\s*(?:\[\s*([^\[\]]*?)\s*\])?\s*")
_NUMBER = re.compile(NUMBER)
_DELIMITERS = (",", ";", "\t")
_NAMES = {",": "commas", ";": "semicolons", "\t": "tabs"}


@dataclass(frozen=True)
class Column:
    """What a column may hold: numbers of these dimensions (none: bare ones, or per cents too), or words of a list."""

    dimensions: tuple[str, ...] = ()
    words: tuple[str, ...] = ()
    per_cent: bool = False


@dataclass(frozen=True)
class Cell:
    """A value as written, and its place."""

    text: str
    line: int
    column: int


@dataclass(frozen=True)
class Table:
    """A table read.

    Attributes
    ----------
    file : str
    keys : dict
        The side block: key to value and place; repeated keys keep every value.
    numbers : dict
        Columns of numbers in SI units, by name.
    units : dict
        The unit of each, as written; empty for bare numbers.
    words : dict
        Columns of words.
    cells : dict
        Every column as written.
    lines : Array
        Line of each row.
    unused : tuple of str
        Columns nobody asked for.
    header_line : int
    """

    file: str
    keys: dict[str, list[Cell]]
    numbers: dict[str, Array]
    units: dict[str, str]
    words: dict[str, list[str]]
    cells: dict[str, list[Cell]]
    lines: Array
    unused: tuple[str, ...]
    header_line: int

    def half_digit(self, name: str) -> Array:
        """Half the last printed digit of a column, relative to the number.

        Trailing zeros that a program took away are given back: a number counts as printed to as many decimals or
        digits as its column has elsewhere, whichever is coarser.
        """
        return _half_digits([cell.text for cell in self.cells[name]])


@dataclass
class _Reader:
    """Collects the problems of one file; ``refused`` says what unknown columns are told, None lets them pass."""

    file: str
    refused: Mapping[str, str] | None = None
    problems: list[Problem] = field(default_factory=list)

    def fault(self, line: int | None, column: int | None, name: str, message: str) -> None:
        self.problems.append(Problem(self.file, line, column, echo(name)[1:-1], message))

    def refuse(self) -> InputError:
        """Make the error of everything found, in file order, the first :data:`MAX_PROBLEMS` in words."""
        ordered = sorted(self.problems, key=lambda problem: (problem.line or 0, problem.column or 0))
        more = len(ordered) - MAX_PROBLEMS
        if more > 0:
            ordered = [*ordered[:MAX_PROBLEMS], Problem(self.file, None, None, "", f"and {more} more")]
        return InputError(ordered)


def read_table(
    path: str | Path,
    columns: Mapping[str, Column],
    keys: tuple[str, ...] = (),
    refused: Mapping[str, str] | None = None,
) -> Table:
    """Read a CSV file.

    Parameters
    ----------
    path : str or Path
        A regular file, UTF-8, at most :data:`MAX_BYTES`.
    columns : mapping
        What the columns may be, by name.
    keys : tuple of str
        What the side block may say.
    refused : mapping or None
        None leaves other columns unread and names them in ``unused``; else they are refused, those named here with
        these words.

    Raises
    ------
    InputError
        With every problem of the file.
    """
    return read_text(read_text_file(Path(path), MAX_BYTES, "a table"), str(path), columns, keys, refused)


def read_text(
    text: str,
    file: str,
    columns: Mapping[str, Column],
    keys: tuple[str, ...] = (),
    refused: Mapping[str, str] | None = None,
) -> Table:
    """Read the text of a CSV file like :func:`read_table`."""
    reader = _Reader(file, refused)
    lines = text.splitlines()
    if max(map(len, lines), default=0) > MAX_LINE:
        number = next(number for number, line in enumerate(lines, 1) if len(line) > MAX_LINE)
        reader.fault(number, 1, "", f"a line of more than {MAX_LINE} characters; a table here needs no such")
        raise reader.refuse()
    header_line = next((number for number, line in enumerate(lines, 1) if _is_row(line)), None)
    side = dict[str, list[Cell]]()
    for number, line in enumerate(lines[: header_line or len(lines)], 1):
        _read_side(reader, side, number, line, keys)
    if header_line is None:
        reader.fault(None, None, "", "no header; the first row names the columns, as 'shear_rate [1/s]'")
        raise reader.refuse()
    header = lines[header_line - 1]
    delimiter = next((mark for mark in (";", "\t") if mark in header and "," not in header), ",")
    table = _read_rows(reader, lines, header_line, delimiter, columns)
    if reader.problems or table is None:
        raise reader.refuse()
    return _with_side(table, side)


def _with_side(table: Table, side: dict[str, list[Cell]]) -> Table:
    table.keys.update(side)
    return table


def _is_row(line: str) -> bool:
    return bool(line.strip()) and not line.lstrip().startswith("#")


def _read_side(reader: _Reader, side: dict[str, list[Cell]], number: int, line: str, keys: tuple[str, ...]) -> None:
    text = line.strip().lstrip("#").strip()
    if not line.lstrip().startswith("#") or ":" not in text:
        return
    key, value = (part.strip() for part in text.split(":", 1))
    name = key.casefold().replace(" ", "_")
    column = line.index(key) + 1 if key else 1
    if name not in keys:
        near = get_close_matches(name[:40], keys, n=1, cutoff=0.6)
        meant = f"did you mean {near[0]}? " if near else ""
        reader.fault(number, column, "", f"unknown key {echo(key)}; {meant}accepted: {', '.join(keys)}")
    elif name in side and name != "note":
        reader.fault(number, column, name, f"duplicate key, first given at line {side[name][0].line}")
    elif not value:
        reader.fault(number, column, name, "no value")
    else:
        side.setdefault(name, []).append(Cell(value, number, line.index(value, line.index(":")) + 1))


def _read_rows(
    reader: _Reader, lines: list[str], header_line: int, delimiter: str, columns: Mapping[str, Column]
) -> Table | None:
    header = _Header.read(reader, lines[header_line - 1], header_line, delimiter, columns)
    rows = list(_rows(reader, lines, header_line, delimiter, len(header.names)))
    if len(rows) > MAX_ROWS:
        reader.fault(rows[MAX_ROWS][0].line, None, "", f"more than {MAX_ROWS} rows; a table here needs no more")
        return None
    if not rows and not reader.problems:
        reader.fault(header_line, None, "", "no rows below the header")
    if not rows:
        return None
    cells = {name: [row[index] for row in rows] for index, name in enumerate(header.names)}
    decimal_comma = delimiter != "," and _has_decimal_commas(reader, header, cells)
    if reader.problems:
        rows = [row for row in rows if row]
    numbers = {
        name: np.array([_number(reader, name, cell, unit, decimal_comma) for cell in cells[name]])
        for name, unit in header.units.items()
    }
    words = {name: [_word(reader, name, cell, columns[name].words) for cell in cells[name]] for name in header.words}
    plain = {name: [_plain(cell, decimal_comma) for cell in column] for name, column in cells.items()}
    place = np.array([row[0].line for row in rows])
    written = {name: unit for name, (unit, _) in header.units.items()}
    return Table(reader.file, {}, numbers, written, words, plain, place, header.unused, header_line)


def _plain(cell: Cell, decimal_comma: bool) -> Cell:
    return Cell(cell.text.replace(",", "."), cell.line, cell.column) if decimal_comma else cell


@dataclass(frozen=True)
class _Header:
    """Names in their order; the unit of each column of numbers, with the dimension it was found in."""

    names: tuple[str, ...]
    units: dict[str, tuple[str, str]]
    words: tuple[str, ...]
    unused: tuple[str, ...]

    @classmethod
    def read(cls, reader: _Reader, line: str, number: int, delimiter: str, columns: Mapping[str, Column]) -> _Header:
        """Read the header row; what is wrong with it is told to the reader."""
        names: list[str] = []
        units: dict[str, tuple[str, str]] = {}
        place = 1
        for text in next(csv.reader([line], delimiter=delimiter)):
            name, unit = _parts(text)
            if name in names:
                reader.fault(number, place, name, "this column is there twice")
            elif name in columns and not columns[name].words:
                _take_unit(reader, units, (number, place), name, unit, columns[name])
            elif name not in columns and reader.refused is not None:
                reader.fault(number, place, name, _unknown_column(name, columns, reader.refused))
            names.append(name)
            place += len(text) + 1
        known = [name for name in names if name in columns]
        words = tuple(name for name in known if columns[name].words)
        return cls(tuple(names), units, words, tuple(name for name in names if name not in columns))


def _parts(text: str) -> tuple[str, str | None]:
    match = _HEADER.fullmatch(text)
    name, unit = match.groups() if match else (text, None)
    return re.sub(r"[\s-]+", "_", name.strip().casefold()), unit


def _unknown_column(name: str, columns: Mapping[str, Column], refused: Mapping[str, str]) -> str:
    if name in refused:
        return refused[name]
    near = get_close_matches(name[:40], columns, n=1, cutoff=0.6)
    meant = f"did you mean {near[0]}? " if near else ""
    return f"unknown column; {meant}accepted: {', '.join(columns)}"


def _take_unit(
    reader: _Reader,
    units: dict[str, tuple[str, str]],
    place: tuple[int, int],
    name: str,
    unit: str | None,
    column: Column,
) -> None:
    dimensions = column.dimensions
    if not dimensions:
        if unit in (None, "-", "1", ""):
            units[name] = ("", "")
        elif unit == "%" and column.per_cent:
            units[name] = ("%", "")
        else:
            needed = "[-] or [%] is needed" if column.per_cent else "the column has none, write [-]"
            reader.fault(*place, name, f"found the unit {echo(unit or '')}; {needed}")
    elif not unit:
        example = accepted(*dimensions)
        reader.fault(*place, name, f"no unit; write it in brackets, as '{name} [{example.split(',')[0]}]': {example}")
    else:
        try:
            parse(f"1 {unit}", *dimensions)
            units[name] = (unit, next(d for d in dimensions if _is_of(unit, d)))
        except UnitError as error:
            reader.fault(*place, name, str(error).replace("'1 ", "the unit '", 1))


def _is_of(unit: str, dimension: str) -> bool:
    try:
        parse(f"1 {unit}", dimension)
    except UnitError:
        return False
    return True


def _rows(reader: _Reader, lines: list[str], header_line: int, delimiter: str, width: int) -> Iterator[list[Cell]]:
    for number, line in enumerate(lines[header_line:], header_line + 1):
        if not _is_row(line):
            continue
        fields = next(csv.reader([line], delimiter=delimiter))
        if len(fields) == width:
            yield _cells(fields, number)
        else:
            reader.fault(number, None, "", _wrong_width(line, len(fields), width, delimiter))
            if len(reader.problems) > MAX_PROBLEMS:
                return


def _wrong_width(line: str, found: int, width: int, delimiter: str) -> str:
    message = f"found {found} fields between {_NAMES[delimiter]}, the header has {width}"
    other = next((mark for mark in _DELIMITERS if mark != delimiter and mark in line), None)
    if other:
        return f"{message}; the row has {_NAMES[other]}, which the header has not"
    if delimiter == "," and found == 2 * width:
        return f"{message}; with a decimal comma, separate the fields by semicolons, in the header too"
    return message


def _cells(fields: list[str], number: int) -> list[Cell]:
    place, cells = 1, []
    for text in fields:
        cells.append(Cell(text.strip(), number, place + len(text) - len(text.lstrip())))
        place += len(text) + 1
    return cells


def _has_decimal_commas(reader: _Reader, header: _Header, cells: dict[str, list[Cell]]) -> bool:
    """Whether the commas in the numbers are decimal ones; where they may be thousands marks, that is a problem."""
    written = [cell for name in header.units for cell in cells[name]]
    commas = [cell for cell in written if "," in cell.text]
    if not commas or any("." in cell.text for cell in written):
        return False
    if all(re.fullmatch(r"[+-]?[1-9][0-9]{0,2}(,[0-9]{3})+", cell.text) for cell in commas):
        cell = commas[0]
        why = f"found {echo(cell.text)}; the comma may be a decimal or a thousands mark: write a decimal point"
        reader.fault(cell.line, cell.column, "", why)
    return True


def _number(reader: _Reader, name: str, cell: Cell, unit: tuple[str, str], decimal_comma: bool) -> float:
    text = cell.text.replace(",", ".", 1) if decimal_comma else cell.text
    if not text:
        reader.fault(cell.line, cell.column, name, "no value; a number is needed")
        return np.nan
    if not _NUMBER.fullmatch(text):
        reader.fault(cell.line, cell.column, name, _no_number(cell.text))
        return np.nan
    try:
        value = parse(f"{text} {unit[0]}", unit[1]) if unit[1] else float(text) / (100.0 if unit[0] else 1.0)
    except UnitError:
        value = np.inf
    if value != 0 and not SMALLEST <= abs(value) <= LARGEST:
        size = "large" if abs(value) > 1 else "small"
        reader.fault(cell.line, cell.column, name, f"found {echo(cell.text)}; the number is too {size} to compute with")
        return np.nan
    return value


def _no_number(text: str) -> str:
    if re.fullmatch(rf"{NUMBER} *[^0-9,.eE].*", text):
        return f"found {echo(text)}; a bare number is needed, the unit stands in the header"
    if "," in text:
        return f"found {echo(text)}; numbers have a decimal point and no thousands mark, as 1234.5"
    return f"found {echo(text)}; a number is needed"


def _word(reader: _Reader, name: str, cell: Cell, words: tuple[str, ...]) -> str:
    text = cell.text.casefold()
    if text and text not in words:
        reader.fault(cell.line, cell.column, name, f"found {echo(cell.text)}; accepted: {', '.join(words)}, or nothing")
    return text


def _half_digits(texts: list[str]) -> Array:
    parts = [re.split("[eE]", text.lstrip("+-")) for text in texts]
    exponents = np.array([int(part[1]) if len(part) > 1 else 0 for part in parts])
    decimals = np.array([len(part[0].partition(".")[2]) for part in parts]) - exponents
    digits = np.array([len(part[0].replace(".", "").lstrip("0")) for part in parts])
    values = np.abs([float(text) for text in texts])
    with np.errstate(divide="ignore", invalid="ignore"):
        by_digits = 10.0 ** (np.floor(np.log10(values)) - digits.max() + 1)
        step = np.minimum(10.0**-decimals, np.maximum(by_digits, 10.0 ** -float(decimals.max())))
        return np.asarray(0.5 * step / values)
