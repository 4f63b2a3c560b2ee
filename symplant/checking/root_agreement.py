"""Whether eigenvalues computed in double precision are the roots of a polynomial known exactly."""

from __future__ import annotations

import cmath
import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from symplant.algebra.verdict import Verdict
from symplant.checking.eigenvalues import Pair, Spectrum

__all__ = ["TOLERANCE", "agreement"]

#: Largest deviation at which the two agree, relative to the coefficient with all roots taken positive.
TOLERANCE = 1e-9
#: Up to this deviation nothing is said to be wrong: double precision may be to blame.
_CLEARLY_OFF = 1e-5
#: What rounding does to a coefficient is taken for at most so many times what two computations differ by.
_NOISE = 100.0
_ROUNDING = 1e-13


@dataclass(frozen=True)
class _Sorted:
    """Eigenvalues sorted into those at zero, the others, and those at infinity."""

    at_zero: tuple[complex, ...]
    finite: tuple[complex, ...]
    at_infinity: tuple[Pair, ...]


def agreement(coefficients: Sequence[Fraction], spectrum: Spectrum) -> tuple[Verdict, str]:
    """The verdict on a polynomial (ascending coefficients, the last one not zero), with its reason.

    Roots at zero and at infinity (where there are more eigenvalues than the degree) are told exactly
    from the polynomial; so many of the smallest and largest eigenvalues must belong to them.  The others
    are multiplied out.  A coefficient of the product may differ by `TOLERANCE` times what it would be
    if all roots had the same sign; that is a small relative change of each root, and where roots are
    multiple, of their mean, which is what double precision can give.

    >>> exact = [Fraction(2), Fraction(-3), Fraction(1)]
    >>> pairs = ((1 + 0j, 1 + 0j), (2 + 0j, 1 + 0j))
    >>> agreement(exact, Spectrum((pairs, pairs)))
    (<Verdict.AGREES: 'agrees'>, 'largest deviation 0.0e+00 over 2 roots')
    """
    if spectrum.trouble:
        return Verdict.UNDECIDED, spectrum.trouble
    if not all(_is_number(pair) for run in spectrum.runs for pair in run):
        return Verdict.UNDECIDED, "some eigenvalues are no numbers: the pencil is nearly singular"
    zeros = next(i for i, value in enumerate(coefficients) if value)
    degree = len(coefficients) - 1
    first, second = (_sorted(run, zeros, degree) for run in spectrum.runs)
    size = max((abs(x) for x in first.finite), default=0.0) or spectrum.scale or 1.0
    trouble = _misplaced_zeros(first, second, size) or _misplaced_infinities(first, second, size)
    if trouble:
        return trouble
    core = coefficients[zeros:]
    unit = _unit(core)
    exact = _scaled(core, unit)
    one, sizes = _product(first.finite, unit)
    other, _ = _product(second.finite, unit)
    deviation = _deviation(one, exact, sizes)
    noise = _deviation(one, other, sizes)
    if not math.isfinite(deviation):
        return Verdict.UNDECIDED, "a coefficient is beyond the range of double precision"
    shown = f"largest deviation {deviation:.1e} over {_counted(degree, zeros, len(first.at_infinity))}"
    if deviation <= TOLERANCE:
        return Verdict.AGREES, shown
    if deviation <= _NOISE * noise:
        return Verdict.UNDECIDED, f"{shown}; ill-conditioned: computed twice they differ by {noise:.1e}"
    if deviation <= _CLEARLY_OFF:
        return Verdict.UNDECIDED, f"{shown}; that may be rounding"
    return Verdict.REFUTED, f"{shown}; SciPy has {_listed(first)}"


def _is_number(pair: Pair) -> bool:
    alpha, beta = pair
    return cmath.isfinite(alpha) and cmath.isfinite(beta) and (alpha != 0 or beta != 0)


def _sorted(pairs: Sequence[Pair], zeros: int, degree: int) -> _Sorted:
    ordered = sorted(pairs, key=lambda pair: abs(pair[0]) / abs(pair[1]) if pair[1] else math.inf)
    finite = [alpha / beta if beta else complex(math.inf) for alpha, beta in ordered[:degree]]
    return _Sorted(tuple(finite[:zeros]), tuple(finite[zeros:]), tuple(ordered[degree:]))


