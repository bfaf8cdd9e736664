"""Four readings leave AICc for one parameter alone; that is no choice of a model."""

import numpy as np
import pytest

from pipeflow.rheology.fitting import fit_curve

RATES = np.array([10.0, 50.0, 200.0, 600.0])


def test_four_readings_of_a_thinning_fluid_select_no_newtonian_one():
    found = fit_curve(RATES, 7.5 * RATES**0.26, resolution=np.full(4, 0.05))
    assert found.selected is None
    assert "too few to compare" in found.why
    assert next(fit for fit in found.models if fit.model == "newtonian").aicc is not None


def test_four_readings_of_a_newtonian_fluid_do():
    found = fit_curve(RATES, 0.02 * RATES * np.array([1.01, 0.99, 1.01, 0.99]), resolution=np.full(4, 0.0005))
    assert found.selected == "newtonian"
    viscosity = next(fit for fit in found.models if fit.model == "newtonian").parameters["viscosity"]
    assert viscosity == pytest.approx(0.02, rel=0.01)
