"""Points of a ring modulo a prime: what is not zero there is proved not to be zero.

A point gives every generator except the variable a value in a prime field so that all relations
hold; then evaluation is a homomorphism of the ring, and a nonzero image proves a nonzero element.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from random import Random
from typing import TYPE_CHECKING, TypeAlias

from flint import fmpz, nmod_poly

from symplant.algebra.ring import Element, Ring

if TYPE_CHECKING:
    from flint import nmod_poly as _nmod_poly

__all__ = ["Image", "ModularPoint", "elimination_pivots", "field_roots", "random_point"]

Image: TypeAlias = "_nmod_poly"
#: Draws after which a ring counts as having no point: the root of a number that no letter can change
#: has one chance in two at every draw.
ATTEMPTS = 4096
#: Draws of the letters under one root until it exists: it has one chance in two each time.
_REDRAWS = 64


class ModularPoint:
    """A homomorphism of the ring into the polynomials in the variable over a prime field."""

    def __init__(self, ring: Ring, prime: int, values: Mapping[str, int]) -> None:
        self.ring, self.prime = ring, prime
        self.values = dict(values)
        self._places = [(ring.position[key], value) for key, value in values.items()]
        self._variable = ring.position[ring.variable]

    def image(self, element: Element) -> Image:
        """The element with the point put in, as a polynomial in the variable.

        >>> ring = Ring("s", ("k",))
        >>> ModularPoint(ring, 7, {"k": 3}).image(ring.gen("k") * ring.gen("s") + 8)
        3*x + 1
        """
        return nmod_poly(self._coefficients(element), self.prime)

    def value(self, element: Element, at: int) -> int:
        """The element with the point and a value of the variable put in."""
        total = 0
        for coefficient in reversed(self._coefficients(element)):
            total = (total * at + coefficient) % self.prime
        return total

    def _coefficients(self, element: Element) -> list[int]:
        if not element:
            return []
        prime = self.prime
        degrees = element.degrees()
        tables = []
        for place, value in self._places:
            if degrees[place]:
                powers = [1]
                for _ in range(int(degrees[place])):
                    powers.append(powers[-1] * value % prime)
                tables.append((place, powers))
        result = [0] * (int(degrees[self._variable]) + 1)
        for exponents, coefficient in element.terms():
            number = int(coefficient)
            for place, powers in tables:
                number = number * powers[exponents[place]] % prime
            result[exponents[self._variable]] += number
        return [number % prime for number in result]


def random_point(ring: Ring, random: Random) -> ModularPoint:
    """A random point modulo a random prime of 61 bits.

    Errors: ArithmeticError if the relations of the ring have no point that is found.
    """
    for _ in range(ATTEMPTS):
        prime = _random_prime(random)
        values = {letter: random.randrange(1, prime) for letter in ring.letters}
        if _assign_functions(ring, values, prime, random):
            return ModularPoint(ring, prime, values)
    raise ArithmeticError("no point of the ring modulo a prime was found")


def field_roots(image: Image) -> list[int]:
    """The roots of a nonzero polynomial in its prime field.

    >>> sorted(field_roots(nmod_poly([-2, 0, 1], 7)))
    [3, 4]
    """
    return [int(-part[0] / part[1]) for part, _ in image.factor()[1] if part.degree() == 1]


def elimination_pivots(rows: Sequence[Sequence[int]], prime: int) -> tuple[list[int], list[int]]:
    """Rows and columns (both ascending) of a nonzero minor of largest size, modulo the prime.

    >>> elimination_pivots([[0, 0], [1, 2], [2, 4]], 7)
    ([1], [0])
    """
    work = [(index, [entry % prime for entry in row]) for index, row in enumerate(rows)]
    chosen_rows, chosen_columns = [], []
    for column in range(len(rows[0]) if rows else 0):
        pivot = next((i for i, (_, row) in enumerate(work) if row[column]), None)
        if pivot is None:
            continue
        index, top = work.pop(pivot)
        chosen_rows.append(index)
        chosen_columns.append(column)
        inverse = pow(top[column], -1, prime)
        for _, row in work:
            if row[column]:
                factor = row[column] * inverse % prime
                row[:] = [(a - factor * b) % prime for a, b in zip(row, top, strict=True)]
    return sorted(chosen_rows), chosen_columns


def _random_prime(random: Random) -> int:
    while True:
        candidate = random.randrange(1 << 60, 1 << 61) | 1
        if fmpz(candidate).is_prime():
            return candidate


def _assign_functions(ring: Ring, values: dict[str, int], prime: int, random: Random) -> bool:
    """Give the functions values; False if the square of one is no square in the field.

    What a square depends on is drawn again until it is one, unless an earlier square depends on it.
    """
    settled: set[str] = set()
    for function in ring.functions:
        if function.square is None:
            values[function.key] = random.randrange(1, prime)
            continue
        names, terms = function.square
        used = [name for place, name in enumerate(names) if any(exponents[place] for exponents in terms)]
        loose = [name for name in used if name not in settled]
        for _ in range(_REDRAWS):
            roots = field_roots(nmod_poly([-_square(names, terms, values, prime), 0, 1], prime))
            if roots or not loose:
                break
            values.update({name: random.randrange(1, prime) for name in loose})
        if not roots:
            return False
        values[function.key] = random.choice(roots)
        settled.update(used, (function.key,))
    return True


def _square(
    names: Sequence[str], terms: Mapping[tuple[int, ...], int], values: Mapping[str, int], prime: int
) -> int:
    total = 0
    for exponents, coefficient in terms.items():
        number = coefficient
        for name, exponent in zip(names, exponents, strict=True):
            if exponent:
                number = number * pow(values[name], exponent, prime) % prime
        total += number
    return total % prime