def _misplaced_zeros(first: _Sorted, second: _Sorted, size: float) -> tuple[Verdict, str] | None:
    """What is wrong if an eigenvalue that should be zero is not.

    Rounding spreads a root of multiplicity m by the m-th root of its own size.
    """
    if not first.at_zero:
        return None
    largest, again = abs(first.at_zero[-1]), abs(second.at_zero[-1])
    if largest <= size * _spread(len(first.at_zero)):
        return None
    return _judged(f"the polynomial has a root at zero, SciPy has {largest:.3g} instead", largest, again)


def _misplaced_infinities(first: _Sorted, second: _Sorted, size: float) -> tuple[Verdict, str] | None:
    if not first.at_infinity:
        return None
    (a, b), (c, d) = first.at_infinity[0], second.at_infinity[0]
    if abs(b) * size <= abs(a) * _spread(len(first.at_infinity)):
        return None
    smallest, again = abs(a) / abs(b), abs(c) / abs(d) if d else math.inf
    return _judged(f"SciPy has an eigenvalue of size {smallest:.3g} beyond the degree", smallest, again)


def _spread(multiplicity: int) -> float:
    return float((1e2 * _ROUNDING) ** (1 / multiplicity))


def _judged(reason: str, value: float, again: float) -> tuple[Verdict, str]:
    """What rounding has made differs between two computations; what is there does not."""
    if abs(value - again) <= 1e-6 * abs(value):
        return Verdict.REFUTED, reason
    return Verdict.UNDECIDED, f"{reason}; it differs by {abs(value - again):.1g} when computed twice"


def _unit(core: Sequence[Fraction]) -> Fraction:
    """A power of two near the geometric mean of the roots, in which they are measured."""
    degree = len(core) - 1
    if not degree:
        return Fraction(1)
    ratio = abs(core[0] / core[-1])
    power = (ratio.numerator.bit_length() - ratio.denominator.bit_length()) / degree
    return Fraction(2) ** round(power)


def _scaled(core: Sequence[Fraction], unit: Fraction) -> list[complex]:
    degree = len(core) - 1
    result = []
    for i, value in enumerate(core):
        try:
            result.append(complex(float(value / core[-1] * unit ** (i - degree))))
        except OverflowError:
            result.append(complex(math.inf))
    return result


def _product(roots: Sequence[complex], unit: Fraction) -> tuple[list[complex], list[float]]:
    """Ascending coefficients of the monic polynomial with these roots, and with their negative sizes."""
    scale = float(unit)
    product, sizes = [1 + 0j], [1.0]
    for root in roots:
        x = root / scale
        product = [a - x * b for a, b in zip([0j, *product], [*product, 0j], strict=True)]
        sizes = [a + abs(x) * b for a, b in zip([0.0, *sizes], [*sizes, 0.0], strict=True)]
    return product, sizes


def _deviation(one: Sequence[complex], other: Sequence[complex], sizes: Sequence[float]) -> float:
    worst = 0.0
    for a, b, size in zip(one, other, sizes, strict=True):
        if a != b:
            scale = max(size, abs(b))
            worst = max(worst, abs(a - b) / scale) if math.isfinite(scale) else math.inf
    return worst


def _counted(roots: int, zeros: int, infinite: int) -> str:
    """How many roots there are, and where.

    >>> _counted(4, 2, 1)
    '4 roots (2 of them zero; 1 more eigenvalue at infinity)'
    """
    notes = [f"{zeros} of them zero"] * (zeros > 0)
    notes += [f"{infinite} more eigenvalue{'s' * (infinite != 1)} at infinity"] * (infinite > 0)
    text = f"{roots or 'no'} root{'s' * (roots != 1)}"
    return f"{text} ({'; '.join(notes)})" if notes else text


def _listed(found: _Sorted) -> str:
    shown = [f"{x.real:.6g}" if abs(x.imag) < 1e-12 * abs(x) else f"{x:.6g}" for x in found.finite[:8]]
    more = f" and {len(found.finite) - 8} more" if len(found.finite) > 8 else ""
    return ", ".join([*shown]) + more if shown else "none"
