from __future__ import annotations

from pathlib import Path

import pytest

from pipeflow.case.loading import load_case
from pipeflow.study.design_file import design_file

CASES = Path(__file__).parents[2] / "cases"


@pytest.fixture(scope="session")
def case_of():
    return lambda name: load_case(CASES / f"{name}.yaml")


@pytest.fixture(scope="session")
def thickener(case_of):
    """The largest demo case, worked out."""
    return design_file(case_of("thickener-underflow"))


@pytest.fixture(scope="session")
def readings(case_of):
    """The demo case of three sheets of readings, worked out."""
    return design_file(case_of("thickener-underflow-readings"))


@pytest.fixture(scope="session")
def filtrate(case_of):
    """The demo case of one Newtonian liquid, worked out."""
    return design_file(case_of("thin-filtrate"))
