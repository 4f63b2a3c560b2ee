"""The energy argument for mechanical chains, rotors, frames: M q'' + (D + G) q' + K q = 0.

With M and K symmetric positive definite, D symmetric positive definite and G skew (gyroscopic), the
energy q'M q'/2 + q K q/2 decreases along every motion, and the equilibrium is asymptotically stable
(W. Thomson and P. G. Tait, Treatise on Natural Philosophy, 1879, sec. 345; N. G. Chetaev, The Stability of
Motion, 1961; from memory).  The matrices are read off the pencil; the equations may first be
multiplied by positive factors to make them symmetric, as masses make accelerations forces.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TypeAlias

from symplant.algebra.decide_factors import radical
from symplant.algebra.determinant import determinant
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.sign_pattern import factored_sign
from symplant.derivation.pencil import Pencil

__all__ = ["conservative_argument", "energy_argument"]

Square: TypeAlias = "list[list[Element]]"
REASON = (
    "mass and stiffness matrices are symmetric and positive definite and so is the damping: the energy "
    "decreases along every motion (Kelvin, Tait, Chetaev)"
)
CONSERVED = (
    "mass and stiffness matrices are symmetric and positive definite and nothing is dissipated: the energy "
    "stays as it is, so that every motion is a bounded oscillation"
)


def energy_argument(pencil: Pencil) -> str:
    """The reason why the plant is asymptotically stable in the whole box, "" if the argument fails."""
    matrices = _matrices(pencil)
    if matrices is not None and all(_is_positive_definite(pencil.ring, matrix) for matrix in matrices):
        return REASON
    return ""


def conservative_argument(pencil: Pencil) -> str:
    """The reason why every motion is a bounded oscillation in the whole box, "" if the argument fails."""
    matrices = _matrices(pencil)
    if matrices is None:
        return ""
    mass, stiffness, dissipation = matrices
    if any(entry for row in dissipation for entry in row):
        return ""
    if all(_is_positive_definite(pencil.ring, matrix) for matrix in (mass, stiffness)):
        return CONSERVED
    return ""


def _matrices(pencil: Pencil) -> tuple[Square, Square, Square] | None:
    """Mass, stiffness, and damping plus its transpose, the first two symmetric; None if that fails."""
    ring = pencil.ring
    if pencil.model.discrete or ring.has_relations:
        return None
    found = _second_order(pencil)
    scaled = None if found is None else _symmetrised(ring, *found)
    if scaled is None:
        return None
    mass, damping, stiffness = scaled
    n = len(damping)
    return mass, stiffness, [[damping[i][j] + damping[j][i] for j in range(n)] for i in range(n)]


def _second_order(pencil: Pencil) -> tuple[Square, Square, Square] | None:
    """Mass, damping and stiffness, if every state is a coordinate or the rate of one."""
    ring = pencil.ring
    rates: dict[int, int] = {}
    for row in pencil.dynamics:
        pair = _kinematic(ring, row)
        if pair is not None:
            rates[pair[0]] = pair[1]
    n = len(pencil.dynamics)
    if 2 * len(rates) != n or set(rates) & set(rates.values()) or len(set(rates.values())) != len(rates):
        return None
    rows = [row for row in pencil.dynamics if _kinematic(ring, row) is None]
    places = list(rates)
    mass: Square = []
    damping: Square = []
    stiffness: Square = []
    for row in rows:
        fast = [ring.coefficients(row[rates[q]]) for q in places]
        slow = [ring.coefficients(row[q]) for q in places]
        if any(len(c) > 2 for c in fast) or any(len(c) > 1 for c in slow):
            return None
        damping.append([c[0] if c else ring.zero for c in fast])
        mass.append([c[1] if len(c) > 1 else ring.zero for c in fast])
        stiffness.append([c[0] if c else ring.zero for c in slow])
    # Each equation is put where its own acceleration stands.
    order = []
    for i in range(len(places)):
        row_of = next((k for k in range(len(rows)) if mass[k][i] and k not in order), None)
        if row_of is None:
            return None
        order.append(row_of)
    return tuple([matrix[k] for k in order] for matrix in (mass, damping, stiffness))  # type: ignore[return-value]


def _kinematic(ring: Ring, row: Sequence[Element]) -> tuple[int, int] | None:
    """(coordinate, rate) for a row that says coordinate' = rate."""
    used = [j for j, entry in enumerate(row) if entry]
    if len(used) != 2:
        return None
    s = ring.gen(ring.variable)
    for q, v in (used, used[::-1]):
        if row[q] == -s * row[v] and len(ring.coefficients(row[v])) == 1:
            return q, v
    return None


def _symmetrised(
    ring: Ring, mass: Square, damping: Square, stiffness: Square
) -> tuple[Square, Square, Square] | None:
    """Rows multiplied by positive factors so that mass and stiffness become symmetric, or None."""
    n = len(mass)
    factors: dict[int, Ratio] = {}
    for root in range(n):
        if root in factors:
            continue
        factors[root] = Ratio.of(ring, ring.one)
        waiting = [root]
        while waiting:
            i = waiting.pop()
            for j in range(n):
                if j in factors or j == i:
                    continue
                pair = next(((m[i][j], m[j][i]) for m in (stiffness, mass) if m[i][j] and m[j][i]), None)
                if pair is not None:
                    factors[j] = factors[i] * Ratio.of(ring, pair[0], pair[1])
                    waiting.append(j)
    bottom = ring.one
    for factor in factors.values():
        sign = factored_sign(ring, factor.numerator * factor.denominator)
        if not (sign.is_nonzero and sign.is_nonnegative):
            return None
        bottom = bottom * (factor.denominator // bottom.gcd(factor.denominator))
    if not radical(ring, bottom).is_settled or radical(ring, bottom).sign < 0:
        return None
    whole = [factors[i].numerator * (bottom // factors[i].denominator) for i in range(n)]
    mass, damping, stiffness = (
        [[whole[i] * entry for entry in matrix[i]] for i in range(n)] for matrix in (mass, damping, stiffness)
    )
    for matrix in (mass, stiffness):
        if any(matrix[i][j] != matrix[j][i] for i in range(n) for j in range(i)):
            return None
    return mass, damping, stiffness


def _is_positive_definite(ring: Ring, matrix: Square) -> bool:
    """Sylvester's criterion with minors whose signs their terms and factors tell."""
    for size in range(1, len(matrix) + 1):
        minor = determinant([row[:size] for row in matrix[:size]], ring.one)
        sign = factored_sign(ring, minor)
        if not (sign.is_nonzero and sign.is_nonnegative):
            return False
    return True
