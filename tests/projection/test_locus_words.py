"""What is said of a tracked locus, checked against plain iteration and hand arithmetic."""

from __future__ import annotations

import re

import pytest

from rescue_planner.projection.compare import plan_courses
from rescue_planner.projection.locus_words import (
    balance_words,
    critical_words,
    fastest_words,
    frequency_text,
    locus_sentences,
    plan_words,
    resting_words,
)

STEADY = {"donor": "Mainland", "from_year": 2027, "to_year": 2067}


@pytest.fixture
def located(build):
    """Return a builder of a case with one tracked locus: fitness, frequency, donor's frequency."""

    def make(fitness, now=0.5, donor=0.0, plans=()):
        locus = {
            "name": "Coat",
            "role": "locally adapted",
            "fitness": list(fitness),
            "frequency": now,
            "donor_frequency": {"Mainland": donor, "Far shore": donor},
        }
        return build(loci=[locus], plans=list(plans))

    return make


def course(fitness, m, p, donor=0.0, steps=4000):
    """Mix, then select, again and again: the projection's order, written out."""
    w11, w12, w22 = fitness
    for _ in range(steps):
        p = (1 - m) * p + m * donor
        a, b, c = p * p * w11, 2 * p * (1 - p) * w12, (1 - p) ** 2 * w22
        p = (a + b / 2) / (a + b + c)
    return p


def test_that_directional_selection_has_two_ends_and_one_is_stable(located) -> None:
    case = located((1.0, 0.94, 0.88), now=0.38)
    assert resting_words(case.loci[0]) == (
        "Equilibria of selection alone: 0 (lost): not stable, 1 (fixed): stable. "
        "From 0.38 now it moves to 1."
    )


def test_that_the_better_heterozygote_holds_both_alleles(located) -> None:
    # t / (s + t) = 0.3 / (0.1 + 0.3) (Fisher 1922, textbook form)
    words = resting_words(located((0.9, 1.0, 0.7)).loci[0])
    assert "0.75 (stable)" in words
    assert "From 0.50 now it moves to 0.75." in words
    assert course((0.9, 1.0, 0.7), 0.0, 0.5) == pytest.approx(0.75, abs=1e-9)


def test_that_the_worse_heterozygote_is_an_edge(located) -> None:
    words = resting_words(located((1.0, 0.8, 0.9), now=0.3).loci[0])
    edge = 0.1 / 0.3
    assert f"{edge:.2f} (not stable: the edge between two fates)" in words
    assert "it moves to 0." in words
    assert "it moves to 1." in resting_words(located((1.0, 0.8, 0.9), now=0.35).loci[0])


def test_that_a_neutral_locus_rests_anywhere_and_is_moved_nowhere(located) -> None:
    case = located((1.0, 1.0, 1.0))
    assert "every frequency stays" in resting_words(case.loci[0])
    assert fastest_words(case.loci[0]) == ""
    assert "at no frequency" in critical_words(case, case.loci[0])


def test_that_nobody_lives_where_the_other_allele_is_lethal(located) -> None:
    assert "0 (lost): nobody lives" in resting_words(located((1.0, 1.0, 0.0)).loci[0])


def test_that_the_fastest_frequency_is_the_one_of_the_largest_step(located) -> None:
    fitness = (1.0, 0.8, 0.8)
    steps = {k: course(fitness, 0.0, k / 1000, steps=1) - k / 1000 for k in range(1, 1000)}
    best = max(steps, key=steps.__getitem__)
    words = fastest_words(located(fitness).loci[0])
    found = re.search(r"at ([\d.]+): by \+([\d.]+) a generation", words)
    assert found is not None
    assert float(found[1]) == pytest.approx(best / 1000, abs=0.006)  # printed to two decimals
    assert float(found[2]) == pytest.approx(steps[best], abs=0.0006)  # printed to three


def test_that_the_additive_allele_is_lost_above_the_flow_named_and_kept_below(located) -> None:
    fitness = (1.0, 0.94, 0.88)
    case = located(fitness)
    words = critical_words(case, case.loci[0])
    assert "m = 6.4 %" in words  # 1 - 0.88/0.94 = 0.0638
    assert "Ne·m = 1.02" in words  # 16 * 0.0638
    assert "Bistable" not in words
    assert course(fitness, 0.0648, 1.0) < 1e-3
    assert course(fitness, 0.0628, 1.0) > 0.01


