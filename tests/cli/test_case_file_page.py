"""``docs/case-file.md`` says what the program does: its tables, keys and examples are held to the code.

Run this file as a program to write the generated tables anew.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from pathlib import Path

import pytest
from pydantic import BaseModel

from pipeflow.case.fields import fitting_keys
from pipeflow.case.loading import MAX_BYTES, load_text
from pipeflow.case.nodes import MAX_DEPTH
from pipeflow.case.places import PARTS_AT
from pipeflow.case.rheology_part import BESIDE_PARAMETERS, RHEOLOGY_PARTS
from pipeflow.case.schema import MAX_ELEMENTS, MAX_SCENARIOS, METHOD_KEYS
from pipeflow.line.catalogue import MATERIALS, size_names, table
from pipeflow.units import UNITS

HERE = Path(__file__).parent
PAGE = HERE.parents[1] / "docs" / "case-file.md"


def text() -> str:
    return PAGE.read_text(encoding="utf-8")


def quoted(words: Iterable[str]) -> str:
    return ", ".join(f"`{word}`" for word in words)


def methods_table() -> str:
    rows = [f"| `{kind}` | {quoted(keys)} |" for kind, keys in METHOD_KEYS.items()]
    return "\n".join(["| key | accepted |", "|---|---|", *rows])


def units_table() -> str:
    rows = [f"| {dimension} | {', '.join(f'`{unit}`' for unit in units)} |" for dimension, units in UNITS.items()]
    return "\n".join(["| dimension | accepted units |", "|---|---|", *rows])


def fittings_table() -> str:
    rows = [
        f"| `{row['key']}` | {row['description']} | {'yes' if row['darby_Km'] else ''} | "
        f"{'yes' if row['hooper_K1'] else ''} |"
        for row in table("fittings.csv")
    ]
    return "\n".join(["| key | fitting | darby-3k | hooper-2k |", "|---|---|---|---|", *rows])


def sizes_table() -> str:
    """List the sizes by series, a line for the names that differ in one place only."""
    series: dict[str, list[str]] = {}
    for name in size_names():
        match = re.fullmatch(r"(NPS|OD|BPE|DIN 11850 series \d) (\S+)( Sch \S+| SDR \S+|)", name)
        assert match is not None, name
        pattern, size = f"{match[1]} …{match[3]}", match[2]
        series.setdefault(pattern, []).append(size)
    rows = [f"| `{pattern}` | {', '.join(sizes)} |" for pattern, sizes in series.items()]
    return "\n".join(["| series | sizes for the … |", "|---|---|", *rows])


GENERATED = {"methods": methods_table, "units": units_table, "fittings": fittings_table, "sizes": sizes_table}


def between(page: str, mark: str) -> str:
    return page.split(f"<!-- {mark} -->\n")[1].split("<!-- end -->")[0].strip()


@pytest.mark.parametrize("mark", GENERATED)
def test_a_table_of_the_page_is_that_of_the_program(mark: str) -> None:
    assert between(text(), mark) == GENERATED[mark]()


def test_the_tables_leave_nothing_out() -> None:
    page = text()
    assert all(f"`{key}`" in page for key in fitting_keys())
    listed = sum(len(row.split("|")[2].split(",")) for row in between(page, "sizes").splitlines()[2:])
    assert listed == len(size_names())


@pytest.mark.parametrize("part", dict.fromkeys(PARTS_AT.values()), ids=lambda part: part.__name__)
def test_every_key_is_on_the_page(part: type[BaseModel]) -> None:
    page = text()
    missing = [key for key in part.model_fields if not re.search(rf"[`.]{key}`", page)]
    assert missing == []


def test_every_choice_is_on_the_page() -> None:
    page = text()
    rheology = page.split("### Rheology")[1].split("###")[0]
    for model, part in RHEOLOGY_PARTS.items():
        row = next(line for line in rheology.splitlines() if line.startswith(f"| `{model}`"))
        parameters = [key for key in part.model_fields if key not in BESIDE_PARAMETERS]
        assert re.findall(r"`(\w+)`", row.split("|")[2]) == parameters
    for material in MATERIALS.values():
        assert f"{material.name} {material.roughness * 1e3:g} mm" in page


def test_the_bounds_of_the_page_are_those_of_the_program() -> None:
    page = text()
    assert f"at most {MAX_BYTES // 1024} kB" in page
    assert f"nested at most {MAX_DEPTH} deep" in page
    assert f"1 to {MAX_ELEMENTS} " in page
    assert f"At most {MAX_SCENARIOS} scenarios" in page


def test_the_example_is_a_case() -> None:
    example = re.search(r"```yaml\n(.*?)```", text(), re.DOTALL)
    assert example is not None
    case = load_text(example.group(1), str(HERE / "case.yaml"))
    assert list(case.scenarios) == ["thick", "rough"]


def test_the_pieces_shown_are_parts_of_cases() -> None:
    first, *pieces = re.findall(r"```yaml\n(.*?)```", text(), re.DOTALL)
    assert len(pieces) == 4
    for piece in pieces:
        given = re.findall(r"(?m)^(\w+):", piece)
        rest = [block for block in re.split(r"(?m)^(?=\w)", first) if block.split(":")[0] not in [*given, "scenarios"]]
        case = load_text(piece + "".join(rest), str(HERE / "case.yaml"))
        assert case.title == "Thickener underflow to filter feed tank"


def test_the_change_of_size_shown_is_one() -> None:
    example = re.search(r"```yaml\n(.*?)```", text(), re.DOTALL)
    change = re.search(r"`(\{\"route.*?\})`", text(), re.DOTALL)
    assert example is not None
    assert change is not None
    case = load_text(f"{example.group(1)}  wide: {change.group(1)}\n", str(HERE / "case.yaml"))
    assert case.scenarios["wide"].sizes["discharge line"] == "NPS 10 Sch 40"


def record() -> None:
    """Write the generated tables into the page."""
    page = text()
    for mark, make in GENERATED.items():
        head, rest = page.split(f"<!-- {mark} -->\n")
        page = f"{head}<!-- {mark} -->\n{make()}\n<!-- end -->{rest.split('<!-- end -->', 1)[1]}"
    PAGE.write_text(page, encoding="utf-8")


if __name__ == "__main__":
    record()
