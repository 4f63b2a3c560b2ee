"""Plants that grow: matrices of texts in Python arithmetic, the same for symplant and for SymPy."""

from __future__ import annotations

from typing import NamedTuple

__all__ = ["Plant", "chain", "dense", "ladder"]

Texts = list[list[str]]


class Plant(NamedTuple):
    """x' = A x + B u, y = C x, and its letters, all of them positive."""

    A: Texts
    B: Texts
    C: Texts
    letters: list[str]


def chain(masses: int) -> Plant:
    """A chain of masses, each tied to the next by a spring and a damper, the first also to the wall.

    2n states (positions, then rates), 3n letters; a force on the last mass, the position of the first.

    >>> chain(1).A
    [['0', '1'], ['(-k1)/m1', '(-c1)/m1']]
    """
    n = masses
    numbers = range(1, n + 1)
    A = [["0"] * (2 * n) for _ in range(2 * n)]
    for i in range(n):
        A[i][n + i] = "1"
        for letter, column in (("k", i), ("c", n + i)):
            own = [f"-{letter}{i + 1}"] + ([f"-{letter}{i + 2}"] if i + 1 < n else [])
            A[n + i][column] = f"({' '.join(own)})/m{i + 1}"
            if i + 1 < n:
                A[n + i][column + 1] = f"{letter}{i + 2}/m{i + 1}"
                A[n + i + 1][column] = f"{letter}{i + 2}/m{i + 2}"
    B = [["0"] for _ in range(2 * n)]
    B[-1][0] = f"1/m{n}"
    C = [["1"] + ["0"] * (2 * n - 1)]
    return Plant(A, B, C, [f"{letter}{i}" for letter in "mkc" for i in numbers])


def ladder(sections: int) -> Plant:
    """A ladder of coils and capacitors between a source with resistance Ri and a load Ra.

    2n states (currents, then voltages), 2n + 2 letters; source voltage in, load voltage out.

    >>> ladder(1).A
    [['-Ri/L1', '-1/L1'], ['1/C1', '-1/(Ra*C1)']]
    """
    n = sections
    A = [["0"] * (2 * n) for _ in range(2 * n)]
    for i in range(n):
        A[i][n + i] = f"-1/L{i + 1}"
        A[n + i][i] = f"1/C{i + 1}"
        if i:
            A[i][n + i - 1] = f"1/L{i + 1}"
            A[n + i - 1][i] = f"-1/C{i}"
    A[0][0] = "-Ri/L1"
    A[2 * n - 1][2 * n - 1] = f"-1/(Ra*C{n})"
    B = [["0"] for _ in range(2 * n)]
    B[0][0] = "1/L1"
    C = [["0"] * (2 * n - 1) + ["1"]]
    letters = [f"{letter}{i}" for letter in "LC" for i in range(1, n + 1)]
    return Plant(A, B, C, ["Ri", *letters, "Ra"])


def dense(size: int) -> Plant:
    """A matrix of letters a11, a12, ..., one input, one output.

    >>> dense(2).A
    [['a11', 'a12'], ['a21', 'a22']]
    """
    A = [[f"a{i}{j}" for j in range(1, size + 1)] for i in range(1, size + 1)]
    B = [["1"] if i == 0 else ["0"] for i in range(size)]
    C = [["0"] * (size - 1) + ["1"]]
    return Plant(A, B, C, [entry for row in A for entry in row])
