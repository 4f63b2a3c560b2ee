"""The part of a report that says what the plant is: equations, matrices, nomenclature."""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.algebra.box import Sign
from symplant.algebra.expression import integer
from symplant.writing.display import LINE, set_formula
from symplant.writing.latex_tree import matrix_latex
from symplant.writing.tex_text import number_latex, tex_text, unit_latex
from symplant.writing.width import BRACKETS

if TYPE_CHECKING:
    from collections.abc import Sequence

    from symplant.derivation.derive import Derivation
    from symplant.plant.model import Matrix, Model
    from symplant.plant.parameter import Parameter, Signal
    from symplant.writing.printing import Printer
    from symplant.writing.spelling import Spelling

__all__ = ["equations", "matrix_displays", "nomenclature", "scope", "vectors"]

#: What a matrix column adds to the width of its entries, in em.
COLUMN_GAP = 1.0
ZERO = integer(0)
#: Sizes to try for a wide matrix, each with its scale.
SIZES = (("", 1.0), (r"\small", 0.92), (r"\footnotesize", 0.83), (r"\scriptsize", 0.73))


def scope(model: Model) -> str:
    """One sentence on what the plant is."""
    counts = (
        _count(len(model.states), "state"),
        _count(len(model.inputs), "input"),
        _count(len(model.outputs), "output"),
    )
    time = "discrete" if model.discrete else "continuous"
    kind = "descriptor plant" if model.E is not None else "plant in state-space form"
    return (
        f"A linear {kind} in {time} time with {counts[0]}, {counts[1]} and {counts[2]}; its matrices hold "
        f"{_count(len(model.parameters), 'parameter')} as letters. Everything below is derived in exact "
        "arithmetic with the letters kept."
    )


def equations(model: Model) -> str:
    """The state and output equations."""
    left = r"\mathbf{E}\," if model.E is not None else ""
    if model.discrete:
        return (
            rf"{left}\mathbf{{x}}_{{k+1}} &= \mathbf{{A}}\,\mathbf{{x}}_k + \mathbf{{B}}\,\mathbf{{u}}_k, \\"
            "\n" + rf"\mathbf{{y}}_k &= \mathbf{{C}}\,\mathbf{{x}}_k{_direct(model, '_k')}"
        )
    return (
        rf"{left}\dot{{\mathbf{{x}}}} &= \mathbf{{A}}\,\mathbf{{x}} + \mathbf{{B}}\,\mathbf{{u}}, \\"
        "\n" + rf"\mathbf{{y}} &= \mathbf{{C}}\,\mathbf{{x}}{_direct(model, '')}"
    )


def vectors(model: Model, spelling: Spelling) -> str:
    """Which signal stands where in the vectors."""

    def row(signals: Sequence[Signal]) -> str:
        inner = r",\ ".join(spelling.signal(signal.name) for signal in signals)
        return rf"\left( {inner} \right)"

    return (
        rf"with the states $\mathbf{{x}} = {row(model.states)}$, "
        rf"the inputs $\mathbf{{u}} = {row(model.inputs)}$ "
        rf"and the outputs $\mathbf{{y}} = {row(model.outputs)}$, where"
    )


def matrix_displays(derivation: Derivation, printer: Printer) -> list[str]:
    """Every matrix that was given, as given; one that is too wide for the page by its entries."""
    converter = derivation.pencil.setting.converter()
    displays = []
    for name, matrix in derivation.model.matrices.items():
        for row in matrix:
            for entry in row:
                printer.entry(f"entries of {name}", entry, converter.convert(entry))
        displays.append(_matrix(name, matrix, printer))
    return displays


def nomenclature(model: Model, spelling: Spelling) -> list[str]:
    """Rows of the table of symbols: parameters, then signals."""
    rows = [_parameter_row(p, spelling[p.name]) for p in model.parameters]
    for role, signals in (("state", model.states), ("input", model.inputs), ("output", model.outputs)):
        rows += [_signal_row(signal, role, spelling.signal(signal.name)) for signal in signals]
    return rows


def _direct(model: Model, index: str) -> str:
    return rf" + \mathbf{{D}}\,\mathbf{{u}}{index}" if model.D is not None else ""


def _matrix(name: str, matrix: Matrix, printer: Printer) -> str:
    writer = printer.formulas.writer
    columns = [max(writer.write(row[j]).width for row in matrix) for j in range(len(matrix[0]))]
    width = sum(columns) + COLUMN_GAP * len(columns) + 2 * BRACKETS[1] + 2.5
    for size, scale in SIZES:
        if width * scale <= LINE:
            body = matrix_latex(matrix, printer.spelling)
            return f"{{{size}\\[\n\\mathbf{{{name}}} = {body}\n\\]}}"
    rows = [
        set_formula(rf"\mathbf{{{name}}}_{{{i},{j}}}", entry, writer).display("equation")
        for i, row in enumerate(matrix, 1)
        for j, entry in enumerate(row, 1)
        if entry != ZERO
    ]
    head = rf"The matrix $\mathbf{{{name}}}$ is ${len(matrix)} \times {len(columns)}$ with the entries"
    return "\n".join([head, *rows, "and zero elsewhere."])


def _parameter_row(parameter: Parameter, latex: str) -> str:
    nominal = "" if parameter.nominal is None else f"${number_latex(parameter.nominal)}$"
    return _row(f"${latex}$", parameter.about, parameter.unit, nominal, _allowed(parameter))


def _allowed(parameter: Parameter) -> str:
    if parameter.lower is not None and parameter.upper is not None:
        low, high = number_latex(parameter.lower), number_latex(parameter.upper)
        extra = f", {parameter.sign.value}" if parameter.sign is Sign.NONZERO else ""
        return rf"${low} \ldots {high}${extra}"
    return parameter.interval.sign.value


def _signal_row(signal: Signal, role: str, latex: str) -> str:
    return _row(f"${latex}$", signal.about or role, signal.unit, "", role)


def _row(symbol: str, about: str, unit: str, nominal: str, allowed: str) -> str:
    return " & ".join([symbol, tex_text(about), f"${unit_latex(unit)}$" if unit else "", nominal, allowed])


def _count(number: int, noun: str) -> str:
    words = ("no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten")
    word = words[number] if number < len(words) else str(number)
    return f"{word} {noun}" if number == 1 else f"{word} {noun}s"
