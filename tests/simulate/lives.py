"""Small worlds for the tests of the engine."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from rescue_planner.simulate.world import Donor, Life, Release, World

ONE = np.array([[0.4]])
TWO = np.array([[0.4, 0.4], [0.4, 0.4]])


def life(**changes):
    given = {
        "first_breeding_age": (1, 1),
        "last_age": 60,
        "survival": (0.5, 0.8, 0.8),
        "share_of_females_breeding": 1.0,
        "mean_young": 1.0,
        "fewest_adults": 1,
    }
    return Life(**{**given, **changes})


def world(**changes):
    given = {
        "years": 20,
        "generation_years": 4.0,
        "life": life(),
        "adults": 20,
        "adult_females": 10,
        "diversity": ONE,
        "reference": 0.4,
        "markers": 64,
        "morgans": None,
    }
    return World(**{**given, **changes})


def generations(animals, years, **changes):
    """A life of one year each, numbers held at `animals` by a ceiling: Wright and Fisher's."""
    wright_fisher = life(last_age=1, survival=(1.0, 1.0, 1.0), mean_young=12.0)
    given = {
        "years": years,
        "generation_years": 1.0,
        "life": wright_fisher,
        "adults": animals,
        "adult_females": animals // 2,
        "capacity": np.full(years, float(animals)),
    }
    return world(**{**given, **changes})


def females_only(years, females, daughters, **changes):
    """Females whose lines are independent: daughters alone, and a male on loan each year."""
    given = {
        "survival": (1.0, 0.8, 0.8),
        "mean_young": daughters,
        "females_among_young": 1.0,
    }
    loans = tuple(
        Release(y, 0, 0, 1, changes.get("male_age", 1), loan_years=1) for y in range(years)
    )
    changes.pop("male_age", None)
    given.update(changes.pop("life", {}))
    start = world(
        years=years,
        life=life(**given),
        adults=females,
        adult_females=females,
        diversity=TWO,
        donors=(Donor(10_000),),
        releases=loans,
        markers=1,
    )
    return replace(start, **changes)
