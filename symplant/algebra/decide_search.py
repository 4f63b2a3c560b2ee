"""Search for points of the box where elements have given signs; what is found is replayed exactly."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from symplant.algebra.effort import NORMAL, Effort
from symplant.algebra.enclosure import certified_sign, generator_balls, working_precision
from symplant.algebra.expression import names_in
from symplant.algebra.points import points
from symplant.algebra.ring import Element, Ring

if TYPE_CHECKING:
    import numpy as np

__all__ = ["SignTable", "find_sign", "letters_in", "respects"]


def letters_in(ring: Ring, elements: Iterable[Element]) -> list[str]:
    """The letters that elements depend on, inside functions too, in the declared order.

    >>> ring = Ring("s", ("m", "k"))
    >>> letters_in(ring, [ring.gen("k"), ring.gen("s")])
    ['k']
    """
    found: set[str] = set()
    for key in ring.used(element for element in elements if element):
        found |= names_in(ring.meanings[ring.position[key]])
    return [letter for letter in ring.letters if letter in found]


def respects(ring: Ring, nonzero: Iterable[Element], point: Mapping[str, Fraction]) -> bool:
    """Whether the elements are certainly not zero at a point (those whose letters it names)."""
    return all(
        certified_sign(ring, element, point) in (1, -1)
        for element in nonzero
        if set(letters_in(ring, [element])) <= set(point)
    )


#: Most values of terms held at one time.
BLOCK = 2_000_000


class SignTable:
    """Signs of several elements at many points at once, in floating point: a guide, never a proof."""

    def __init__(self, ring: Ring, elements: Sequence[Element]) -> None:
        import numpy as np

        self.ring = ring
        self.keys = sorted(ring.used(e for e in elements if e), key=lambda key: ring.position[key])
        self.functions = bool(set(self.keys) - set(ring.letters))
        self.compiled: list[tuple[Any, Any]] = []
        places = [ring.position[key] for key in self.keys]
        for element in elements:
            scale = max((abs(int(c)) for c in element.coeffs()), default=1)
            # Only the sign matters: dividing by the largest coefficient keeps floats in range.
            values = np.array([int(c) / scale for c in element.coeffs()], dtype=float)
            exponents = np.array([[int(m[p]) for p in places] for m in element.monoms()], dtype=int)
            self.compiled.append((values, exponents.reshape(len(values), len(places))))

    def signs(self, sample: Sequence[Mapping[str, Fraction]]) -> np.ndarray[Any, Any]:
        """Array (points x elements) of -1, 0, 1; 0 where rounding may decide or nothing is defined."""
        import numpy as np

        bases = np.array([self._bases(point) for point in sample], dtype=float)
        bases = bases.reshape(len(sample), len(self.keys))
        result = np.zeros((len(sample), len(self.compiled)), dtype=int)
        with np.errstate(all="ignore"):
            for column, (values, exponents) in enumerate(self.compiled):
                step = max(1, BLOCK // max(len(values), 1))
                for start in range(0, len(sample), step):
                    part = slice(start, start + step)
                    result[part, column] = _block_signs(bases[part], values, exponents)
        return result

    def _bases(self, point: Mapping[str, Fraction]) -> list[float]:
        if not self.functions:
            return [float(point[key]) for key in self.keys]
        try:
            with working_precision(64):
                balls = generator_balls(self.ring, point, set(self.keys))
                values = [balls[key] for key in self.keys]
                return [float(v.mid()) if v.is_finite() else float("nan") for v in values]
        except (ValueError, ZeroDivisionError, OverflowError):
            return [float("nan")] * len(self.keys)


def _block_signs(
    bases: np.ndarray[Any, Any], values: np.ndarray[Any, Any], exponents: np.ndarray[Any, Any]
) -> np.ndarray[Any, Any]:
    import numpy as np

    terms = np.broadcast_to(values, (len(bases), len(values))).copy()
    for i in range(exponents.shape[1]):
        highest = int(exponents[:, i].max(initial=0))
        if highest:
            # Powers are looked up: raising every term by itself is ten times slower.
            terms *= (bases[:, i : i + 1] ** np.arange(highest + 1))[:, exponents[:, i]]
    total, size = terms.sum(axis=1), np.abs(terms).sum(axis=1)
    sure = np.isfinite(total) & (np.abs(total) > 1e-9 * size)
    return np.where(sure, np.sign(total), 0)


def find_sign(
    ring: Ring,
    element: Element,
    wanted: Sequence[int],
    nominal: Mapping[str, Fraction],
    nonzero: Sequence[Element] = (),
    count: int = 64,
    effort: Effort = NORMAL,
) -> dict[str, Fraction] | None:
    """A point of the ring's box where the element certainly has one of the wanted signs.

    At most `count` points are looked at, fewer where the element is so long that `effort` bounds them.

    >>> ring = Ring("s", ("a",))
    >>> find_sign(ring, ring.gen("a") ** 2 - 3, (-1,), {})
    {'a': Fraction(1, 1)}
    """
    letters = letters_in(ring, [element])
    sample = list(points(ring.box, letters, nominal, min(count, effort.sample(len(element), count))))
    signs = SignTable(ring, [element]).signs(sample)[:, 0]
    tries = max(4, effort.exact_terms // max(len(element), 1))
    for point, sign in zip(sample, signs, strict=True):
        if sign and sign not in wanted:
            continue
        if not tries:
            break
        tries -= 1
        if certified_sign(ring, element, point) in wanted and respects(ring, nonzero, point):
            return point
    return None
