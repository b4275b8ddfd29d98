"""Many draws in blocks are the same draws one by one."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.projection import draws as module
from rescue_planner.projection.draws import drawn_values
from rescue_planner.projection.expected import expected_course
from rescue_planner.projection.setup import setup


def test_that_blocks_put_every_draw_in_its_place(build, monkeypatch):
    monkeypatch.setattr(module, "BLOCK", 3)
    case = build()
    sizes = np.linspace(4, 30, 8)
    got = drawn_values(case, case.plans[0], {"recipient.effective_size": sizes})
    whole = expected_course(setup(case, case.plans[0], {"recipient.effective_size": sizes}))
    for measure, values in whole.values.items():
        assert_allclose(got[measure], values, rtol=1e-14)
    assert_allclose(got["gene_diversity"][:, 1], 0.42 * (1 - 1 / (2 * sizes)), rtol=1e-14)


@pytest.mark.parametrize("draws", [{}, {"recipient.adults": np.zeros(0)}])
def test_that_no_draws_are_refused(build, draws):
    case = build()
    with pytest.raises(ValueError, match="at least one"):
        drawn_values(case, case.plans[0], draws)


def test_that_unequal_numbers_of_draws_are_refused(build):
    case = build()
    unequal = {"recipient.adults": np.ones(2), "recipient.effective_size": np.ones(3)}
    with pytest.raises(ValueError, match="same number"):
        drawn_values(case, case.plans[0], unequal)
