"""A second opinion in numbers: SciPy's eigenvalues at nominal values against the derived polynomials."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from types import TracebackType
from typing import Any

from symplant.algebra.ring import Element
from symplant.algebra.verdict import Check, Verdict
from symplant.checking.eigenvalues import Problem, Spectrum, read_answer, request_text
from symplant.checking.evaluation import (
    IrrationalValueError,
    UndefinedValueError,
    ball_precision,
)
from symplant.checking.nominal import nominal_values
from symplant.checking.numerical_process import NumericalProcess
from symplant.checking.point import Point
from symplant.checking.root_agreement import TOLERANCE, agreement
from symplant.checking.termwise import Terms
from symplant.derivation.derive import Derivation
from symplant.plant.model import Matrix, Model

__all__ = ["Request", "SecondOpinion", "second_opinion_request"]

_METHOD = (
    "eigenvalues {of} by SciPy in double precision at nominal values, multiplied out, against the exact "
    f"coefficients; relative tolerance {TOLERANCE:g}"
)
_POLES, _ZEROS = _METHOD.format(of="of (A, E)"), _METHOD.format(of="of the system pencil")
_SHIFTS = (0, 5, 11)


@dataclass(frozen=True)
class _Question:
    """One polynomial, its ascending coefficients at nominal values, and the eigenvalue problem for it."""

    what: str
    method: str
    coefficients: tuple[Fraction, ...]
    problem: Problem


@dataclass(frozen=True)
class Request:
    """What is to be computed; `settled` holds checks that needed no computation, `note` the stand-ins."""

    questions: tuple[_Question, ...] = ()
    settled: tuple[Check, ...] = ()
    note: str = ""


def second_opinion_request(derivation: Derivation) -> Request:
    """The eigenvalue problems of (A, E) and, for a square plant, of the system pencil, at nominal values.

    Parameters without nominal value get a stand-in, and `note` says so.

    >>> from symplant.derivation.derive import derive
    >>> from symplant.reading.arguments import model_from_arguments
    >>> request = second_opinion_request(derive(model_from_arguments([["-a"]], [[1]], [[1]])))
    >>> [question.what for question in request.questions], request.note
    (['characteristic polynomial', 'zero polynomial'], 'a has no nominal value: taken as 3/7')
    """
    reason, note = "", ""
    for shift in _SHIFTS:
        values, note = nominal_values(derivation.model, shift)
        try:
            with ball_precision():
                return _request(derivation, values, note)
        except UndefinedValueError as error:
            reason = f"the entries are not defined at these values ({error})"
        except OverflowError:
            reason = "an entry is beyond the range of double precision"
        if not note:
            break
    check = Check("characteristic polynomial", _POLES, Verdict.UNDECIDED, _with_note(reason, note))
    return Request(settled=(check,), note=note)


def _request(derivation: Derivation, values: dict[str, Fraction], note: str) -> Request:
    model = derivation.model
    try:
        point = Point(values)
        numbers = _Numbers(model, point)
        return _questions(derivation, point, numbers, note)
    except IrrationalValueError:
        point = Point(values, exact=False)
        return _questions(derivation, point, _Numbers(model, point), note)


def _questions(derivation: Derivation, point: Point, numbers: _Numbers, note: str) -> Request:
    problems = [
        (
            "characteristic polynomial",
            _POLES,
            derivation.characteristic_polynomial.polynomial.element,
            Problem(numbers.A, numbers.E),
        )
    ]
    zeros = derivation.zero_polynomial
    if zeros is not None and not zeros.polynomial.is_zero:
        problems.append(("zero polynomial", _ZEROS, zeros.polynomial.element, numbers.system_pencil()))
    questions: list[_Question] = []
    settled: list[Check] = []
    for what, method, element, problem in problems:
        coefficients = _trimmed(derivation, element, point)
        if coefficients:
            questions.append(_Question(what, method, coefficients, problem))
        else:
            detail = _with_note("the polynomial vanishes at these values", note)
            settled.append(Check(what, method, Verdict.UNDECIDED, detail))
    return Request(tuple(questions), tuple(settled), note)


def _trimmed(derivation: Derivation, element: Element, point: Point) -> tuple[Fraction, ...]:
    """Coefficients at the point; from balls their midpoints, which is far more than double precision."""
    coefficients = [_midpoint(value) for value in Terms(derivation.ring, element).coefficients(point)]
    while coefficients and not coefficients[-1]:
        coefficients.pop()
    return tuple(coefficients)


def _midpoint(value: Any) -> Fraction:
    if isinstance(value, Fraction):
        return value
    if value.contains(0):
        return Fraction(0)
    mantissa, exponent = value.mid().man_exp()
    return int(mantissa) * Fraction(2) ** int(exponent)


class _Numbers:
    """The matrices as given, at a point, as floats."""

    def __init__(self, model: Model, point: Point) -> None:
        self._point = point
        n, m, p = len(model.states), len(model.inputs), len(model.outputs)
        self.A = self._floats(model.A, n, n)
        self.B = self._floats(model.B, n, m)
        self.C = self._floats(model.C, p, n)
        self.D = self._floats(model.D, p, m)
        self.E = None if model.E is None else self._floats(model.E, n, n)

    def system_pencil(self) -> Problem:
        """[[A, B], [C, D]] and [[E, 0], [0, 0]]."""
        n, extra = len(self.A), len(self.D)
        E = self.E or [[float(i == j) for j in range(n)] for i in range(n)]
        top = [row + drive for row, drive in zip(self.A, self.B, strict=True)]
        left = top + [row + direct for row, direct in zip(self.C, self.D, strict=True)]
        right = [row + [0.0] * extra for row in E] + [[0.0] * (n + extra) for _ in range(extra)]
        return Problem(left, right)

    def _floats(self, matrix: Matrix | None, rows: int, columns: int) -> list[list[float]]:
        if matrix is None:
            return [[0.0] * columns for _ in range(rows)]
        return [[float(_midpoint(self._point.evaluate(entry))) for entry in row] for row in matrix]


class SecondOpinion:
    """SciPy asked on the side: `start` first thing, `ask` when the derivation is there, then `checks`.

    NumPy and SciPy load in another process in the meantime; use it as a context manager, or call
    `close`, so that this process ends with the work.

    >>> with SecondOpinion() as opinion:
    ...     opinion.checks()
    []
    """

    def __init__(self, process: NumericalProcess | None = None) -> None:
        """`process` is one that was started before anything else; it is closed with this."""
        self._process = process
        self._request = Request()
        self._checks: list[Check] | None = None

    def start(self) -> SecondOpinion:
        """Begin to load the libraries; nothing is waited for."""
        if self._process is None:
            self._process = NumericalProcess()
        return self

    def ask(self, request: Request) -> None:
        """Set what is to be computed."""
        self._request, self._checks = request, None

    def checks(self) -> list[Check]:
        """The checks, once they are there; computed once."""
        if self._checks is None:
            self._checks = [*self._answered(), *self._request.settled]
        return list(self._checks)

    def close(self) -> None:
        """End the process on the side, whatever it is doing."""
        if self._process is not None:
            self._process.close()

    def _answered(self) -> list[Check]:
        questions = self._request.questions
        if not questions:
            return []
        try:
            text = self.start()._ask(request_text([question.problem for question in questions]))
            spectra = read_answer(text)
        except (OSError, ImportError) as error:
            spectra = [Spectrum(trouble=f"SciPy gave no answer ({error})")] * len(questions)
        note = self._request.note
        notes = [note, *[note and "at the same values"] * (len(questions) - 1)]
        return [_check(*item) for item in zip(questions, spectra, notes, strict=True)]

    def _ask(self, text: str) -> str:
        assert self._process is not None
        return self._process.ask(text)

    def __enter__(self) -> SecondOpinion:
        return self.start()

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()


def _check(question: _Question, spectrum: Spectrum, note: str) -> Check:
    verdict, detail = agreement(question.coefficients, spectrum)
    return Check(question.what, question.method, verdict, _with_note(detail, note))


def _with_note(detail: str, note: str) -> str:
    return "; ".join(filter(None, (detail, note)))
