"""A whole number of newcomers each generation, and newcomers taken out of a finite donor.

N_b residents recruited, then n donor adults join them: exactly 2n of the 2N gene copies are
foreign, so pairs of copies follow the hypergeometric law, not (1-m)^2. `h` is the chance that two
*distinct* copies of the adults differ (with replacement: H = (1 - 1/(2N)) h). Neutral, no mutation.
Derived; checked against exact chains over both populations' counts.
"""

from typing import NamedTuple

import numpy as np

from rescue_planner.theory.arrays import FloatArray, Numbers, floats
from rescue_planner.theory.size import retained


class Exchange(NamedTuple):
    """Diversities of recipient and donor, each (...).

    `recipient`, `donor`: two distinct copies of that population's adults differ; `between`: one of
    each differ.
    """

    recipient: FloatArray
    donor: FloatArray
    between: FloatArray


def _whole(newcomers: Numbers) -> FloatArray:
    n = floats(newcomers)
    if np.any((n < 0.0) | (n != np.floor(n))):
        raise ValueError("newcomers have to be a whole number: half an animal is a rate of flow")
    return n


def _pairs(copies: FloatArray) -> FloatArray:
    return 0.5 * copies * (copies - 1.0)


def with_replacement(h: Numbers, adults: Numbers) -> FloatArray:
    """Return H = (1 - 1/(2N)) h: a copy may be drawn twice; (...), (...) -> (...)."""
    return retained(adults) * floats(h)


def both_resident(residents: Numbers, newcomers: Numbers) -> FloatArray:
    """Return the chance that two distinct gene copies of the adults are both residents'.

    C(2 N_b, 2) / C(2 N, 2), slightly below (1 - n/N)^2: a fixed number of newcomers does a little
    more than a rate.

    Parameters
    ----------
    residents, newcomers : (...) array
        N_b and n, animals; N_b + n at least 1.

    Returns
    -------
    (...) array
        Probability.

    Raises
    ------
    ValueError
        If a number of newcomers isn't whole: then `identity.with_flow_after` takes the rate.
    """
    own = 2.0 * floats(residents)
    return _pairs(own) / _pairs(own + 2.0 * _whole(newcomers))


def both_resident_random(adults: Numbers, mean_newcomers: Numbers) -> FloatArray:
    """Return the same where each of N adults is a newcomer by chance, mean n: binomial.

    (1 - m)^2 + m (1 - m) / (2N - 1) with m = n/N, slightly *above* (1 - m)^2: copies come in pairs.
    Shapes (...).
    """
    n = floats(adults)
    m = floats(mean_newcomers) / n
    return (1.0 - m) ** 2 + m * (1.0 - m) / (2.0 * n - 1.0)


def identity_after(
    identity: Numbers, parents: Numbers, residents: Numbers, newcomers: Numbers
) -> FloatArray:
    """Return identity of two distinct adult copies one generation on; donor copies all distinct.

    f' = a [1/(2N) + (1 - 1/(2N)) f], N the parents, a from `both_resident`.

    Parameters
    ----------
    identity : (...) array
        f before.
    parents, residents, newcomers : (...) array
        Adults of the parents' generation; residents recruited; newcomers who join them.

    Returns
    -------
    (...) array
        Probability.

    Raises
    ------
    ValueError
        As in `both_resident`.
    """
    left = retained(parents)
    return both_resident(residents, newcomers) * (1.0 - left + left * floats(identity))


def identity_settled(residents: Numbers, newcomers: Numbers) -> FloatArray:
    """Return the long-run identity (FST against the donor): a / [2N - a (2N - 1)].

    Parameters
    ----------
    residents, newcomers : (...) array
        N_b and n of every generation. Newcomers that *replace* residents: give N - n.

    Returns
    -------
    (...) array
        Probability; 1 without newcomers.

    Raises
    ------
    ValueError
        As in `both_resident`.
    """
    copies = 2.0 * (floats(residents) + floats(newcomers))
    both = both_resident(residents, newcomers)
    return both / (copies - both * (copies - 1.0))


def after_newcomers(
    before: Exchange, parents: Numbers, residents: Numbers, newcomers: Numbers
) -> Exchange:
    """Return the diversities one generation on, with newcomers from a very large donor.

    Parameters
    ----------
    before : Exchange
        `donor` stays as it is.
    parents, residents, newcomers : (...) array
        As in `identity_after`.

    Returns
    -------
    Exchange
        Counted among the recipient's adults, newcomers included.

    Raises
    ------
    ValueError
        As in `both_resident`.
    """
    return _joined(before, floats(before.donor), retained(parents), residents, newcomers)


def after_removal(
    before: Exchange,
    parents: Numbers,
    residents: Numbers,
    newcomers: Numbers,
    donor_parents: Numbers,
) -> Exchange:
    """Return the diversities one generation on, with newcomers taken out of a finite donor.

    Moved animals no longer breed in the donor: the donor's next parents are its recruits less the
    newcomers, and the caller gives that number at the next step. A moved and a staying copy are
    distinct copies of the donor.

    Parameters
    ----------
    before : Exchange
        Diversities among adults before.
    parents, residents, newcomers : (...) array
        As in `identity_after`.
    donor_parents : (...) array
        Adults that breed in the donor this generation.

    Returns
    -------
    Exchange
        Of the recipient's adults and the donor's.

    Raises
    ------
    ValueError
        As in `both_resident`.
    """
    donor = retained(donor_parents) * floats(before.donor)
    return _joined(before, donor, retained(parents), residents, newcomers)


def _joined(
    before: Exchange, donor: FloatArray, left: FloatArray, residents: Numbers, newcomers: Numbers
) -> Exchange:
    own, came = 2.0 * floats(residents), 2.0 * _whole(newcomers)
    whole = own + came
    unlike = _pairs(own) * left * floats(before.recipient)
    unlike = unlike + own * came * floats(before.between) + _pairs(came) * donor
    between = (own * floats(before.between) + came * donor) / whole
    return Exchange(*np.broadcast_arrays(unlike / _pairs(whole), donor, between))
