"""Growth and generation length in words, against a matrix written out by hand."""

from __future__ import annotations

import re

import numpy as np
import pytest

from rescue_planner.projection.life_words import generation_words, growth_words
from tests.projection.conftest import LIFE


@pytest.fixture
def matrix():
    """The female matrix of LIFE: ages 1 to 10, first breeding at 2."""
    made = np.zeros((10, 10))
    made[0, 1:] = 0.8 * 2.4 * 0.5 * 0.5  # breeding * young * females * first year
    for age in range(1, 10):
        made[age, age - 1] = 0.75 if age < 2 else 0.85
    return made


def test_that_growth_is_the_leading_eigenvalue(build, matrix) -> None:
    rate = max(np.linalg.eigvals(matrix).real)
    words = growth_words(build(life_cycle=LIFE))
    assert f"{rate:.3f} times a year (+{100 * (rate - 1):.1f} % a year)" in words
    alive = np.cumprod([1.0, 0.75, *[0.85] * 8])
    assert f"R0 = {float(matrix[0] @ alive):.2f} daughters" in words


def test_that_each_generation_length_is_named_with_its_definition(build, matrix) -> None:
    rate = float(max(np.linalg.eigvals(matrix).real))
    ages = np.arange(1, 11)
    born = matrix[0] * np.cumprod([1.0, 0.75, *[0.85] * 8])
    cohort = float(ages @ born / born.sum())
    weights = born * rate ** (-ages.astype(float))
    stable = float(ages @ weights / weights.sum())
    by_r0 = float(np.log(born.sum()) / np.log(rate))
    words = generation_words(build(life_cycle=LIFE))
    found = re.search(r"cycle: ([\d.]+) years .*?, ([\d.]+) \(.*?, ([\d.]+) \(", words)
    assert found is not None
    assert [float(x) for x in found.groups()] == [round(x, 1) for x in (stable, cohort, by_r0)]
    assert words.endswith(f"T entered: 4, {abs(400 / stable - 100):.0f} % "
                          f"{'longer' if stable < 4 else 'shorter'} than the first.")  # fmt: skip


def test_that_a_generation_length_far_off_is_questioned(build) -> None:
    case = build(life_cycle=LIFE, time={"generation_years": 8})
    assert generation_words(case).endswith("than the first. Which is right?")


def test_that_inbreeding_lowers_growth_where_survival_is_that_of_outbred_young(build) -> None:
    load = {"lethal_equivalents_diploid": {"first_year": 6.0}}
    case = build(
        life_cycle={**LIFE, "survival_measured": "unrelated_parents"}, inbreeding_cost=load
    )
    words = growth_words(case)
    today = re.search(r"today’s inbreeding: ([\d.]+) times", words)
    assert today is not None
    assert float(today[1]) < float(words.split(": ")[1].split()[0])
    assert "today’s inbreeding" not in growth_words(build(life_cycle=LIFE, inbreeding_cost=load))


def test_that_nothing_is_said_without_a_life_cycle(build) -> None:
    assert growth_words(build()) == generation_words(build()) == ""


def test_that_births_of_none_are_told(build) -> None:
    barren = build(life_cycle={**LIFE, "share_of_females_breeding": 0.0})
    assert "no daughter would survive" in growth_words(barren)
    assert generation_words(barren) == ""
