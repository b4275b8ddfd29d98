"""The compiled exact chain against a dense one written with scipy, flow new every generation."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from rounds import Pair, Row, seconds
from scipy.stats import binom

from rescue_planner.kernels import exact_chain

GENERATIONS = 100
FITNESS = np.array([1.0, 0.98, 0.9])
FLOW = np.random.default_rng(11).uniform(0.0, 0.05, GENERATIONS)
START = 0.8123


def following(p, m):
    mixed = (1 - m) * p + m * 0.1
    mean = mixed**2 * FITNESS[0] + 2 * mixed * (1 - mixed) * FITNESS[1]
    mean = mean + (1 - mixed) ** 2 * FITNESS[2]
    return mixed * (mixed * FITNESS[0] + (1 - mixed) * FITNESS[1]) / mean


def dense(copies, generations):
    states = np.arange(copies + 1)
    mass = binom.pmf(states, copies, following(START, FLOW[0]))
    for t in range(1, generations):
        x = following(states / copies, FLOW[t])
        mass = mass @ binom.pmf(states[None, :], copies, x[:, None])
    return mass


def compiled(copies, generations=GENERATIONS):
    rows = np.empty((generations + 1, 9))
    mass = np.zeros((2, copies + 1))
    exact_chain.course(
        START,
        FLOW[:generations],
        FLOW[:generations] * 0.1,
        np.full(generations, copies),
        FITNESS,
        np.zeros(2),
        np.array([0.05, 0.25, 0.5, 0.75, 0.95]),
        1e-14,
        np.zeros(1, dtype=np.uint8),
        rows,
        mass,
    )
    return mass[generations % 2]


def rows() -> Iterator[Row]:
    apart = float(np.abs(dense(200, GENERATIONS) - compiled(200)).sum() / 2)
    yield Row(
        "exact chain, total variation from dense, 2Ne 200",
        [apart],
        at_most=1e-12,
        unit="",
    )
    pair = Pair(lambda: dense(200, GENERATIONS), lambda: compiled(200), fast_calls=20)
    yield Row("exact chain, 2Ne 200", pair.ratios(), at_least=80, absolute=pair.absolute)
    # a dense step costs the same in every generation: a few are timed and scaled
    some = 3
    pair = Pair(
        lambda: dense(1000, some),
        lambda: compiled(1000),
        slow_times=(GENERATIONS - 1) / (some - 1),
        fast_calls=3,
    )
    yield Row(
        "exact chain, 2Ne 1,000",
        pair.ratios(),
        at_least=400,
        absolute=pair.absolute,
        note="dense: 2 generations, scaled",
    )
    growth = [
        seconds(lambda: compiled(2000)) / (seconds(lambda: [compiled(200) for _ in range(8)]) / 8)
        for _ in range(9)
    ]
    yield Row("exact chain, cost of 2Ne 2,000 over 200", growth, at_most=32)
