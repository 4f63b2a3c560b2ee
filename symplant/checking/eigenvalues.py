"""Eigenvalues in double precision by NumPy and SciPy, which are imported when they are first needed.

Requests and answers are plain text, so that the work can be done in another process: a request is a line
for each problem, its size and the entries of A and (for a pencil) of E; an answer is a line for each
problem with a scale and the eigenvalues, computed twice, or the reason why there are none.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, TypeAlias

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    Array: TypeAlias = NDArray[np.float64]

__all__ = ["Pair", "Problem", "Spectrum", "answer", "import_libraries", "read_answer", "request_text"]

#: An eigenvalue as alpha/beta; beta is zero for one at infinity.
Pair: TypeAlias = tuple[complex, complex]


@dataclass(frozen=True)
class Problem:
    """det(A - lambda E) = 0, with E = None for the identity; n x n each, rows of floats."""

    A: Sequence[Sequence[float]]
    E: Sequence[Sequence[float]] | None


@dataclass(frozen=True)
class Spectrum:
    """The eigenvalues of one problem as computed twice, from the matrices and from their transposes in
    reversed order, so that what rounding does to them can be seen; or `trouble`, why there are none.

    `scale` is the size of A over that of E.
    """

    runs: tuple[tuple[Pair, ...], tuple[Pair, ...]] = ((), ())
    scale: float = 1.0
    trouble: str = ""


def request_text(problems: Sequence[Problem]) -> str:
    """Problems as text; floats are written so that they come back the same.

    >>> request_text([Problem([[0.5]], None)])
    '1 0.5'
    """
    lines = []
    for problem in problems:
        rows = [*problem.A, *(problem.E or ())]
        lines.append(" ".join([str(len(problem.A)), *(repr(x) for row in rows for x in row)]))
    return "\n".join(lines)


def read_answer(text: str) -> list[Spectrum]:
    """The spectra that an answer tells.

    >>> read_answer("2.0 1.0 0.0 1.0 0.0 1.0 0.0 1.0 0.0")[0].runs[0]
    (((1+0j), (1+0j)),)
    """
    spectra = []
    for line in text.split("\n"):
        if line.startswith("!"):
            spectra.append(Spectrum(trouble=line[1:]))
            continue
        scale, *numbers = map(float, line.split())
        parts = [complex(a, b) for a, b in zip(numbers[::2], numbers[1::2], strict=True)]
        pairs = tuple(zip(parts[::2], parts[1::2], strict=True))
        half = len(pairs) // 2
        spectra.append(Spectrum((pairs[:half], pairs[half:]), scale))
    return spectra


def import_libraries() -> None:
    """Load what the computation needs, ahead of time."""
    import numpy  # noqa: F401
    import scipy.linalg  # noqa: F401


def answer(request: str) -> str:
    """The answer to a request; a problem that cannot be solved is answered with the reason."""
    import numpy as np

    lines = []
    for line in request.split("\n"):
        size, *entries = line.split()
        n = int(size)
        numbers = np.array(entries, dtype=float).reshape(-1, n, n)
        try:
            with np.errstate(all="ignore"):
                lines.append(" ".join(map(repr, _solved(numbers))))
        except (np.linalg.LinAlgError, ValueError, ArithmeticError) as error:
            lines.append("!" + " ".join(str(error).split()))
    return "\n".join(lines)


def _solved(matrices: Any) -> list[float]:
    import numpy as np

    if not np.isfinite(matrices).all():
        raise ValueError("an entry is beyond the range of double precision")
    if len(matrices) == 1:
        A = matrices[0]
        scale = float(np.abs(A).max())
        runs = [(np.linalg.eigvals(M), np.ones(len(A))) for M in (A, A.T[::-1, ::-1])]
    else:
        A, E, scale = _balanced(*matrices)
        from scipy.linalg import eig

        runs = []
        for M, N in ((A, E), (A.T[::-1, ::-1], E.T[::-1, ::-1])):
            alpha, beta = eig(M, N, right=False, homogeneous_eigvals=True)
            runs.append((alpha * scale, beta))
    result = [scale]
    for alpha, beta in runs:
        for a, b in zip(np.asarray(alpha, dtype=complex), np.asarray(beta, dtype=complex), strict=True):
            result += [float(a.real), float(a.imag), float(b.real), float(b.imag)]
    return result


def _balanced(A: Array, E: Array) -> tuple[Array, Array, float]:
    """A and E with rows and columns scaled to similar size, and E by the scale returned.

    After D. Lemonnier and P. Van Dooren, Balancing regular matrix pencils, SIAM Journal on Matrix
    Analysis and Applications 28 (2006) 253-263 (from memory); all factors are powers of two, so that
    nothing is rounded.
    """
    import numpy as np

    a, e = np.abs(A).max(), np.abs(E).max()
    scale = float(2.0 ** np.round(np.log2(a / e))) if a > 0 and e > 0 else 1.0
    A, E = A.copy(), E * scale
    for _ in range(6):
        for axis in (1, 0):
            sizes = np.sqrt((A * A + E * E).sum(axis=axis))
            factors = np.where(sizes > 0, 2.0 ** -np.round(np.log2(np.where(sizes > 0, sizes, 1.0))), 1.0)
            shaped = factors[:, None] if axis == 1 else factors[None, :]
            A, E = A * shaped, E * shaped
    return A, E, scale
