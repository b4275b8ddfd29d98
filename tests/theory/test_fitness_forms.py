"""Ways to write fitness. Derived; Crow & Kimura 1970, from memory."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import diffusion, fitness_forms, selection


def test_that_no_dominance_gain_counts_from_the_other_homozygote():
    """The same h names opposite things in the two forms (a usual slip)."""
    assert_allclose(fitness_forms.against_other(0.2, 0.0), [1.0, 1.0, 0.8])
    assert_allclose(fitness_forms.for_allele(0.2, 0.0), [1.2, 1.0, 1.0])


@pytest.mark.parametrize(("s", "h"), [(0.1, 0.0), (0.1, 1.0), (0.3, 0.25), (-0.2, 0.5)])
def test_that_the_two_forms_select_alike_once_turned_round(s, h):
    """Derived: s/(1+s), 1 - h."""
    turned = fitness_forms.against_other(*fitness_forms.as_against_other(s, h))
    p = np.linspace(0.0, 1.0, 11)
    assert_allclose(
        selection.after_selection(p, turned),
        selection.after_selection(p, fitness_forms.for_allele(s, h)),
        rtol=1e-14,
    )


def test_that_an_advantage_per_copy_is_half_that_of_two():
    assert_allclose(fitness_forms.per_copy(0.05), fitness_forms.for_allele(0.1, 0.5), rtol=1e-15)
    assert_allclose(
        diffusion.fixation(0.1, 50, 0.04, 0.5), diffusion.fixation_per_copy(0.1, 50, 0.02)
    )


def test_that_multiplied_copies_are_haploid_selection():
    p, x, y = np.linspace(0.0, 1.0, 11), 1.1, 0.7
    diploid = selection.after_selection(p, fitness_forms.multiplicative(x, y))
    assert_allclose(diploid, p * x / (p * x + (1 - p) * y), rtol=1e-14)


def test_that_heterozygote_forms_keep_their_order():
    assert_allclose(fitness_forms.heterozygote_best(0.12, 0.86), [0.88, 1.0, 0.14], rtol=1e-14)


def test_that_draws_broadcast_and_wrong_lengths_are_refused():
    assert fitness_forms.against_other(np.zeros((4, 1)), np.zeros(3)).shape == (4, 3, 3)
    with pytest.raises(ValueError, match="three values"):
        fitness_forms.parts([1.0, 0.9])
