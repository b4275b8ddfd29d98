"""Bit-packed genomes: founders, gametes, and what a census reads from markers.

A genome is a (slots, 2, planes, words) array of uint64: two haplotypes an animal, 64 markers a
word. Plane 0 holds the alleles; the other planes hold, bit by bit, the number of the population
each copy came from (0 the recipient, d + 1 the donor d), so that ancestry is realised, copy by
copy. Chromosomes follow one another without a gap; bits behind the last marker are 0 throughout.

A map is a (chromosomes, 2) array of int64: first marker, markers. With no chromosomes (an empty
map) all markers are unlinked. Markers lie evenly along their chromosome, its ends half a step
away. Crossovers follow Haldane 1919: Poisson in number, even in place, no interference.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rescue_planner.kernels.draws import poisson
from rescue_planner.kernels.inner import leaf
from rescue_planner.kernels.streams import Words, uniform, word

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]
Genomes = NDArray[np.uint64]

THRESHOLD_BITS = 32
_ZERO, _ONE, _ALL = np.uint64(0), np.uint64(1), np.uint64(0xFFFFFFFFFFFFFFFF)
_TWO, _FOUR, _TOP = np.uint64(2), np.uint64(4), np.uint64(56)
_PAIRS, _NIBBLES = np.uint64(0x5555555555555555), np.uint64(0x3333333333333333)
_BYTES, _EACH = np.uint64(0x0F0F0F0F0F0F0F0F), np.uint64(0x0101010101010101)
_SCALE = 2.0**32
_TOP_BIT = np.uint64(63)


@leaf
def popcount(x: np.uint64) -> int:
    """Return how many bits are set."""
    x = x - ((x >> _ONE) & _PAIRS)
    x = (x & _NIBBLES) + ((x >> _TWO) & _NIBBLES)
    x = (x + (x >> _FOUR)) & _BYTES
    return int(np.int64((x * _EACH) >> _TOP))


@leaf
def set_thresholds(
    frequency: FloatArray, population: int, place: IntArray, planes: Genomes
) -> None:
    """Turn allele frequencies into bit planes for `founder_word`.

    Parameters
    ----------
    frequency : (populations, markers) array
        Of allele 1.
    population : int
        Row to turn.
    place : (markers,) array
        Word times 64 plus bit of each marker.
    planes : (populations, 33, words) array
        Filled in its row: the 32 bits of each threshold, highest first, then "certain".
    """
    planes[population] = _ZERO
    for i in range(place.size):
        p = frequency[population, i]
        w, bit = place[i] // 64, np.uint64(place[i] % 64)
        if p >= 1.0:
            for b in range(THRESHOLD_BITS + 1):
                planes[population, b, w] |= _ONE << bit
        elif p > 0.0:
            threshold = np.uint64(p * _SCALE)
            for b in range(THRESHOLD_BITS):
                up = (threshold >> np.uint64(THRESHOLD_BITS - 1 - b)) & _ONE
                planes[population, b, w] |= up << bit


@leaf
def founder_word(s: Words, k: int, planes: Genomes, population: int, w: int) -> np.uint64:
    """Return 64 alleles, each 1 with its own chance: random bits compared from the highest down.

    Exact to 2^-32; about eight random words settle all 64.
    """
    open_bits: np.uint64 = _ALL
    result: np.uint64 = _ZERO
    for b in range(THRESHOLD_BITS):
        r = word(s, k)
        t = planes[population, b, w]
        result |= open_bits & t & ~r
        open_bits &= ~(r ^ t)
        if open_bits == _ZERO:
            break
    result |= open_bits & planes[population, THRESHOLD_BITS, w]
    return result


@leaf
def make_founder(
    s: Words, k: int, planes: Genomes, population: int, valid: Words, genome: Genomes, slot: int
) -> None:
    """Fill the genome of an animal drawn from a population: alleles, and where they come from.

    `valid` (words,) has the bits that stand for markers.
    """
    for side in range(2):
        for w in range(valid.size):
            genome[slot, side, 0, w] = founder_word(s, k, planes, population, w) & valid[w]
            for plane in range(1, genome.shape[2]):
                here = (population >> (plane - 1)) & 1
                genome[slot, side, plane, w] = valid[w] if here == 1 else _ZERO


@leaf
def mix_origin(
    s: Words, k: int, ancestry: FloatArray, place: IntArray, genome: Genomes, slot: int
) -> None:
    """Mark a resident's copies as coming from donors, each copy on its own.

    `ancestry` (donors,) holds the chance of each donor; what is left stays the recipient's.
    """
    for side in range(2):
        for i in range(place.size):
            w, bit = place[i] // 64, np.uint64(place[i] % 64)
            u = uniform(s, k)
            for d in range(ancestry.size):
                u -= ancestry[d]
                if u < 0.0:
                    for plane in range(1, genome.shape[2]):
                        if ((d + 1) >> (plane - 1)) & 1 == 1:
                            genome[slot, side, plane, w] |= _ONE << bit
                    break


@leaf
def prefix_parity(x: np.uint64) -> np.uint64:
    """Return the word whose bit i is the parity of bits 0..i of `x`."""
    for step in (1, 2, 4, 8, 16, 32):
        x ^= x << np.uint64(step)
    return x


@leaf
def fill_mask(s: Words, k: int, chromosomes: IntArray, ends: FloatArray, mask: Words) -> None:
    """Fill a gamete's mask: a set bit takes the copy of the second haplotype.

    Parameters
    ----------
    chromosomes : (C, 2) array
        A map (see the module); with C = 0 all markers are unlinked.
    ends : (C,) array
        Running sums of the chromosomes' lengths in Morgans.
    mask : (words,) array
        Filled.

    Notes
    -----
    A bit is set where the strand changes, at a crossover or, with chance one half, where a
    chromosome begins; the parity of the bits so far is the strand. Crossovers of all chromosomes
    are drawn together: a Poisson number, each anywhere along the whole length.
    """
    count = chromosomes.shape[0]
    if count == 0:
        for w in range(mask.size):
            mask[w] = word(s, k)
        return
    for w in range(mask.size):
        mask[w] = _ZERO
    strands = _ZERO
    for c in range(count):
        if c % 64 == 0:
            strands = word(s, k)
        first = chromosomes[c, 0]
        mask[first // 64] ^= (strands & _ONE) << np.uint64(first % 64)
        strands >>= _ONE
    length = ends[count - 1]
    for _ in range(poisson(s, k, length)):
        x = uniform(s, k) * length
        c = min(int(x / length * count), count - 1)
        while c > 0 and x < ends[c - 1]:
            c -= 1
        while c < count - 1 and x >= ends[c]:
            c += 1
        start = ends[c - 1] if c > 0 else 0.0
        at = int((x - start) / (ends[c] - start) * chromosomes[c, 1] + 0.5)
        if at < chromosomes[c, 1]:
            at += chromosomes[c, 0]
            mask[at // 64] ^= _ONE << np.uint64(at % 64)
    carry = _ZERO
    for w in range(mask.size):
        mask[w] = prefix_parity(mask[w]) ^ carry
        carry = _ALL if (mask[w] >> _TOP_BIT) == _ONE else _ZERO


@leaf
def pass_on(genome: Genomes, parent: int, child: int, side: int, mask: Words) -> None:
    """Write the gamete that `mask` takes from a parent into one side of its young."""
    for plane in range(genome.shape[2]):
        for w in range(mask.size):
            a, b = genome[parent, 0, plane, w], genome[parent, 1, plane, w]
            genome[child, side, plane, w] = a ^ ((a ^ b) & mask[w])


@leaf
def pass_on_loci(s: Words, k: int, loci: Words, parent: int) -> np.uint64:
    """Return a gamete of the tracked loci, all unlinked; `loci` (slots, 2), one bit a locus."""
    a, b = loci[parent, 0], loci[parent, 1]
    gamete: np.uint64 = a ^ ((a ^ b) & word(s, k))
    return gamete


@leaf
def gene_diversity(
    genome: Genomes, who: IntArray, count: int, markers: int, counter: Words
) -> float:
    """Return the mean over markers of 1 - sum p^2 among animals, times 2n / (2n - 1).

    Parameters
    ----------
    who : (slots,) array
        The first `count` are the slots of the animals, at least one.
    counter : (64,) array
        Room for the bits of 64 allele counts, one beside the other.

    Notes
    -----
    Allele counts are kept as bit planes; sums of counts and of their squares are whole numbers.
    """
    total, squares = 0, 0
    for w in range(genome.shape[3]):
        height = 0
        for i in range(count):
            for side in range(2):
                carry, b = genome[who[i], side, 0, w], 0
                while carry != _ZERO:
                    if b == height:
                        counter[b] = _ZERO
                        height += 1
                    old = counter[b]
                    counter[b] = old ^ carry
                    carry &= old
                    b += 1
        for a in range(height):
            total += popcount(counter[a]) << a
            squares += popcount(counter[a]) << (2 * a)
            for b in range(a):
                squares += popcount(counter[a] & counter[b]) << (a + b + 1)
    copies = 2.0 * count
    return 2.0 * (copies * total - squares) / (copies * (copies - 1.0) * markers)


@leaf
def observed_heterozygosity(genome: Genomes, who: IntArray, count: int, markers: int) -> float:
    """Return the share of markers at which an animal's copies differ, mean over animals."""
    differ = 0
    for i in range(count):
        slot = who[i]
        for w in range(genome.shape[3]):
            differ += popcount(genome[slot, 0, 0, w] ^ genome[slot, 1, 0, w])
    return differ / (1.0 * count * markers)


