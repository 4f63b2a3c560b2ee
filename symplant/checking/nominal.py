"""Numbers for a plant: the nominal values, and stand-ins for those that are missing."""

from __future__ import annotations

from collections.abc import Iterator
from fractions import Fraction

from symplant.algebra.box import Interval
from symplant.plant.model import Model
from symplant.plant.parameter import Parameter

__all__ = ["nominal_values"]

_PRIMES = (3, 5, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53, 59, 61, 67, 71, 73, 79, 83, 89, 97)


def nominal_values(model: Model, shift: int = 0) -> tuple[dict[str, Fraction], str]:
    """A value for every parameter, and a sentence on those that have no nominal value ("" if none).

    Such a parameter is taken in the middle of its range, or else, with the sign and on the side that it
    may have, at a prime over 7; `shift` chooses other primes.

    >>> parameters = Parameter("R"), Parameter("L", nominal=Fraction(2))
    >>> nominal_values(Model((), (), (), None, None, (), (), (), parameters))
    ({'R': Fraction(3, 7), 'L': Fraction(2, 1)}, 'R has no nominal value: taken as 3/7')
    """
    values: dict[str, Fraction] = {}
    taken: list[str] = []
    primes = _stand_ins(shift)
    for parameter in model.parameters:
        value = parameter.nominal
        if value is None:
            value = _stand_in(parameter, primes)
            taken.append(f"{parameter.name} taken as {value}")
        values[parameter.name] = value
    if not taken:
        return values, ""
    if len(taken) == 1:
        name, value_text = taken[0].split(" taken as ")
        return values, f"{name} has no nominal value: taken as {value_text}"
    return values, f"without nominal value: {', '.join(taken)}"


def _stand_ins(shift: int) -> Iterator[Fraction]:
    position = shift
    while True:
        rounds, place = divmod(position, len(_PRIMES))
        yield Fraction(_PRIMES[place], 7) + rounds * 14
        position += 1


def _stand_in(parameter: Parameter, primes: Iterator[Fraction]) -> Fraction:
    interval: Interval = parameter.interval
    lower, upper = interval.lower, interval.upper
    if lower is not None and upper is not None:
        middle = (lower + upper) / 2
        return middle if interval.contains(middle) else (lower + 3 * upper) / 4
    size = next(primes)
    if lower is not None:
        return max(lower, Fraction(0)) + size if interval.sign.is_nonnegative else lower + size
    if upper is not None:
        return min(upper, Fraction(0)) - size if interval.sign.is_nonpositive else upper - size
    return -size if interval.sign.is_nonpositive else size
