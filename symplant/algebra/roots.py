"""Generators for square roots over a basis of their radicands modulo squares."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from symplant.algebra.box import Sign
from symplant.algebra.conversion import RatioKey, ratio_key
from symplant.algebra.expression import Call, Node, Product
from symplant.algebra.factors import factors as irreducible
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Generator, Ring
from symplant.algebra.sign_pattern import factored_sign
from symplant.algebra.trees import ratio_tree, tree_of
from symplant.errors import Fault

__all__ = ["RootGroup"]


@dataclass(frozen=True)
class _Root:
    """A chosen generator with its square."""

    key: str
    square: Element
    ring: Ring
    odd: frozenset[str]  # the irreducible factors (as text) of odd exponent in its square
    flexible: bool  # whether its square holds a squared factor of unknown sign


class RootGroup:
    """Square roots as independent generators.

    sqrt(p/q) is |f|/|q| * sqrt(S) with p*q = f**2 * S.  Where the sign of f/q is known the generator
    is sqrt(S); where it is not, the factor of unknown sign u = n/d stays inside and the generator is
    d*sqrt(n**2*S/d**2), whose square is the polynomial n**2*S whatever the signs are.
    """

    def __init__(self) -> None:
        self.roots: list[_Root] = []
        # A root is `outer` times the product of the generators named.
        self.forms: dict[RatioKey, tuple[Ratio, tuple[str, ...]]] = {}

    def choose(
        self,
        ring: Ring,
        members: Sequence[tuple[str, Call, Ratio]],
        domain: list[tuple[Node, str]],
    ) -> tuple[list[Generator], list[Fault]]:
        """New generators for these radicands; radicands of unknown sign are added to `domain`."""
        new: list[Generator] = []
        faults: list[Fault] = []
        for place, call, radicand in members:
            if ratio_key(radicand) in self.forms:
                continue
            where = f"{place}, column {call.column}" if call.column else place
            try:
                new += self._take(ring, radicand, domain)
            except ValueError as error:
                reason, suggestion = error.args
                faults.append(Fault(where, reason, suggestion))
        return new, faults

    def value(self, ring: Ring, radicand: Ratio) -> Ratio:
        """The root of a radicand that was chosen before, in a ring that has the generators."""
        outer, keys = self.forms[ratio_key(radicand)]
        product = Ratio.of(ring, ring.one)
        for key in keys:
            product = product * Ratio.of(ring, ring.gen(key))
        lifted = Ratio.of(
            ring, ring.adopt(outer.numerator, outer.ring), ring.adopt(outer.denominator, outer.ring)
        )
        return lifted * product

    def _take(self, ring: Ring, radicand: Ratio, domain: list[tuple[Node, str]]) -> list[Generator]:
        key = ratio_key(radicand)
        if not radicand:
            self.forms[key] = (radicand, ())
            return []
        parts = _Split.of(ring, radicand)
        sign = factored_sign(ring, parts.inner)
        if sign in (Sign.NEGATIVE, Sign.NONPOSITIVE):
            raise ValueError("square root of a negative quantity", "check its sign")
        if parts.inner.is_one() and parts.loose:
            raise ValueError(
                "the square root of a square is an absolute value",
                "declare the sign of the letters under the root",
            )
        if not sign.is_nonnegative:
            domain.append((ratio_tree(radicand), ">="))
        if parts.inner.is_one():
            self.forms[key] = (parts.outer, ())
            return []
        related = self._dependence(parts.odd)
        if related is None:
            return self._fresh(ring, radicand, parts, sign)
        if parts.loose or any(root.flexible for root in related):
            raise ValueError(
                "this root is another one up to a sign that is not known",
                "declare the signs of the letters under the roots",
            )
        # S = (product of the related squares) * quotient**2; all roots are nonnegative.
        product = ring.one
        for root in related:
            product = product * ring.adopt(root.square, root.ring)
        quotient = _Split.of(ring, Ratio.of(ring, parts.inner, product))
        if quotient.loose:
            raise ValueError(
                "this root is a product of others up to a sign that is not known",
                "declare the signs of the letters under the roots",
            )
        self.forms[key] = (parts.outer * quotient.outer, tuple(root.key for root in related))
        return []

    def _fresh(self, ring: Ring, radicand: Ratio, parts: _Split, sign: Sign) -> list[Generator]:
        name = f"_sqrt{len(self.roots) + 1}"
        square, outer = parts.inner, parts.outer
        meaning: Node = Call("sqrt", tree_of(ring, parts.inner))
        known = Sign.POSITIVE if sign.is_nonzero else Sign.NONNEGATIVE
        if parts.loose is not None:
            top, bottom = parts.loose.numerator, parts.loose.denominator
            square = top * top * parts.inner
            outer = outer / Ratio.of(ring, bottom)
            inside = Ratio.of(ring, square, bottom * bottom)
            meaning = Call("sqrt", ratio_tree(inside))
            if not bottom.is_one():
                meaning, known = Product((tree_of(ring, bottom), meaning)), Sign.REAL
        self.roots.append(_Root(name, square, ring, parts.odd, parts.loose is not None))
        self.forms[ratio_key(radicand)] = (outer, (name,))
        terms = {tuple(map(int, e)): int(c) for e, c in square.to_dict().items()}
        return [Generator(name, meaning, known, (ring.keys, terms), "sqrt", meaning)]

    def _dependence(self, odd: frozenset[str]) -> list[_Root] | None:
        """The roots whose odd factors add up (modulo 2) to `odd`; None if there are none."""
        reduced: list[tuple[frozenset[str], frozenset[int]]] = []
        for index, root in enumerate(self.roots):
            vector, made = root.odd, frozenset({index})
            for pivot_vector, pivot_made in reduced:
                if min(pivot_vector) in vector:
                    vector, made = vector ^ pivot_vector, made ^ pivot_made
            if vector:
                reduced.append((vector, made))
        vector, made = odd, frozenset[int]()
        for pivot_vector, pivot_made in reduced:
            if min(pivot_vector) in vector:
                vector, made = vector ^ pivot_vector, made ^ pivot_made
        return None if vector else [self.roots[i] for i in sorted(made)]


@dataclass(frozen=True)
class _Split:
    """sqrt(radicand) = outer * |loose| * sqrt(inner), `outer` of known sign and positive."""

    outer: Ratio
    loose: Ratio | None
    inner: Element
    odd: frozenset[str]

    @classmethod
    def of(cls, ring: Ring, radicand: Ratio) -> _Split:
        exponents: dict[str, tuple[Element, int]] = {}
        negative = False
        for part, direction in ((radicand.numerator, 1), (radicand.denominator, -1)):
            content, factors = irreducible(part)
            negative ^= int(content) < 0
            for factor, exponent in (*_integer_factors(ring, abs(int(content))), *factors):
                old = exponents.get(str(factor), (factor, 0))[1]
                exponents[str(factor)] = (factor, old + direction * int(exponent))
        outer, loose = Ratio.of(ring, ring.one), Ratio.of(ring, ring.one)
        inner, odd = ring.constant(-1 if negative else 1), set[str]()
        for text, (factor, exponent) in exponents.items():
            # factor**e = (factor**((e - e%2)/2))**2 * factor**(e%2), also for negative e.
            half, rest = (exponent - exponent % 2) // 2, exponent % 2
            if rest:
                inner = inner * factor
                odd.add(text)
            if not half:
                continue
            power = Ratio.of(ring, factor) ** half
            sign = factored_sign(ring, factor) ** abs(half)
            if sign.is_nonnegative:
                outer = outer * power
            elif sign.is_nonpositive:
                outer = outer * -power
            else:
                loose = loose * power
        if negative:
            odd.add("-1")
        is_one = loose.numerator.is_one() and loose.denominator.is_one()
        return cls(outer, None if is_one else loose, inner, frozenset(odd))


def _integer_factors(ring: Ring, value: int) -> list[tuple[Element, int]]:
    from flint import fmpz

    return [(ring.constant(int(p)), int(e)) for p, e in fmpz(value).factor()] if value > 1 else []
