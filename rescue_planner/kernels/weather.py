"""A year's weather: survival of each class, young, die-offs."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels.draws import normal
from rescue_planner.kernels.herd import (
    COPULA,
    DIE_CHANCE,
    DIE_LOST,
    DIE_POPULATION,
    DIE_YOUNG,
    SURVIVAL,
    SURVIVAL_SD,
    WEATHER_SURVIVAL,
    WEATHER_YOUNG,
    YOUNG_SIGMA,
)
from rescue_planner.kernels.inner import leaf
from rescue_planner.kernels.streams import DIE_OFFS, WEATHER, Words, uniform

FloatArray = NDArray[np.float64]

WIDTH = 8.5
"""Tables of quantiles reach from -WIDTH to WIDTH standard normal units."""


@leaf
def at_quantile(tables: FloatArray, population: int, row: int, z: float) -> float:
    """Return a survival at normal number `z`: straight between the points of its table."""
    steps = tables.shape[2] - 1
    x = (min(WIDTH, max(-WIDTH, z)) + WIDTH) / (2.0 * WIDTH) * steps
    i = min(int(x), steps - 1)
    part = x - i
    value: float = tables[population, row, i] * (1.0 - part)
    value += tables[population, row, i + 1] * part
    return value


@leaf
def draw_weather(
    s: Words,
    rates: FloatArray,
    tables: FloatArray,
    die_offs: FloatArray,
    population: int,
    weather: FloatArray,
) -> None:
    """Fill the year's survival of the three classes and its factor on young.

    Two normal numbers and one number for each die-off are drawn whether they matter or not, so
    that the same replicate has the same weather under every plan.
    """
    z = normal(s, WEATHER)
    r = rates[population, COPULA]
    other = normal(s, WEATHER)
    for row in range(3):
        survival = rates[population, SURVIVAL + row]
        if rates[population, SURVIVAL_SD + row] > 0.0:
            survival = at_quantile(tables, population, row, z)
        weather[WEATHER_SURVIVAL + row] = survival
    sigma = rates[population, YOUNG_SIGMA]
    of_young = r * z + math.sqrt(max(0.0, 1.0 - r * r)) * other
    weather[WEATHER_YOUNG] = math.exp(sigma * of_young - 0.5 * sigma * sigma)
    for i in range(die_offs.shape[0]):
        if die_offs[i, DIE_POPULATION] != population:
            continue
        if uniform(s, DIE_OFFS) < die_offs[i, DIE_CHANCE]:
            for row in range(3):
                weather[WEATHER_SURVIVAL + row] *= 1.0 - die_offs[i, DIE_LOST + row]
            weather[WEATHER_YOUNG] *= 1.0 - die_offs[i, DIE_YOUNG]
