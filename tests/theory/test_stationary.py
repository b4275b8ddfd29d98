"""Stationary distributions. Derived; Wright 1931, 1937, from memory."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import chain, selection, stationary
from rescue_planner.theory.fitness_forms import for_allele
from rescue_planner.theory.stationary import Forces

DIGITS = 1e-11  # the check values are printed to 12 digits
ROWS = [
    (25, 0.04, 0.3, 0.1, 0.5, (0.548639195651, 0.0487228721257), (0.536976790588, 0.0489489599186)),
    (
        50,
        0.05,
        0.2,
        -0.05,
        0.5,
        (0.143061160221, 0.00871698509848),
        (0.14263628878, 0.00865304678326),
    ),
    (50, 0.02, 0.5, -0.1, 0, (0.250435952746, 0.017816673816), (0.248957973482, 0.0174781743323)),
]


def settled(n, forces, w):
    """The exact chain's long-run distribution: an eigenvector."""
    copies = 2 * n
    p = selection.after_selection(chain.frequencies(copies), w)
    p = selection.after_mutation(p, forces.mutation_to, forces.mutation_from)
    x = (1 - forces.m) * p + forces.m * forces.donor_p
    matrix = chain.transition_matrix(x, copies)
    equations = np.vstack([matrix.T - np.eye(copies + 1), np.ones(copies + 1)])
    return np.linalg.lstsq(equations, np.append(np.zeros(copies + 1), 1.0), rcond=None)[0]


@pytest.mark.parametrize("row", ROWS)
def test_that_flow_selection_and_drift_settle_here(row):
    n, m, donor, s, h, weak, powered = row
    forces = Forces(n, m, donor)
    assert_allclose(stationary.with_selection(forces, s, h), powered, rtol=DIGITS)
    found = stationary.with_selection(forces, s, h, fitness_to_the_power=False)
    assert_allclose(found, weak, rtol=DIGITS)


@pytest.mark.parametrize(
    ("row", "mean", "variance"),
    [
        (0, 0.525651610563, 0.0514293053573),
        (1, 0.144974949115, 0.00924248471754),
        (2, 0.250806290348, 0.0183828009495),
    ],
)
def test_that_the_diffusion_is_near_the_exact_chain(row, mean, variance):
    n, m, donor, s, h, *_ = ROWS[row]
    mass = settled(n, Forces(n, m, donor), for_allele(s, h))
    assert_allclose([chain.mean(mass), chain.sd(mass) ** 2], [mean, variance], rtol=1e-10)
    found = stationary.with_selection(Forces(n, m, donor), s, h)
    assert_allclose(found.mean, mean, rtol=0.025)
    assert_allclose(found.variance, variance, rtol=0.07)


@pytest.mark.parametrize(
    ("n", "m", "exact", "diffusion"),
    [(10, 0.1, 0.0455531453362, 0.042), (25, 0.04, 0.0433740912095, 0.042)],
)
def test_that_neutral_variance_is_exact_or_beta(n, m, exact, diffusion):
    forces = Forces(n, m, 0.3)
    assert_allclose(stationary.neutral_exact(forces), (0.3, exact), rtol=DIGITS)
    assert_allclose(stationary.neutral(forces), (0.3, diffusion), rtol=1e-13)
    assert_allclose(stationary.with_selection(forces, 0.0, 0.5), (0.3, diffusion), rtol=1e-9)


def test_that_mutation_alone_has_its_closed_form():
    """Derived: u = v = 0.01, Ne 25."""
    forces = Forces(25, 0.0, 0.0, 0.01, 0.01)
    assert_allclose(stationary.neutral_exact(forces), (0.5, 0.0850224459257), rtol=DIGITS)


def test_that_flow_and_mutation_together_are_the_chains():
    forces = Forces(8, 0.1, 0.3, 0.02, 0.005)
    mass = settled(8, forces, [1.0, 1.0, 1.0])
    found = stationary.neutral_exact(forces)
    assert_allclose(found, (chain.mean(mass), chain.sd(mass) ** 2), rtol=1e-10)


def test_that_small_forces_make_the_diffusion_exact():
    forces = Forces(1e6, 1e-6, 0.3, 1e-7, 2e-7)
    assert_allclose(stationary.neutral_exact(forces), stationary.neutral(forces), rtol=1e-5)


def test_that_the_density_has_its_mass_and_moments():
    forces = Forces(25, 0.1, 0.3)
    x = (np.arange(20_000) + 0.5) / 20_000
    density = stationary.neutral_density(x, forces)
    mean, variance = stationary.neutral(forces)
    assert_allclose(density.mean(), 1.0, rtol=1e-6)
    assert_allclose((density * x).mean(), mean, rtol=1e-6)
    assert_allclose((density * (x - mean) ** 2).mean(), variance, rtol=1e-6)


def test_that_the_chain_has_an_end_the_density_has_not():
    """The chance that the allele is absent, derived: never to be read off the density."""
    mass = settled(10, Forces(10, 0.1, 0.3), [1.0, 1.0, 1.0])
    assert_allclose(mass[0], 0.0647369630923, rtol=1e-10)


def test_that_rare_flow_piles_up_at_the_ends():
    """Exponents far below 1: nearly always lost or fixed; the variance tends to p (1 - p)."""
    found = stationary.with_selection(Forces(5, 0.0005, 0.3), 0.0, 0.5)
    assert_allclose(found, stationary.neutral(Forces(5, 0.0005, 0.3)), rtol=1e-8)


def test_that_one_sided_flow_is_refused():
    for donor in (0.0, 1.0):
        with pytest.raises(ValueError, match="both alleles"):
            stationary.neutral(Forces(20, 0.1, donor))


@pytest.mark.parametrize(("s", "h"), [(-1.0, 0.5), (-0.5, 2.0)])
def test_that_a_deadly_genotype_is_refused(s, h):
    with pytest.raises(ValueError, match="above 0 for every genotype"):
        stationary.with_selection(Forces(20, 0.1, 0.3), s, h)


def test_that_cases_broadcast():
    found = stationary.with_selection(Forces([20, 30], 0.1, [[0.2], [0.3], [0.4]]), 0.01, 0.5)
    assert found.mean.shape == (3, 2)
