"""Sensitivities and elasticities of published matrices (sources and licences: data/NOTICE).

Two outside judges: values kept beside the matrices, and the library matpopmod, run here.
"""

import csv
import json
from pathlib import Path

import matpopmod
import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import elasticity, life_table

DATA = Path(__file__).parent / "data"
KNOWN = json.loads((DATA / "elasticities.json").read_text(encoding="utf-8"))
CLOSE = {"rtol": 1e-8, "atol": 1e-12}  # eigenvectors of nearly alike stages


def load(name):
    """Return births and the whole matrix, stages in the order of its file."""
    stages = json.loads((DATA / f"matrix_{name}.json").read_text(encoding="utf-8"))["stages"]
    births, whole = np.zeros((2, len(stages), len(stages)))
    with (DATA / f"matrix_{name}.csv").open(encoding="utf-8", newline="") as file:
        for row in csv.DictReader(file):
            at = stages.index(row["to_stage"]), stages.index(row["from_stage"])
            births[at], whole[at] = float(row["of_which_reproduction"]), float(row["rate"])
    return births, whole


@pytest.mark.parametrize("name", KNOWN)
def test_that_elasticities_are_the_reference(name):
    births, whole = load(name)
    found = elasticity.elasticities(whole)
    assert_allclose(found, KNOWN[name]["elasticity"], **CLOSE)
    share = np.divide(births, whole, out=np.zeros_like(whole), where=whole > 0)
    assert_allclose(np.sum(found * share), KNOWN[name]["elasticity_fecundity"], **CLOSE)


@pytest.mark.parametrize("name", KNOWN)
def test_that_sensitivities_and_elasticities_are_matpopmods(name):
    births, whole = load(name)
    judge = matpopmod.MPM(A=whole, F=births)
    assert_allclose(elasticity.sensitivities(whole), judge.sensitivities, **CLOSE)
    assert_allclose(elasticity.elasticities(whole), judge.elasticities, **CLOSE)


@pytest.mark.parametrize("name", KNOWN)
def test_that_the_cost_of_removal_averages_to_one(name):
    _, whole = load(name)
    judge = matpopmod.MPM(A=whole)
    stated = judge.v / (judge.v @ judge.w)
    assert_allclose(elasticity.removal_cost(whole), stated, **CLOSE)
    assert_allclose(elasticity.removal_cost(whole) @ life_table.stable_ages(whole), 1, rtol=1e-12)


def test_that_long_lived_animals_hang_on_survival():
    """Brault & Caswell 1993, Crouse, Crowder & Caswell 1987: survival drives growth, not births."""
    for name in ("killer_whale", "loggerhead", "desert_tortoise"):
        births, whole = load(name)
        share = np.divide(births, whole, out=np.zeros_like(whole), where=whole > 0)
        assert np.sum(elasticity.elasticities(whole) * share) < 0.06
