"""The ring in which everything is computed: integer polynomials in the letters and the variable.

A function of letters (sin(alpha), sqrt(k*m), exp(-a*h)) is one more generator.  Where it obeys an
algebraic relation, the relation has the form generator**2 = polynomial, and the remainder by it
is the normal form, so that two elements are equal exactly when their normal forms are.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING, TypeAlias

from flint import Ordering, fmpz, fmpz_mpoly_ctx

from symplant.algebra.box import Box, Sign
from symplant.algebra.expression import Name, Node

if TYPE_CHECKING:
    from flint import fmpz_mpoly

__all__ = ["Element", "Generator", "Ring", "Term"]

Element: TypeAlias = "fmpz_mpoly"
#: One term for printing: an integer and (generator position, exponent) pairs.
Term: TypeAlias = "tuple[int, tuple[tuple[int, int], ...]]"


@dataclass(frozen=True)
class Generator:
    """One generator of the ring.

    `key` is its name inside the ring, `meaning` the expression it stands for, `sign` what is
    known of its sign over the box; `square` is the polynomial that its square equals (as a
    dictionary from exponent tuples over the *keys given* to integers), None if there is none.
    """

    key: str
    meaning: Node
    sign: Sign = Sign.REAL
    square: tuple[tuple[str, ...], Mapping[tuple[int, ...], int]] | None = None
    kind: str = "letter"
    argument: Node | None = None


class Ring:
    """Integer polynomials in one variable, the letters, and functions of the letters.

    `undecidable` holds a sentence where nonzero normal forms do not prove that an expression is
    not zero (several inverse or transcendental functions that may be related), else "".

    >>> ring = Ring("s", ("m", "k"))
    >>> ring.gen("m") * ring.gen("s") ** 2 + ring.gen("k")
    s^2*m + k
    """

    def __init__(
        self,
        variable: str,
        letters: Sequence[str],
        box: Box | None = None,
        functions: Sequence[Generator] = (),
        undecidable: str = "",
    ) -> None:
        self.variable = variable
        self.letters = tuple(letters)
        self.box = box or Box()
        self.functions = tuple(functions)
        self.undecidable = undecidable
        # Generators with a relation come first, the latest first of all: then the square of each is
        # the leading term of its relation in lexicographic order, and division gives the normal form.
        related = [function.key for function in reversed(functions) if function.square]
        free = [function.key for function in functions if not function.square]
        self.keys = (*related, variable, *self.letters, *free)
        self.context = fmpz_mpoly_ctx.get(self.keys, Ordering.lex)
        self.position = {key: index for index, key in enumerate(self.keys)}
        self._generators = dict(zip(self.keys, self.context.gens(), strict=True))
        self.zero: Element = self.context.constant(0)
        self.one: Element = self.context.constant(1)
        self._relations = [
            (self.position[f.key], self._generators[f.key] ** 2 - self.element(*f.square))
            for f in reversed(functions)
            if f.square
        ]
        meanings = {function.key: function.meaning for function in functions}
        self.meanings: tuple[Node, ...] = tuple(meanings.get(key, Name(key)) for key in self.keys)

    @property
    def has_relations(self) -> bool:
        """Whether some generator obeys a relation (then the ring is not a plain polynomial ring)."""
        return bool(self._relations)

    @cached_property
    def print_order(self) -> tuple[int, ...]:
        """Positions of the generators in the order in which a term is written."""
        order = (*self.letters, *(function.key for function in self.functions), self.variable)
        return tuple(self.position[key] for key in order)

    @cached_property
    def signs(self) -> tuple[Sign, ...]:
        """What is known of the sign of each generator, by position."""
        known = {function.key: self._sign(function) for function in self.functions}
        return tuple(known.get(key, self.box.sign(key)) for key in self.keys)

    def _sign(self, function: Generator) -> Sign:
        """The sign that was found when the ring was built, else what the ranges of the letters tell."""
        if function.sign is not Sign.REAL:
            return function.sign
        from symplant.algebra.function_range import tree_range
        from symplant.algebra.value_range import interval_range

        ranges = {name: interval_range(interval) for name, interval in self.box.intervals.items()}
        return tree_range(function.meaning, ranges).sign

    def gen(self, key: str) -> Element:
        """The generator with this key (a letter, the variable or a function)."""
        return self._generators[key]

    def constant(self, value: int) -> Element:
        """An integer as an element."""
        return self.context.constant(value)

    def element(self, keys: Sequence[str], terms: Mapping[tuple[int, ...], int]) -> Element:
        """The element with the given terms; the exponents stand in the order of `keys`."""
        places = [self.position[key] for key in keys]
        spread: dict[tuple[int, ...], int] = {}
        for exponents, value in terms.items():
            full = [0] * len(self.keys)
            for place, exponent in zip(places, exponents, strict=True):
                full[place] = exponent
            spread[tuple(full)] = value
        return self.context.from_dict(spread)

    def reduce(self, element: Element) -> Element:
        """The normal form of an element."""
        for position, relation in self._relations:
            if element.degrees()[position] > 1:
                element = element % relation
        return element

    def is_zero(self, element: Element) -> bool:
        """Whether an element is zero in the ring (its normal form vanishes)."""
        return not self.reduce(element)

    def adopt(self, element: Element, source: Ring) -> Element:
        """An element of another ring whose generators all exist here."""
        if source is self:
            return element
        return self.element(source.keys, {tuple(map(int, e)): int(c) for e, c in element.to_dict().items()})

    def coefficients(self, element: Element, key: str | None = None) -> list[Element]:
        """Coefficients in one generator (default: the variable), ascending; [] for zero.

        >>> ring = Ring("s", ("m", "k"))
        >>> ring.coefficients(ring.gen("m") * ring.gen("s") ** 2 + ring.gen("k"))
        [k, 0, m]
        """
        if not element:
            return []
        place = self.position[self.variable if key is None else key]
        degree = element.degrees()[place]
        if degree == 0:
            return [element]
        parts: list[dict[tuple[int, ...], fmpz]] = [{} for _ in range(degree + 1)]
        for exponents, value in element.terms():
            power = int(exponents[place])
            parts[power][(*exponents[:place], 0, *exponents[place + 1 :])] = value
        return [self.context.from_dict(part) for part in parts]

    def from_coefficients(self, coefficients: Sequence[Element], key: str | None = None) -> Element:
        """The element with the given ascending coefficients in one generator."""
        generator = self.gen(self.variable if key is None else key)
        total = self.zero
        for coefficient in reversed(coefficients):
            total = total * generator + coefficient
        return total

    def terms(self, element: Element) -> list[Term]:
        """Terms in the order in which they are written.

        Within a term the letters stand in the declared order, then the functions, then the variable;
        terms are sorted by falling powers of the variable, then in the dictionary order of the letters.
        """
        order = self.print_order
        rows = []
        for exponents, value in element.terms():
            row = tuple(int(exponents[place]) for place in order)
            rows.append((row[-1], row, int(value)))
        rows.sort(key=lambda item: (item[0], item[1]), reverse=True)
        return [(value, tuple((order[i], e) for i, e in enumerate(row) if e)) for _, row, value in rows]

    def is_led_negative(self, element: Element) -> bool:
        """Whether the first term of an element, as written, has a minus sign.

        >>> ring = Ring("s", ("m", "k"))
        >>> ring.is_led_negative(ring.gen("k") - ring.gen("m"))
        True
        """
        if not element:
            return False
        if not self.functions:  # the order of the ring is the order of writing
            return int(element.leading_coefficient()) < 0
        return self.terms(self.coefficients(element)[-1])[0][0] < 0

    def used(self, elements: Iterable[Element]) -> set[str]:
        """Keys of the generators that occur in any of the elements.

        >>> ring = Ring("s", ("m", "k"))
        >>> ring.used([ring.gen("m") + 1, ring.zero])
        {'m'}
        """
        found: set[int] = set()
        for element in elements:
            # The degrees of zero are -1.
            found.update(place for place, degree in enumerate(element.degrees()) if degree > 0)
        return {self.keys[place] for place in found}

    def value(self, element: Element, point: Mapping[str, Fraction]) -> Fraction:
        """The exact value of an element at a rational point that names every generator it uses."""
        parts, scale = self.parted(element, point)
        return Fraction(sum(parts.values()), scale)

    def parted(
        self, element: Element, point: Mapping[str, Fraction]
    ) -> tuple[dict[tuple[tuple[int, int], ...], int], int]:
        """Values put in for letters, the rest left: (place, exponent) pairs to integers, over one integer.

        >>> ring = Ring("s", ("m", "k"))
        >>> ring.parted(ring.gen("m") * ring.gen("s") + ring.gen("m"), {"m": Fraction(1, 2)})
        ({((0, 1),): 1, (): 1}, 2)
        """
        tables, rest, scale = [], [], 1
        for place, degree in enumerate(element.degrees()):
            if degree <= 0:
                continue
            value = point.get(self.keys[place])
            if value is None:
                rest.append(place)
                continue
            p, q = value.numerator, value.denominator
            tables.append((place, [p**e * q ** (int(degree) - e) for e in range(int(degree) + 1)]))
            scale *= q ** int(degree)
        parts: dict[tuple[tuple[int, int], ...], int] = {}
        for exponents, coefficient in element.to_dict().items():
            number = int(coefficient)
            for place, table in tables:
                number *= table[exponents[place]]
            key = tuple((place, int(exponents[place])) for place in rest if exponents[place])
            parts[key] = parts.get(key, 0) + number
        return parts, scale
