"""Identity recursions. Derived (exact chains agree); Wright 1931, Malecot 1948, from memory."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from rescue_planner.theory import flow, identity, size

DIGITS = 1e-11  # the check values are printed to 12 digits
exact = settings(derandomize=True, deadline=None)


@pytest.mark.parametrize(
    ("males", "females", "rate", "thetas", "fs"),
    [
        (5, 20, 0.969725610684, (0.03125, 0.060546875, 0.143314838409, 0.265375221803),
         (0.116569519043, 0.242440572772)),
        (10, 10, 0.975624609863, (0.025, 0.04875, 0.11662984375, 0.219170061456),
         (0.094559375, 0.199661498233)),
        (2, 10, 0.930593710404, (0.075, 0.13875, 0.30594890625, 0.515613512569),
         (0.254184375, 0.479486609446)),
    ],
)  # fmt: skip
def test_that_two_sexes_give_the_worked_course(males, females, rate, thetas, fs):
    """Derived; Wright 1931, 1938, from memory."""
    ne, theta, f, course = size.from_sexes(males, females), 0.0, 0.0, []
    for _ in range(200):
        theta, f = identity.separate_sexes_after(theta, f, ne)
        course.append((theta, f))
    assert_allclose([course[t - 1][0] for t in (1, 2, 5, 10)], thetas, rtol=DIGITS)
    assert_allclose([course[t - 1][1] for t in (5, 10)], fs, rtol=DIGITS)
    falls = (1 - course[150][0]) / (1 - course[149][0])
    assert_allclose(falls, rate, rtol=1e-9)  # 1 - theta has lost digits by then


@pytest.mark.parametrize(("ne", "m"), [(10, 0.1), (25, 0.04), (200, 0.005), (10, 0.5)])
def test_that_identity_under_flow_settles_at_the_closed_form(ne, m):
    f = 1.0
    for _ in range(20_000 if m < 0.01 else 3000):
        f = identity.with_flow_after(f, ne, m)
    assert_allclose(f, flow.fst_equilibrium(ne, m), rtol=1e-12)


def test_that_identity_without_flow_is_drift():
    f = identity.with_flow_after(0.2, 10.0, 0.0)
    assert_allclose(1 - f, 0.8 * size.retained(10.0), rtol=1e-15)


def test_that_a_recipient_and_two_drifting_donors_give_the_worked_course():
    """Derived: sizes 20, 50, 100, start p = 0, 0.3, 0.8."""
    p = np.array([0.0, 0.3, 0.8])
    j = np.multiply.outer(p, p) + np.multiply.outer(1 - p, 1 - p)
    backward = np.array([[0.85, 0.10, 0.05], [0, 1, 0], [0, 0, 1]])
    course = []
    for _ in range(20):
        j = identity.populations_after(j, backward, [20, 50, 100])
        course.append(1 - j[[0, 1, 2, 0, 0, 1], [0, 1, 2, 1, 2, 2]])
    stated = [
        (0.126945, 0.4158, 0.3184, 0.328, 0.758, 0.62),
        (0.361338077411, 0.399415820958, 0.312079600999, 0.40026458372, 0.64355245681, 0.62),
        (0.433915068312, 0.343520913791, 0.289475353688, 0.444028444855, 0.523862525723, 0.62),
    ]
    assert_allclose([course[t - 1] for t in (1, 5, 20)], stated, rtol=DIGITS)


def test_that_tiny_populations_agree_with_the_exact_joint_chain():
    """Derived: sizes 3 and 4; an exact chain over both allele counts agrees to 1e-15."""
    p = np.array([0.0, 0.5])
    j = np.multiply.outer(p, p) + np.multiply.outer(1 - p, 1 - p)
    course = []
    for _ in range(5):
        j = identity.populations_after(j, [[0.7, 0.3], [0.0, 1.0]], [3, 4])
        course.append(1 - j[[0, 1, 0], [0, 1, 1]])
    stated = [
        (0.2125, 0.4375, 0.5),
        (0.294583333333, 0.3828125, 0.48125),
        (0.295568269977, 0.256454467773, 0.379611230469),
    ]
    assert_allclose([course[t - 1] for t in (1, 2, 5)], stated, rtol=DIGITS)


@exact
@given(f=st.floats(0, 1), ne=st.floats(0.5, 1e4), m=st.floats(0, 1))
def test_that_identity_stays_a_probability(f, ne, m):
    assert 0.0 <= identity.with_flow_after(f, ne, m) <= 1.0 + 1e-15
