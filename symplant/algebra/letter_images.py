"""Where an equation in the letters holds: solved for one letter, and put into everything else.

An irreducible equation that is linear in a letter makes that letter a ratio of the others; a quadratic
one makes it an element of the ring with one more generator, the root of its discriminant, which
stands for both signs at once.  sin(t) = 0 and cos(t) = 0 leave the other function 1 or -1.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from symplant.algebra.adjoined_root import ring_with_root
from symplant.algebra.expression import names_in, walk
from symplant.algebra.factors import factors as irreducible
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Generator, Ring
from symplant.algebra.sign_pattern import factored_sign

__all__ = ["LetterImage", "replaceable", "replaced", "solve_for_letter"]


@dataclass(frozen=True)
class LetterImage:
    """The values of some generators where `condition` vanishes; everything else is untouched.

    `target` is the ring of the values: the ring itself, or that with one more root (`root`, else "").
    `leading` was divided by: where it vanishes too, the solution does not hold.
    """

    source: Ring
    target: Ring
    condition: Element
    values: Mapping[str, Ratio]
    leading: Element
    root: str = ""

    @property
    def letter(self) -> str:
        """The generator that was solved for."""
        return list(self.values)[-1]

    def row(self, elements: Sequence[Element]) -> list[Element]:
        """The images of elements, all times one common power product of the denominators.

        >>> ring = Ring("s", ("a", "b"))
        >>> s, a, b = (ring.gen(x) for x in "sab")
        >>> (image,) = solve_for_letter(ring, a - 2 * b)[:1]
        >>> image.letter, image.row([s + a])
        ('a', [s + 2*b])
        """
        target = self.target
        result = [target.adopt(element, self.source) for element in elements]
        for key, value in self.values.items():
            result = replaced(target, result, key, value)
        factors = [factor for factor, _ in irreducible(self._denominator())[1]]
        for factor in factors:
            while any(result) and all(not e or not e % factor for e in result):
                result = [e // factor for e in result]
        return [target.reduce(e) for e in result]

    def polynomial(self, polynomial: Polynomial) -> Polynomial:
        """The image of a polynomial in the variable, up to a factor free of the variable."""
        return Polynomial.of(self.target, self.row([polynomial.element])[0])

    def back(self, element: Element) -> Element:
        """An element of the target written in the source, the root expressed by the letter itself."""
        if not self.root:
            return self.source.adopt(element, self.target)
        coefficients = self.source.coefficients(self.condition, self.letter)
        _, b, a = coefficients
        root = 2 * a * self.source.gen(self.letter) + b
        parts = self.target.coefficients(element, self.root)
        total = self.source.zero
        for part in reversed(parts):
            total = total * root + _lowered(self.target, part, self.source)
        return self.source.reduce(total)

    def _denominator(self) -> Element:
        total = self.target.one
        for value in self.values.values():
            total = total * value.denominator
        return total


def solve_for_letter(ring: Ring, condition: Element) -> list[LetterImage]:
    """Solutions of an irreducible condition; all of them together cover it, [] if none was found.

    A letter with a coefficient that cannot vanish in the box is preferred.
    """
    angle = _angle_images(ring, condition)
    if angle:
        return angle
    related = [f.key for f in reversed(ring.functions) if f.square and f.key in ring.used([condition])]
    if related:
        return _root_images(ring, condition, related[0])
    found = _solved(ring, condition, "")
    return [] if found is None else [found]


def _solved(ring: Ring, condition: Element, without: str) -> LetterImage | None:
    """Solve a condition without relations; the generator `without` is going to be replaced as well."""
    used = ring.used([condition])
    choices = []
    for key in ring.keys:
        if key == ring.variable or key not in used or not replaceable(ring, key, without):
            continue
        coefficients = ring.coefficients(condition, key)
        degree = len(coefficients) - 1
        if degree <= 2:
            leading = coefficients[-1]
            safe = factored_sign(ring, leading).is_nonzero
            rank = (degree, not safe, key not in ring.letters, len(leading), len(condition))
            choices.append((rank, key, coefficients))
    if not choices:
        return None
    _, key, coefficients = min(choices, key=lambda item: item[0])
    leading = coefficients[-1]
    if len(coefficients) == 2:
        value = Ratio.of(ring, -coefficients[0], leading)
        return LetterImage(ring, ring, condition, {key: value}, leading)
    c, b, a = coefficients
    discriminant = ring.reduce(b * b - 4 * a * c)
    target, root = ring_with_root(ring, discriminant)
    top = -target.adopt(b, ring) + target.gen(root)
    value = Ratio.of(target, top, target.adopt(2 * a, ring))
    return LetterImage(ring, target, condition, {key: value}, leading, root)


def _root_images(ring: Ring, condition: Element, root: str) -> list[LetterImage]:
    """A condition a*w + b in a root w: w = -b/a, where the norm b**2 - a**2 w**2 vanishes.

    Solutions in which the norm has to be solved by another root are left out, and then none is given.
    """
    parts = ring.coefficients(condition, root)
    constant, slope = parts[0], parts[1]
    norm = ring.reduce(constant * constant - slope * slope * ring.reduce(ring.gen(root) ** 2))
    images = []
    for factor, _ in irreducible(norm)[1]:
        solved = None if ring.used([factor]) & _related(ring) else _solved(ring, factor, root)
        if solved is None or solved.root:
            return []
        ((letter, value),) = solved.values.items()
        (top, bottom) = replaced(ring, [-constant, slope], letter, value)
        if not bottom:
            return []
        values = {root: Ratio.of(ring, top, bottom), letter: value}
        images.append(LetterImage(ring, ring, condition, values, solved.leading * slope))
    return images


def _related(ring: Ring) -> set[str]:
    return {f.key for f in ring.functions if f.square}


def replaceable(ring: Ring, key: str, without: str = "") -> bool:
    """Whether no generator but `without` depends on this one, and it obeys no relation itself.

    >>> from symplant.algebra.expression import Call, Name
    >>> sine = Generator("_sin1", Call("sin", Name("a")))
    >>> ring = Ring("s", ("a", "b"), functions=(sine,))
    >>> [replaceable(ring, key) for key in ("a", "b", "_sin1")]
    [False, True, True]
    """
    own = next((f for f in ring.functions if f.key == key), None)
    if own is not None and own.square is not None:
        return False
    for function in ring.functions:
        if function.key in (key, without):
            continue
        if key in names_in(function.meaning):
            return False
        if function.square is not None:
            names, terms = function.square
            if any(exponents[names.index(key)] for exponents in terms if key in names):
                return False
        if own is not None and own.meaning in _parts(function):
            return False
    return True


def replaced(ring: Ring, elements: Sequence[Element], key: str, value: Ratio) -> list[Element]:
    """Elements with a generator replaced, all times one common power of the value's denominator."""
    parts = [ring.coefficients(element, key) for element in elements]
    degree = max((len(part) - 1 for part in parts), default=0)
    if degree <= 0:
        return list(elements)
    tops, bottoms = [ring.one], [ring.one]
    for _ in range(degree):
        tops.append(ring.reduce(tops[-1] * value.numerator))
        bottoms.append(ring.reduce(bottoms[-1] * value.denominator))
    result = []
    for part in parts:
        total = ring.zero
        for power, coefficient in enumerate(part):
            if coefficient:
                total = total + coefficient * tops[power] * bottoms[degree - power]
        result.append(ring.reduce(total))
    return result


