"""Rules and worked values of handbooks (data/handbook_values.json).

Citations and printed values there are from memory; the `computed` column was worked out from the
formula beside it, rounded to six decimals or ten digits, hence the tolerances.
"""

import json
import re
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose

from rescue_planner.theory import (
    chain,
    diversity,
    flow,
    identity,
    inbreeding,
    selection,
    size,
)

ENTRIES = {
    entry["id"]: entry
    for entry in json.loads(
        (Path(__file__).parent / "data" / "handbook_values.json").read_text(encoding="utf-8")
    )["entries"]
}
TEN = 2e-9  # ten digits, the smallest value 0.0049
SIX_DECIMALS = 5.1e-7


def rows(name):
    """Yield the numbers of each key, in the order written, and the value computed from them."""
    for key, value in ENTRIES[name]["computed"].items():
        yield [float(x) for x in re.findall(r"-?\d+\.?\d*", key.replace("Ne", ""))], value


def test_that_idealised_inbreeding_is_the_handbooks():
    """Wright 1931; Crow & Kimura 1970."""
    for (ne, t), f in rows("F_idealised"):
        assert_allclose(inbreeding.inbreeding_after(ne, t), f, rtol=1e-7)  # 0.00499001 has six


def test_that_a_bottleneck_keeps_the_handbooks_share():
    """Nei, Maruyama & Chakraborty 1975."""
    for (n,), share in rows("het_retained_bottleneck"):
        assert_allclose(size.retained(n), share, rtol=1e-15)


def test_that_founders_hold_an_allele_with_the_handbooks_chance():
    """Allendorf 1986; Sjogren & Wyoni 1994: the exact chain's first step."""
    for (n, p), chance in rows("allele_retained_founders"):
        mass = chain.first_step(p, chain.copies(n))
        assert_allclose(chain.share_kept(mass), chance, rtol=TEN)


def test_that_ninety_percent_needs_the_handbooks_size():
    """Soule et al. 1986; Franklin 1980."""
    for (t,), ne in rows("Ne_for_90pct"):
        assert_allclose(size.size_to_keep(0.9, t), ne, atol=SIX_DECIMALS)


def test_that_sexes_and_families_give_the_handbooks_size():
    """Wright 1931, 1938; Crow & Denniston 1988; Hill 1972."""
    for (males, females), ne in rows("Ne_sex_ratio"):
        assert_allclose(size.from_sexes(males, females), ne, atol=SIX_DECIMALS)
    for (n, variance), ne in rows("Ne_family_variance"):
        assert_allclose(size.from_family_variance(n, variance), ne, atol=SIX_DECIMALS)
    mean, overlapping = ENTRIES["Ne_harmonic"], ENTRIES["Ne_overlapping"]
    assert_allclose(size.harmonic_mean(mean["inputs"]["N"]), mean["computed"], rtol=TEN)
    given = [overlapping["inputs"][key] for key in ("Nc", "L", "Vk")]
    assert_allclose(size.from_overlapping_generations(*given), overlapping["computed"], rtol=1e-15)


def test_that_migrants_give_the_handbooks_fst():
    """Wright 1931, 1951: 1 / (1 + 4 Nm); the exact form tends to it as m falls."""
    for numbers, fst in rows("island"):
        if len(numbers) == 1:
            assert_allclose(flow.fst_equilibrium_approximate(1.0, numbers[0]), fst, rtol=TEN)
            large = 1e6  # then m = Nm / 1e6: the two forms differ by about m
            assert_allclose(flow.fst_equilibrium(large, numbers[0] / large), fst, rtol=1e-4)


@pytest.mark.parametrize("demes", [2, 3, 5, 10])
def test_that_few_islands_give_takahatas_fst(demes):
    """Takahata 1983, Slatkin 1991: 1 / (1 + 4 Nm (d/(d-1))^2) against the total, m = 0.01.

    Their FST compares mean times to a common ancestor, and the chance that two copies have none yet
    (1 - identity, from all copies unlike) summed over time is that mean. The formula leaves out
    terms of order m: met to a few m.
    """
    n, m = 100, 0.01
    stated = {tuple(k): v for k, v in rows("island")}[(1.0, float(demes))]
    backward = np.full((demes, demes), m / (demes - 1))
    np.fill_diagonal(backward, 1 - m)
    j = np.zeros((demes, demes))
    within = between = 0.0
    for _ in range(30 * n * demes):  # 15 times 2N d generations: e^-15 of the sum is left
        within, between = within + 1 - j[0, 0], between + 1 - j[0, 1]
        j = identity.populations_after(j, backward, np.full(demes, n))
    whole = (within + (demes - 1) * between) / demes
    assert_allclose(1 - within / whole, stated, rtol=5 * m)


@pytest.mark.parametrize("name", ["ID_2B_3.14", "ID_2B_6", "ID_2B_12.29"])
def test_that_inbreeding_costs_what_the_handbooks_say(name):
    """Morton, Crow & Muller 1956; Ralls, Ballou & Templeton 1988; O'Grady et al. 2006."""
    diploid = ENTRIES[name]["inputs"]["2B"]
    for (f,), ratio in rows(name):
        assert_allclose(inbreeding.survival_factor(f, diploid), ratio, rtol=TEN)


def test_that_equal_pulses_leave_the_handbooks_share_of_residents():
    entry = ENTRIES["hybrid_index"]
    m = entry["inputs"]["m"]
    for (pulses,), share in rows("hybrid_index"):
        donor = flow.pulse_schedule_ancestry(np.full(int(pulses), m))[-1]
        assert_allclose(1 - donor, share, rtol=1e-13)


def test_that_mixing_two_populations_gives_the_handbooks_diversity():
    """Isolate breaking (Wahlund 1928)."""
    entry = ENTRIES["mixing_het"]
    r, d, m = (entry["inputs"][key] for key in ("pR", "pD", "m"))
    between = r * (1 - d) + d * (1 - r)
    pool = diversity.pooled(2 * r * (1 - r), [between], [[2 * d * (1 - d)]], [m])
    assert_allclose(pool, entry["computed"], rtol=1e-13)


def test_that_the_exact_chance_of_fixation_is_kimuras_to_first_order():
    """Kimura 1962: a diffusion, which leaves out terms of the order of s."""
    for (n, s, p), chance in rows("kimura"):
        copies = chain.copies(n)
        w = [(1 + s) ** 2, 1 + s, 1.0]
        end = chain.absorption(selection.after_selection(chain.frequencies(copies), w))
        exact = end.fixation[round(p * copies)]
        # a harmful allele's small chance multiplies the error by its exponent 4 N s p
        assert_allclose(exact, chance, rtol=abs(s) * max(1.0, 4 * n * abs(s) * (1 - p)))
