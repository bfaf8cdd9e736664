"""What is said of a pipe size that the catalogue does not know."""

from __future__ import annotations

import re

import pytest

from pipeflow.case.size_advice import advice
from pipeflow.line.catalogue import find_size, size_names


@pytest.mark.parametrize("size", ["1/2", "1-1/4", "4", "8", "24"])
def test_a_steel_size_without_its_schedule_lists_those_there_are(size: str) -> None:
    said = advice(f"nps{size}")
    assert said.startswith(f"the schedule is missing: NPS {size} Sch 10, Sch ")
    named = [f"NPS {size} {schedule}" for schedule in re.findall(r"Sch \w+", said)]
    assert sorted(named) == sorted(name for name in size_names() if name.startswith(f"NPS {size} "))


@pytest.mark.parametrize(
    ("written", "start", "end"),
    [
        ("DN100", "steel of DN 100 is NPS 4 Sch 10, Sch STD, Sch 40, ", "; or tube: DIN 11850 series 2 DN100"),
        ("dn 40", "steel of DN 40 is NPS 1-1/2 Sch 10, ", "; or tube: DIN 11850 series 2 DN40"),
        ("DN 600", "steel of DN 600 is NPS 24 Sch 10, ", "Sch 10S"),
        ("4 inch", "steel of 4 in is NPS 4 Sch 10, ", "; or tube: BPE 4"),
        ('4"', "steel of 4 in is NPS 4 Sch 10, ", "; or tube: BPE 4"),
        ('1 1/2"', "steel of 1 1/2 in is NPS 1-1/2 Sch 10, ", "; or tube: BPE 1-1/2"),
        ("1.5 in", "steel of 1.5 in is NPS 1-1/2 Sch 10, ", "; or tube: BPE 1-1/2"),
        ("10 inches", "steel of 10 in is NPS 10 Sch 10, ", "Sch 80S"),
        ("NPS 4 Sch 30", "no such schedule of this size is known: NPS 4 Sch 10, ", "Sch 80S"),
        ("OD 160", "the SDR is missing: OD 160 SDR ", "SDR 7.4"),
        ("OD 160 SDR 12", "no such SDR of this size is known: OD 160 SDR ", "SDR 7.4"),
        ("202.7 mm", "a size is a name, as NPS 8 Sch 40; give an inside diameter as 'diameter'", ""),
    ],
)
def test_what_is_meant_is_named(written: str, start: str, end: str) -> None:
    said = advice(written)
    assert said.startswith(start)
    assert said.endswith(end)
    assert len(said) <= 200
    assert advice(f"  {written.upper()} ") == said


@pytest.mark.parametrize(
    ("written", "meant"),
    [
        ("DN 100 Sch 40", "NPS 4 Sch 40"),
        ('4" sch.40', "NPS 4 Sch 40"),
        ("4 schedule 40S", "NPS 4 Sch 40S"),
        ("NPS 1 1/2 Sch 80", "NPS 1-1/2 Sch 80"),
        ("PE 160 SDR11", "OD 160 SDR 11"),
        ("DN 160 SDR 17", "OD 160 SDR 17"),
    ],
)
def test_a_size_named_otherwise_is_asked_for(written: str, meant: str) -> None:
    assert find_size(meant)
    assert advice(written) == f"did you mean {meant}?"


@pytest.mark.parametrize(
    "written", ["", "4", "NPS", "NPS 7", "DN 101", "7 in", "1/0 in", "BPE 5", "OD 161", "9" * 5000 + " in", "٤ in"]
)
def test_of_anything_else_nothing_is_said(written: str) -> None:
    assert advice(written) == ""
