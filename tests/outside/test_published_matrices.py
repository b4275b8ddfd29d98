"""Life-table quantities against published matrices (sources and licences: data/NOTICE).

Two outside judges: reference values made with 50-digit arithmetic and kept beside each matrix, and
the library matpopmod, run here.
"""

import csv
import json
from pathlib import Path

import matpopmod
import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import life_table

DATA = Path(__file__).parent / "data"
MATRICES = [
    "killer_whale",  # Brault & Caswell 1993
    "loggerhead",  # Crouse, Crowder & Caswell 1987, typed from memory
    "desert_tortoise",  # Doak, Kareiva & Klepetka 1994, typed from memory
    "passerine_before_breeding",  # teaching model of matpopmod
    "passerine_after_breeding",
]


def load(name):
    """Return births, survival and what is known about a matrix."""
    known = json.loads((DATA / f"matrix_{name}.json").read_text(encoding="utf-8"))
    stages = known["stages"]
    births, survival = np.zeros((2, len(stages), len(stages)))
    with (DATA / f"matrix_{name}.csv").open(encoding="utf-8", newline="") as file:
        for row in csv.DictReader(file):
            at = stages.index(row["to_stage"]), stages.index(row["from_stage"])
            births[at] = float(row["of_which_reproduction"])
            survival[at] = float(row["rate"]) - births[at]
    return births, survival, known


@pytest.mark.parametrize("name", MATRICES)
def test_that_growth_and_its_vectors_are_the_reference(name):
    births, survival, known = load(name)
    matrix, reference = births + survival, known["reference"]
    tolerance = reference["tolerance"]
    growth = life_table.dominant_eigenvalue(matrix)
    assert_allclose(growth, float(reference["lambda_"]), rtol=tolerance["lambda_"])
    stable, values = life_table.stable_ages(matrix), life_table.reproductive_values(matrix)
    assert_allclose(stable, reference["stable_stage"], rtol=tolerance["vectors"])
    stated = reference["reproductive_value_first_1"]
    assert_allclose(values, stated, rtol=tolerance["vectors"], atol=1e-12)


@pytest.mark.parametrize("name", MATRICES)
def test_that_the_published_growth_is_met_to_its_printed_digits(name):
    births, survival, known = load(name)
    published = known["published"]["lambda"]
    digits = min(4, len(str(published).split(".")[1]))
    assert round(float(life_table.dominant_eigenvalue(births + survival)), digits) == round(
        published, digits
    )


@pytest.mark.parametrize("name", MATRICES)
def test_that_net_reproduction_and_generation_lengths_are_the_reference(name):
    births, survival, known = load(name)
    reference = known["reference"]
    lengths = life_table.generation_lengths(births, survival)
    got = (life_table.net_reproduction(births, survival), *lengths)
    stated = (
        reference["R0"],
        reference["generation_time_mu1_cohort_mean_age"],
        reference["generation_time_Ta_mean_age_of_parents_in_stable_pop"],
        reference["generation_time_logR0_over_loglambda"],
    )
    assert_allclose(got, stated, rtol=reference["tolerance"]["others"])


def test_that_the_killer_whale_has_three_generation_lengths():
    """23.7, 27.9 and 33.2 years: which one is meant has to be said."""
    births, survival, _ = load("killer_whale")
    lengths = life_table.generation_lengths(births, survival)
    assert [round(float(x), 1) for x in lengths] == [33.2, 23.7, 27.9]


def test_that_both_census_points_grow_alike():
    growths = [
        life_table.dominant_eigenvalue(sum(load(f"passerine_{when}_breeding")[:2]))
        for when in ("before", "after")
    ]
    assert_allclose(growths[0], growths[1], rtol=1e-13)


@pytest.mark.parametrize(
    "table",
    [
        (0.7, 0.5, 0.8, 0.8, 2, 10),
        (1.9, 0.3, 0.55, 0.7, 1, 6),
        (0.25, 0.8, 0.9, 0.95, 5, 30),
        (4.0, 0.1, 0.3, 0.4, 1, 3),
    ],
)
def test_that_an_age_table_is_what_matpopmod_makes_of_its_matrix(table):
    matrix = life_table.female_matrix(*table)
    births, survival = life_table.births_and_survival(matrix)
    judge = matpopmod.MPM(A=matrix, F=births)
    assert_allclose(life_table.growth(*table), judge.lmbd, rtol=1e-11)
    assert_allclose(life_table.mean_age_of_mothers(*table), judge.T_a, rtol=1e-9)
    assert_allclose(life_table.net_reproduction(births, survival), judge.R0, rtol=1e-11)
    lengths = life_table.generation_lengths(births, survival)
    assert_allclose(lengths.cohort, judge.mu1, rtol=1e-9)
    assert_allclose(life_table.stable_ages(matrix), judge.w, rtol=1e-9)
    values = life_table.reproductive_values(matrix)
    assert_allclose(values, judge.v / judge.v[0], rtol=1e-9)
