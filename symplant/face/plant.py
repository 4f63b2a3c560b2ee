"""The plant as Python callers see it."""

from __future__ import annotations

import os
from collections.abc import Iterable, Mapping
from fractions import Fraction
from pathlib import Path
from typing import TYPE_CHECKING, Any

from symplant.errors import CheckError
from symplant.face.results import DerivationResult, StabilityResult, Writing

if TYPE_CHECKING:
    from symplant.face.work import Derived
    from symplant.face.zeros_results import HiddenResult, ZerosResult
    from symplant.plant.model import Model

__all__ = ["Plant"]


class Plant:
    """E x' = A x + B u, y = C x + D u with n states, m inputs, p outputs and letters in the matrices.

    Shapes: A and E are n x n, B is n x m, C is p x n, D is p x m; D left out is zero, E the identity.
    See `symplant.reading.arguments.model_from_arguments` for what a matrix and `parameters` may be.

    Errors: `symplant.InputError` with every fault of the input.

    >>> plant = Plant([["0", "1"], ["-k/m", "-c/m"]], [["0"], ["1/m"]], [["1", "0"]],
    ...               parameters={name: {"sign": "positive"} for name in ("m", "c", "k")})
    >>> plant.derive().characteristic_polynomial
    <polynomial m*s**2 + c*s + k>
    >>> plant.derive().characteristic_polynomial.sympy()
    c*s + k + m*s**2
    """

    def __init__(
        self,
        A: object,
        B: object,
        C: object,
        D: object = None,
        E: object = None,
        *,
        parameters: Mapping[Any, Any] | Iterable[Any] | None = None,
        states: Iterable[Any] | None = None,
        inputs: Iterable[Any] | None = None,
        outputs: Iterable[Any] | None = None,
        time: str = "continuous",
        title: str = "",
    ) -> None:
        from symplant.reading.arguments import model_and_symbols

        model, symbols = model_and_symbols(
            A,
            B,
            C,
            D,
            E,
            parameters=parameters,
            states=states,
            inputs=inputs,
            outputs=outputs,
            time=time,
            title=title,
        )
        self._set(model, symbols)

    @classmethod
    def from_file(cls, path: str | os.PathLike[str]) -> Plant:
        """The plant of a plant file (TOML)."""
        from symplant.reading.plant_file import read_plant_file

        return cls.from_model(read_plant_file(Path(path)))

    @classmethod
    def from_model(cls, model: Model) -> Plant:
        """The plant of a model that is at hand."""
        plant = cls.__new__(cls)
        plant._set(model, {})
        return plant

    def _set(self, model: Model, symbols: Mapping[str, Any]) -> None:
        self.model = model
        self._writing = Writing(model, symbols)
        self._derived: Derived | None = None

    @property
    def symbols(self) -> dict[str, Any]:
        """SymPy symbols by name, as results use them."""
        return self._writing.symbols

    def derive(self) -> DerivationResult:
        """Characteristic polynomial, channels and zero polynomial, checked."""
        return DerivationResult(self._derive(), self._writing)

    def stability(
        self,
        along: str | None = None,
        fixed: Mapping[str, Fraction | int | str] | None = None,
        effort: str = "normal",
    ) -> StabilityResult:
        """The reduced stability conditions over the parameter box.

        With `along` a letter's name also the exact intervals of that letter, all others at the values
        in `fixed` or else nominal.  `effort` ("low", "normal", "high") bounds the work on each condition.
        """
        from symplant.algebra.effort import EFFORTS
        from symplant.derivation.stability import stability
        from symplant.face.work import Stabilised

        derived = self._derive()
        values = {name: Fraction(value) for name, value in (fixed or {}).items()}
        finding = stability(derived.derivation, along=along, fixed=values, effort=EFFORTS[effort])
        return StabilityResult(Stabilised(derived, finding), self._writing)

    def zeros(
        self, along: str | None = None, output: str | None = None, input: str | None = None
    ) -> ZerosResult:
        """The zeros of the plant, or of the channel of an output and an input, and what moves them.

        With `along` a letter's name also what happens to the zeros as that letter changes.  Errors:
        InputError for a name that is no parameter, output or input.
        """
        from symplant.face.zeros_results import ZerosResult
        from symplant.face.zeros_work import check_names, zeros_of

        check_names(self.model, along, output, input)
        work = zeros_of(self._derive(), along=along, output=output, input=input)
        return ZerosResult(work, self._writing)

    def hidden(self) -> HiddenResult:
        """Decoupling, invariant and transmission zeros, and the cases in which a mode hides."""
        from symplant.face.zeros_results import HiddenResult
        from symplant.face.zeros_work import hidden_of

        return HiddenResult(hidden_of(self._derive()), self._writing)

    def report(self, folder: str | os.PathLike[str]) -> Path:
        """Write the report into a folder; the path of its main LaTeX file.

        Errors: InputError if the folder cannot be written; CheckError if a printed formula does not
        read back as what was derived (the report then says so itself and must not be used).
        """
        from symplant.derivation.stability import stability
        from symplant.writing.report import compose_report, write_report

        derived = self._derive()
        finding = stability(derived.derivation)
        composed = compose_report(derived.derivation, derived.substitution, finding, derived.checks)
        written = write_report(composed, Path(folder))
        if not composed.passed:
            raise CheckError(tuple(check for check in composed.checks if not check.passed))
        return written.main

    def _derive(self) -> Derived:
        from symplant.face.work import derive_and_check

        if self._derived is None:
            self._derived = derive_and_check(self.model)
        return self._derived

    def __repr__(self) -> str:
        n, m, p = len(self.model.states), len(self.model.inputs), len(self.model.outputs)
        return f"<plant {self.model.title!r}: {n} states, {m} inputs, {p} outputs>"
