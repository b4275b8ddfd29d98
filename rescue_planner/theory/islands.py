"""FST among islands, and how many newcomers a level of flow takes.

FST here compares mean times to a common ancestor (its limit for rare mutation). Sources: Wright
1931; Takahata 1983 (Genetics 104:497), Slatkin 1991 (Genet. Res. 58:167), Mills & Allendorf 1996
(Conserv. Biol. 10:1509), Wang 2004 (Conserv. Biol. 18:332), from memory; exact form derived.
"""

from typing import NamedTuple

from rescue_planner.theory.arrays import FloatArray, Numbers, floats


class IslandFst(NamedTuple):
    """FST of equal islands: against all islands together, and between two of them; each (...)."""

    total: FloatArray
    pairwise: FloatArray


def symmetric_islands(ne: Numbers, m: Numbers, islands: Numbers) -> IslandFst:
    """Return the exact long-run FST of equal islands that exchange with all others alike.

    Two distinct copies of one island meet 2 Ne d generations back on average, two of different
    islands 1/b + 2 Ne d - d, b the chance per generation that they come from one island.

    Parameters
    ----------
    ne : (...) array
        Effective size of each island, animals.
    m : (...) array
        Share of gene copies from the other islands together, above 0, at most 1.
    islands : (...) array
        d, at least 2.

    Returns
    -------
    IslandFst
        Counted among adults, newcomers included.
    """
    m_, d = floats(m), floats(islands)
    same = (1.0 - m_) ** 2 + m_**2 / (d - 1.0)
    within = 2.0 * floats(ne) * d
    apart = (d - 1.0) / (1.0 - same) + within - d
    mean = (within + (d - 1.0) * apart) / d
    return IslandFst(1.0 - within / mean, 1.0 - within / apart)


def symmetric_islands_approximate(ne: Numbers, m: Numbers, islands: Numbers) -> FloatArray:
    """Return 1 / (1 + 4 Ne m (d/(d-1))^2), against all islands together, for small m; (...).

    Source: Takahata 1983; Slatkin 1991.
    """
    d = floats(islands)
    return 1.0 / (1.0 + 4.0 * floats(ne) * floats(m) * (d / (d - 1.0)) ** 2)


def effective_migrants(
    newcomers: Numbers, adults: Numbers, ne: Numbers, breeding: Numbers = 1.0
) -> FloatArray:
    """Return Ne m of so many newcomers a generation: newcomers * breeding * Ne / adults.

    The one-migrant rule speaks of *effective* migrants. Scale a head count once: where newcomers
    are given as effective breeders already, Ne / adults is used up (`adults` = `ne`).

    Parameters
    ----------
    newcomers : (...) array
        Animals that join the breeders per generation.
    adults, ne : (...) array
        Breeding adults of the recipient, newcomers among them, and its effective size.
    breeding : (...) array
        Breeding of a newcomer relative to a resident.

    Returns
    -------
    (...) array
        Effective migrants per generation, to first order in `breeding`.
    """
    return floats(newcomers) * floats(breeding) * floats(ne) / floats(adults)


def newcomers_for(
    migrants: Numbers, adults: Numbers, ne: Numbers, breeding: Numbers = 1.0
) -> FloatArray:
    """Return the newcomers a generation that make `migrants` effective ones.

    The other way round of `effective_migrants`: one effective migrant takes adults / Ne animals.
    Shapes (...).
    """
    return floats(migrants) * floats(adults) / (floats(ne) * floats(breeding))


def migrants_from_fst(fst: Numbers) -> FloatArray:
    """Return Ne m = (1/FST - 1) / 4 of a recipient long under steady flow; (...), FST above 0.

    The textbook form for small m turned round (Wright 1931); says nothing about a recipient that
    became isolated lately.
    """
    return 0.25 * (1.0 / floats(fst) - 1.0)
