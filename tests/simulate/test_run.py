"""The driver: the same bytes whatever the workers, progress, cancel, refusals; summaries."""

from __future__ import annotations

import threading
import time
from dataclasses import replace

import numpy as np
import pytest
from lives import life, world
from numpy.testing import assert_allclose, assert_array_equal

from rescue_planner.simulate import run as driver
from rescue_planner.simulate.results import Results
from rescue_planner.simulate.run import estimate, run
from rescue_planner.simulate.world import DieOff, Donor, Locus, NotPossible, Release, Rule, Steady


def busy(**changes):
    """A world in which everything is switched on."""
    aged = life(
        first_breeding_age=(2, 3),
        last_age=9,
        survival=(0.5, 0.75, 0.85),
        survival_sd=(0.08, 0.05, 0.03),
        young_sd=0.3,
        mean_young=2.4,
        share_of_females_breeding=0.8,
        form="harems",
        share_of_males_breeding=0.5,
        unequal_success=0.8,
        die_offs=(DieOff(0.2, (0.8, 0.5, 0.5), 0.5),),
    )
    given = {
        "years": 30,
        "life": aged,
        "adults": 30,
        "adult_females": 16,
        "capacity": np.full(30, 40.0),
        "diversity": np.array([[0.42, 0.65], [0.65, 0.66]]),
        "reference": 0.68,
        "donors": (Donor(80, 40, aged, 90.0),),
        "ancestry": np.array([0.05]),
        "loci": (Locus((1.0, 0.98, 0.9), (0.8, 0.1), 0.001, 0.001),),
        "markers": 90,
        "chromosomes": 7,
        "morgans": 0.8,
        "lethal_first_year": 6.0,
        "lethal_young": 2.0,
        "releases": (Release(2, 0, 2, 1, 1, 0.7, 0.8), Release(20, 0, 1, 1, 2, 0.7, 0.8, 3)),
        "steady": (Steady(0, 1.0, 5, 25),),
        "rules": (
            Rule("donor_ancestry", "stop", above=0.4, survey_sd=0.05, surveys=2),
            Rule(
                "inbreeding",
                "release",
                above=0.35,
                survey_sd=0.03,
                at_most=2,
                release=Release(None, 0, 1, 1, 2),
            ),
        ),
    }
    return world(**{**given, **changes})


def same(a, b):
    return a.values.tobytes() == b.values.tobytes() and a.acted.tobytes() == b.acted.tobytes()


def test_that_workers_and_chunks_leave_no_trace_in_the_bytes():
    first = run(busy(), 40, 1)
    for workers, chunk in ((1, 1), (2, 16), (4, 3), (2, 50)):
        assert same(first, run(busy(), 40, 1, workers, chunk=chunk))
    assert not same(first, run(busy(), 40, 2))


def test_that_more_replicates_leave_the_first_ones_as_they_were():
    assert_array_equal(run(busy(), 50, 1).values[:20], run(busy(), 20, 1).values)


def test_that_room_for_more_animals_leaves_no_trace(monkeypatch):
    first = run(busy(), 12, 3)
    monkeypatch.setattr(driver, "first_slots", lambda plan: 45)
    assert same(first, run(busy(), 12, 3))
    monkeypatch.setattr(driver, "first_slots", lambda plan: 900)
    assert same(first, run(busy(), 12, 3))


def test_that_an_edit_in_year_20_leaves_the_years_before_as_they_were():
    before = busy()
    edited = replace(before, releases=(before.releases[0], Release(20, 0, 5, 5, 2)))
    one, two = run(before, 20, 4).values, run(edited, 20, 4).values
    assert one[:, :21].tobytes() == two[:, :21].tobytes()
    assert one[:, 21:].tobytes() != two[:, 21:].tobytes()


def test_that_common_streams_make_differences_between_plans_more_certain():
    plan = busy(rules=(), steady=(), releases=())
    other = replace(plan, releases=(Release(2, 0, 3, 3, 2),))
    a, b, c = (run(w, 300, s) for w, s in ((plan, 5), (other, 5), (other, 6)))
    adults = [r.of("adults")[:, 10] for r in (a, b, c)]
    assert (adults[1] - adults[0]).var() < 0.8 * (adults[2] - adults[0]).var()


def test_that_progress_grows_to_the_end():
    seen = []
    run(busy(), 40, 1, 2, lambda done, total: seen.append((done, total)), chunk=4)
    assert seen[-1] == (40, 40)
    assert seen == sorted(seen)


class Enough(Exception):
    """What the checkpoint of a test raises."""


def test_that_a_run_is_cancelled_in_the_middle_of_a_replicate():
    endless = world(
        years=2000,
        life=life(survival=(0.5, 0.8, 0.8), mean_young=2.0),
        adults=300,
        adult_females=150,
        capacity=np.full(2000, 300.0),
        markers=200,
    )
    run(replace(endless, years=1, capacity=np.full(1, 300.0)), 1, 1)
    calls = []

    def stop(done, total):
        calls.append(done)
        raise Enough

    with pytest.raises(Enough):
        run(endless, 4, 1, 2, stop)
    # Each replicate takes seconds; none had ended, and no thread is left at work.
    assert calls == [0]
    assert not [t for t in threading.enumerate() if t.name.startswith("animals")]
    assert time.monotonic() > 0


