"""``docs/catalogue.md`` is held to the tables; run this file as a program to write its generated parts anew."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from pipeflow.line.catalogue import MATERIALS, series_names, sizes_of
from pipeflow.line.fittings import METHODS, fittings

PAGE = Path(__file__).parents[2] / "docs" / "catalogue.md"


def series_table() -> str:
    rows = []
    for name in series_names():
        sizes = sizes_of(name)
        smallest, largest = sizes[0].name, sizes[-1].name
        rows.append(f"| {sizes[0].standard} | `{name}` | {len(sizes)} | `{smallest}` to `{largest}` |")
    return "\n".join(["| standard | series | sizes | names |", "|---|---|---|---|", *rows])


def notes_table() -> str:
    rows = {
        f"| `{fitting.key}` | {fitting.description} | {fitting.note(method)} |"
        for fitting in fittings().values()
        for method in METHODS
        if fitting.note(method)
    }
    return "\n".join(["| fitting | what it is | note |", "|---|---|---|", *sorted(rows)])


GENERATED = {"series": series_table, "notes": notes_table}


@pytest.mark.parametrize("mark", GENERATED)
def test_a_table_of_the_page_is_that_of_the_program(mark):
    part = PAGE.read_text(encoding="utf-8").split(f"<!-- {mark} -->\n")[1].split("<!-- end -->")[0].strip()
    assert part == GENERATED[mark]()


def test_the_page_names_every_method_and_roughness():
    page = PAGE.read_text(encoding="utf-8")
    assert "Check them against the standard before ordering" in page
    for method in METHODS:
        assert f"`{method}`" in page
    for material in MATERIALS.values():
        assert f"{material.name.removesuffix(' tube')}" in page
        assert f"{material.roughness * 1e3:g} mm" in page


def write() -> None:
    page = PAGE.read_text(encoding="utf-8")
    for mark, table in GENERATED.items():
        page = re.sub(f"(<!-- {mark} -->\n).*?(<!-- end -->)", rf"\g<1>\n{table()}\n\n\g<2>", page, flags=re.S)
    PAGE.write_text(page, encoding="utf-8")


if __name__ == "__main__":
    write()