def _lowered(ring: Ring, element: Element, smaller: Ring) -> Element:
    """An element of a ring, free of what a smaller ring lacks, as an element of that."""
    kept = [i for i, key in enumerate(ring.keys) if key in smaller.position]
    terms = {tuple(int(e[i]) for i in kept): int(c) for e, c in element.terms()}
    return smaller.element([ring.keys[i] for i in kept], terms)


def _parts(function: Generator) -> Iterator[object]:
    return walk(function.argument) if function.argument is not None else iter(())


def _angle_images(ring: Ring, condition: Element) -> list[LetterImage]:
    """sin(t) = 0 or cos(t) = 0: the other one is 1 or -1."""
    used = ring.used([condition])
    if len(condition) != 1 or len(used) != 1 or condition.total_degree() != 1:
        return []
    function = next((f for f in ring.functions if f.key in used and f.kind in ("sin", "cos")), None)
    if function is None:
        return []
    other_kind = "cos" if function.kind == "sin" else "sin"
    other = next(f for f in ring.functions if f.kind == other_kind and f.argument == function.argument)
    zero = Ratio.of(ring, ring.zero)
    return [
        LetterImage(
            ring,
            ring,
            condition,
            {function.key: zero, other.key: Ratio.of(ring, ring.constant(sign))},
            ring.one,
        )
        for sign in (1, -1)
    ]
