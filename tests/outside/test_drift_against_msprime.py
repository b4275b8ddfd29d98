"""Drift and a pulse of flow against msprime's discrete-time Wright-Fisher model.

msprime follows two gene copies back through real parents: an independent way to the same
expectations (model: Nelson et al. 2020, from memory). Seeds fixed, judged in standard errors.
"""

import msprime
import numpy as np
import pytest

from rescue_planner.theory import diversity, flow

RUNS = 12_000
LARGE = 3_000
SAMPLE = msprime.SampleSet(2, population="recipient", ploidy=1)  # two copies of unlike animals


def roots(sizes, *, pulse=0.0, seed=1):
    """Yield the populations of the ancestors of two copies just before the pulse.

    `sizes` (T,), oldest first, are the animals of the generations entered since the pulse; copies
    that met yield one ancestor. Parents of k generations ago are picked at time k, after the events
    of that time, so events stand at half generations to leave no doubt. msprime only carries out
    the pulse together with one more generation: that one is so large that meeting in it (1 in
    6,000) is a thirtieth of the standard error.
    """
    t = len(sizes)
    demography = msprime.Demography()
    demography.add_population(name="recipient", initial_size=sizes[-1])
    demography.add_population(name="donor", initial_size=LARGE)
    for ago, size in enumerate([*sizes[::-1][1:], LARGE], start=2):
        demography.add_population_parameters_change(
            time=ago - 0.5, initial_size=size, population="recipient"
        )
    demography.add_mass_migration(time=t + 0.5, source="recipient", dest="donor", proportion=pulse)
    for ancestry in msprime.sim_ancestry(
        samples=[SAMPLE],
        demography=demography,
        ploidy=2,
        model="dtwf",
        end_time=t + 1,
        num_replicates=RUNS,
        random_seed=seed,
    ):
        yield [ancestry.node(root).population for root in ancestry.first().roots]


def mean_and_error(values):
    values = np.asarray(values, dtype=float)
    return values.mean(), values.std(ddof=1) / np.sqrt(values.size)


@pytest.mark.parametrize("sizes", [[10] * 10, [40, 8, 8, 15, 30, 60]])
def test_that_two_copies_stay_apart_as_often_as_diversity_is_kept(sizes):
    mean, error = mean_and_error([len(r) == 2 for r in roots(sizes, seed=7)])
    assert error < 0.01 * mean
    assert abs(mean - diversity.kept(sizes)[-1]) <= 4 * error
    assert abs(mean - np.prod(1 - 1 / np.array(sizes))) > 20 * error  # animals taken for copies


def test_that_a_pulse_and_drift_leave_the_stated_diversity_and_ancestry():
    """H of each pair of ancestors: recipient 0.3, between 0.7, donor 0.6; a pulse of a quarter."""
    h, between, own, m, sizes = 0.3, 0.7, 0.6, 0.25, [12] * 5
    values, donor = [], []
    for found in roots(sizes, pulse=m, seed=11):
        apart = len(found) == 2
        values.append((h, between, own)[sum(found)] if apart else 0.0)
        if apart:  # copies that met stop there, before the pulse
            donor.append(np.mean(found))
    stated = diversity.pooled(h, [between], [[own]], [m]) * diversity.kept(sizes)[-1]
    mean, error = mean_and_error(values)
    assert error < 0.01 * mean
    assert abs(mean - stated) <= 4 * error
    mean, error = mean_and_error(donor)
    assert abs(mean - flow.pulse_schedule_ancestry([m, 0.0])[-1]) <= 4 * error