@leaf
def copies_from(genome: Genomes, slot: int, population: int) -> int:
    """Return how many marker copies of an animal came from donor number `population` >= 1."""
    copies = 0
    for side in range(2):
        for w in range(genome.shape[3]):
            here = _ALL
            for plane in range(1, genome.shape[2]):
                bits = genome[slot, side, plane, w]
                here &= bits if (population >> (plane - 1)) & 1 == 1 else ~bits
            copies += popcount(here)
    return copies


@leaf
def present(genome: Genomes, who: IntArray, count: int, valid: Words, seen: Words) -> None:
    """Fill which alleles the animals hold: `seen` (2, words), alleles 0, then alleles 1."""
    for w in range(valid.size):
        has_one, has_zero = _ZERO, _ZERO
        for i in range(count):
            for side in range(2):
                bits = genome[who[i], side, 0, w]
                has_one |= bits
                has_zero |= ~bits
        seen[0, w], seen[1, w] = has_zero & valid[w], has_one


@leaf
def find_rare(
    genome: Genomes, who: IntArray, count: int, place: IntArray, least: float, rare: Words
) -> None:
    """Mark alleles that are present at a frequency below `least`.

    `rare` (2, words): alleles 0, then alleles 1.
    """
    rare[:] = _ZERO
    for i in range(place.size):
        w, bit = place[i] // 64, np.uint64(place[i] % 64)
        ones = 0
        for j in range(count):
            for side in range(2):
                ones += int(np.int64((genome[who[j], side, 0, w] >> bit) & _ONE))
        copies = 2 * count
        if 0 < ones < least * copies:
            rare[1, w] |= _ONE << bit
        if 0 < copies - ones < least * copies:
            rare[0, w] |= _ONE << bit


@leaf
def rare_left(rare: Words, seen: Words) -> float:
    """Return the share of the rare alleles that are still present; NaN where none was rare."""
    were, are = 0, 0
    for w in range(rare.shape[1]):
        were += popcount(rare[0, w]) + popcount(rare[1, w])
        are += popcount(rare[0, w] & seen[0, w]) + popcount(rare[1, w] & seen[1, w])
    return are / were if were > 0 else np.nan
