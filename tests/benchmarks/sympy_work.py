"""SymPy's side of each benchmark, in a process of its own that can be stopped.

    python sympy_work.py FAMILY SIZE ROUTE

prints the seconds that the work itself took, imports and the building of the matrices left out (the
median of three runs, or of one where that takes longer than a second), and the number of terms of the
determinant where the route tells.
"""

from __future__ import annotations

import json
import statistics
import sys
import time
from collections.abc import Callable
from typing import Any

import benchmark_plants
import sympy
from sympy.polys.matrices import DomainMatrix

S = sympy.Symbol("s")


def literal(A: Any, B: Any, C: Any) -> tuple[Any, Any]:
    """Numerator and denominator of C (sI - A)^-1 B, written down as it stands in every textbook."""
    transfer = (C * (S * sympy.eye(A.rows) - A).inv() * B)[0]
    numerator, denominator = sympy.fraction(sympy.cancel(transfer))
    return numerator, denominator


def cleared(A: Any) -> Any:
    """The rows of sI - A times their denominators: polynomials."""
    pencil = S * sympy.eye(A.rows) - A
    rows = []
    for i in range(A.rows):
        bottom = sympy.lcm_list([sympy.denom(sympy.together(entry)) for entry in pencil.row(i)])
        rows.append([sympy.expand(sympy.cancel(entry * bottom)) for entry in pencil.row(i)])
    return sympy.Matrix(rows)


def prepared(plant: benchmark_plants.Plant, route: str) -> Callable[[], Any]:
    """What is timed; everything else is done here, beforehand.  It answers with a determinant or None."""
    symbols = {letter: sympy.Symbol(letter, positive=True) for letter in plant.letters}
    A, B, C = (
        sympy.Matrix([[sympy.sympify(text, locals=symbols) for text in row] for row in rows])
        for rows in (plant.A, plant.B, plant.C)
    )
    if route == "C*(sI-A).inv()*B":
        return lambda: literal(A, B, C) and None
    pencil = cleared(A)
    if route == "Matrix.det":
        return lambda: pencil.det() and None
    if route == "Matrix.adjugate":
        return lambda: pencil.adjugate() and None
    ring = sympy.ZZ[(S, *symbols.values())]
    rows = DomainMatrix.from_Matrix(pencil).convert_to(ring)
    if route == "ring det":
        return lambda: rows.det()
    if route == "ring charpoly":
        # The last coefficient of the matrix's own characteristic polynomial is its determinant.
        return lambda: rows.charpoly()[-1]
    if route == "ring adj_det":
        return lambda: rows.adj_det()[1]
    raise ValueError(route)


def main() -> None:
    family, size, route = sys.argv[1:]
    work = prepared(getattr(benchmark_plants, family)(int(size)), route)
    times: list[float] = []
    terms = None
    while len(times) < 3 and sum(times) < 1:
        start = time.perf_counter()
        result = work()
        times.append(time.perf_counter() - start)
        terms = None if result is None else len(result)
    print(json.dumps({"seconds": statistics.median(times), "terms": terms}))


if __name__ == "__main__":
    main()
