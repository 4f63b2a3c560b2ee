"""Points modulo a prime: fast exact checks of identities between long polynomials.

A polynomial of degree d that is not zero vanishes at a fraction d/p of the points at most, if at all
(J. T. Schwartz, Journal of the ACM 27 (1980) 701-717; R. Zippel, EUROSAM 1979; from memory).
"""

from __future__ import annotations

from collections.abc import Sequence

from symplant.algebra.ring import Ring
from symplant.checking.draws import Draws

__all__ = ["PRIME", "gcd_degree", "generator_residues", "root_residue"]

#: A prime a little below 2**61 that is -1 modulo 8 and modulo every odd prime below 40: then, by quadratic
#: reciprocity, all positive integers without larger prime factors have square roots.
PRIME = 2305712387343084719
_TRIES = 400


def generator_residues(ring: Ring, draws: Draws) -> list[int] | None:
    """Residues for all generators, in the order of `ring.keys`, that obey every relation; None if not found.

    >>> ring = Ring("s", ("m", "k"))
    >>> len(generator_residues(ring, Draws("a plant")))
    3
    """
    for _ in range(_TRIES):
        residues = {key: 1 + draws.below(PRIME - 1) for key in ring.keys}
        if all(_settled(ring, residues)):
            return [residues[key] for key in ring.keys]
    return None


def _settled(ring: Ring, residues: dict[str, int]) -> list[bool]:
    """Give each generator with a relation a root of what its square is; whether there is one."""
    found = []
    for function in ring.functions:
        if function.square is None:
            continue
        keys, terms = function.square
        total = 0
        for exponents, value in terms.items():
            product = value
            for key, exponent in zip(keys, exponents, strict=True):
                if exponent:
                    product = product * pow(residues[key], exponent, PRIME) % PRIME
            total += product
        root = root_residue(total)
        found.append(root is not None)
        residues[function.key] = root or 0
    return found


def root_residue(square: int) -> int | None:
    """A square root modulo the prime, None where there is none.

    >>> root_residue(49) in (7, PRIME - 7), root_residue(-1)
    (True, None)
    """
    # The prime is 3 modulo 4, so that this power is a root if there is any.
    root = pow(square % PRIME, (PRIME + 1) // 4, PRIME)
    return root if (root * root - square) % PRIME == 0 else None


def gcd_degree(first: Sequence[int], second: Sequence[int]) -> int:
    """Degree of the greatest common divisor modulo the prime of two polynomials, coefficients ascending.

    >>> gcd_degree([2, 3, 1], [-1, 0, 1])
    1
    """
    high, low = _trimmed(first), _trimmed(second)
    while low:
        inverse = pow(low[-1], -1, PRIME)
        while len(high) >= len(low):
            factor, shift = high[-1] * inverse % PRIME, len(high) - len(low)
            for i, value in enumerate(low):
                high[shift + i] = (high[shift + i] - factor * value) % PRIME
            high = _trimmed(high)
        high, low = low, high
    return len(high) - 1


def _trimmed(coefficients: Sequence[int]) -> list[int]:
    result = [value % PRIME for value in coefficients]
    while result and not result[-1]:
        result.pop()
    return result