@pytest.mark.parametrize(
    ("replicates", "word"), [(0, "0 replicates"), (10**9, "1,000,000,000 replicates")]
)
def test_that_a_senseless_number_of_replicates_is_refused_in_words(replicates, word):
    with pytest.raises(NotPossible, match=word):
        run(busy(), replicates, 1)


def test_that_results_beyond_memory_are_refused_before_the_run():
    start = world(years=2000, life=life(), adults=4, adult_females=2, markers=1)
    with pytest.raises(NotPossible, match="GiB"):
        run(start, 1_000_000, 1)


def test_that_a_population_that_outgrows_memory_is_refused_in_words(monkeypatch):
    monkeypatch.setattr(driver, "MOST_BYTES", 4 * 500**2)
    boom = world(years=60, life=life(mean_young=8.0), adults=20, adult_females=10, markers=1)
    with pytest.raises(NotPossible, match="carrying capacity"):
        run(boom, 1, 1)


@pytest.mark.parametrize("years", [0, 5000])
def test_that_a_senseless_horizon_is_refused_in_words(years):
    with pytest.raises(NotPossible, match="years"):
        world(years=years)


def test_that_an_infeasible_yearly_sd_is_refused_not_clipped():
    with pytest.raises(NotPossible, match=r"SD of 0\.45"):
        run(world(life=life(survival=(0.5, 0.8, 0.8), survival_sd=(0, 0, 0.45))), 1, 1)


def test_that_a_rule_on_what_no_census_holds_is_refused():
    with pytest.raises(NotPossible, match="yearly_growth"):
        run(world(rules=(Rule("yearly_growth", "stop", above=1.0),)), 1, 1)


def test_that_no_males_and_a_start_above_the_capacity_have_answers():
    r = run(world(adults=10, adult_females=10, markers=1), 3, 1)
    assert np.all(r.of("born") == 0)
    assert np.all(r.of("persists") == 0)
    r = run(world(capacity=np.full(20, 5.0), markers=1), 3, 1)
    assert np.all(r.of("adults")[:, 0] == 20)
    assert np.all(r.of("adults")[:, 1:] <= 5)


def test_that_memory_is_estimated_by_workers_and_results_by_replicates():
    one, two = estimate(busy(), 100, 1), estimate(busy(), 200, 2)
    assert two.rooms == 2 * one.rooms
    assert two.results == 2 * one.results
    assert estimate(busy(), 7).results == sum(
        a.nbytes for a in (run(busy(), 7, 1).values, run(busy(), 7, 1).acted)
    )


def table(columns, values):
    names = ("adults", "gene_diversity", "kinship", "persists", "allele_frequency:0")
    whole = np.zeros((values.shape[0], values.shape[1], len(names)))
    for name, part in zip(columns, np.moveaxis(values, 2, 0), strict=True):
        whole[:, :, names.index(name)] = part
    return Results(names, whole, np.zeros((values.shape[0], 0, values.shape[1] - 1), dtype=int))


def test_that_genetic_means_are_over_runs_that_still_have_adults():
    x = np.array([[0.4, 0.3], [0.2, np.nan], [0.6, 0.5]])
    mean = table(["gene_diversity"], x[:, :, None]).mean("gene_diversity")
    assert_allclose(mean.value, [0.4, 0.4], rtol=1e-15)
    assert list(mean.runs) == [3, 2]
    half = 1.959963984540054 * np.std(x[:, 0], ddof=1) / np.sqrt(3)
    assert_allclose(mean.high[0] - mean.value[0], half, rtol=1e-12)


def test_that_shares_carry_wilsons_interval_and_zero_prints_a_bound():
    # Wilson 37 of 500 and 0 of 100, published handbook values.
    adults = np.full((500, 2), 20.0)
    adults[:37, 1] = 3.0
    low = table(["adults"], adults[:, :, None]).falls_below(10)
    assert_allclose([low.low[1], low.high[1]], [0.0541612, 0.100335], rtol=1e-5)
    none = table(["adults"], adults[:100, :1, None]).falls_below(10)
    assert none.value[0] == 0.0
    assert_allclose(none.high[0], 0.0369935, rtol=1e-5)


def test_that_quantiles_are_order_statistics_with_their_interval():
    x = np.random.default_rng(1).permutation(np.arange(1.0, 102.0))[:, None, None]
    q = table(["adults"], x).quantile("adults", 0.5)
    assert (q.value[0], q.runs[0]) == (51.0, 101)
    assert q.low[0] == pytest.approx(51 - 10, abs=1.1)  # 1.96 sqrt(101)/2 ranks
    assert q.high[0] == pytest.approx(51 + 10, abs=1.1)


def test_that_the_realised_size_is_read_from_the_rise_of_kinship():
    f = 1 - 0.6 * (1 - 1 / 40.0) ** np.arange(6)
    values = np.stack([f, f])[:, :, None]
    ne = table(["kinship"], values).realised_effective_size(1.0)
    assert np.isnan(ne[0])
    assert_allclose(ne[1:], 20.0, rtol=1e-9)


def test_that_alleles_kept_and_fixed_are_shares_of_runs_with_adults():
    p = np.array([0.0, 1.0, 0.5, np.nan])[:, None, None]
    r = table(["allele_frequency:0"], p)
    assert_allclose([r.allele_kept(0).value[0], r.allele_fixed(0).value[0]], [2 / 3, 1 / 3])