def test_that_the_recessive_local_allele_is_called_bistable(located) -> None:
    fitness = (1.0, 0.8, 0.8)
    case = located(fitness)
    words = critical_words(case, case.loci[0])
    found = re.search(r"Bistable from ([\d.]+) % to ([\d.]+) %", words)
    assert found is not None
    assert float(found[1]) == 0.0  # a rare recessive is never favoured
    highest = float(found[2]) / 100
    assert course(fitness, highest + 0.001, 1.0) < 1e-6  # 0.001: printed to a tenth of a per cent
    assert course(fitness, highest - 0.001, 1.0) > 0.3
    assert course(fitness, highest - 0.001, 0.1) < 1e-6


def test_that_two_fates_are_told_with_the_edge_between_them() -> None:
    from rescue_planner.case.genetics import Locus

    locus = Locus(
        name="Coat", role="locally adapted", fitness=(1.0, 0.8, 0.8), frequency=0.5,
        donor_frequency={},
    )  # fmt: skip
    found = re.fullmatch(
        r"bistable: to ([\d.]+) from above ([\d.]+), else to 0", balance_words(locus, 0.03, 0.0)
    )
    assert found is not None
    high, edge = float(found[1]), float(found[2])
    assert course((1.0, 0.8, 0.8), 0.03, edge + 0.02) == pytest.approx(high, abs=0.006)
    assert course((1.0, 0.8, 0.8), 0.03, edge - 0.02) < 1e-6


@pytest.mark.parametrize("donor", [0.0, 0.2, 0.9])
def test_that_the_balance_is_where_mixing_and_selecting_end(located, donor) -> None:
    fitness, m = (1.0, 0.9, 0.8), 0.05
    words = balance_words(located(fitness, donor=donor).loci[0], m, donor)
    end = course(fitness, m, 0.5, donor)
    assert words == f"balance at {frequency_text(end)}"


def test_that_a_donor_with_the_allele_is_named(located) -> None:
    case = located((1.0, 0.94, 0.88), donor=0.1)
    assert "Mainland and Far shore carry it" in critical_words(case, case.loci[0])


def test_that_each_plan_has_its_own_flow_beside_the_critical_one(located) -> None:
    plans = [
        {"name": "Trickle", "steady": [{**STEADY, "migrants_per_generation": 0.5}]},
        {"name": "Flood", "steady": [{**STEADY, "migrants_per_generation": 6}]},
    ]
    case = located((1.0, 0.94, 0.88), plans=plans)
    words = plan_words(case, case.loci[0], plan_courses(case, [p.name for p in case.plans]))
    assert words[0] == "A No releases: no gene flow."
    # m = (0.25/12.25 + 0.25/8.25) / 2 = 0.0254, then (3/15 + 3/11) / 2 = 0.236
    assert words[1].startswith("B Trickle: m = 2.5 % in every generation, below the critical 6.4 %")
    assert words[2] == (
        "C Flood: m = 23.6 % in every generation, above the critical 6.4 %: lost in the long run."
    )


def test_that_a_pulse_is_not_read_as_a_steady_flow(located) -> None:
    pulse = {"donor": "Mainland", "who": {"females": 6, "males": 4, "age": 2}}
    plans = [{"name": "Pulse", "releases": [{**pulse, "when": {"first_year": 2027}}]}]
    case = located((1.0, 0.94, 0.88), plans=plans)
    words = plan_words(case, case.loci[0], plan_courses(case, ["Pulse"]))[0]
    # m = (6/18 + 4/12) / 2 = 1/3: 0.5 falls to 1/3, and selection of one generation lifts it
    left = course((1.0, 0.94, 0.88), 1 / 3, 0.5, steps=1)
    assert words == (
        "B Pulse: m = 33.3 % in 1 of 10 generations, none from 2031: it leaves "
        f"{left:.2f}, and from there selection moves towards 1."
    )


def test_that_a_neutral_locus_has_no_fastest_frequency_to_tell(located) -> None:
    assert len(locus_sentences(located((1.0, 1.0, 1.0)), 0)) == 2
    assert len(locus_sentences(located((1.0, 0.9, 0.8)), 0)) == 3
