r"""Expression trees as LaTeX, as written: for matrix entries and for every formula."""

from __future__ import annotations

from symplant.algebra.expression import Call, Name, Node, Number, Power, Quotient
from symplant.plant.model import Matrix
from symplant.writing.numbers import digits_of, grouped
from symplant.writing.spelling import Spelling
from symplant.writing.width import BINARY, BRACKETS, FRACTION, INNER, SCRIPT, SCRIPT_SPACE, THIN, width
from symplant.writing.written import Level, TreeWriter, Written

__all__ = ["LatexWriter", "matrix_latex", "node_latex"]

#: Columns of a bmatrix, unless MaxMatrixCols is raised.
MOST_COLUMNS = 10

_COMMANDS = {"log": r"\ln", "atan": r"\arctan"}
_GAP = r"\,"
_ROUND = 0.389  # one bracket of normal size


def node_latex(node: Node, spelling: Spelling) -> str:
    r"""A tree in LaTeX, divisions as fractions, products side by side.

    >>> from symplant.algebra.expression import negated
    >>> spelling = Spelling.of("s", {"k": r"k_{\mathrm r}", "m": "m"})
    >>> node_latex(Quotient(negated(Name("k")), Name("m")), spelling)
    '-\\frac{k_{\\mathrm r}}{m}'
    """
    return LatexWriter(spelling).text(node)


def matrix_latex(matrix: Matrix, spelling: Spelling) -> str:
    r"""A matrix in square brackets, its entries as they were written; needs amsmath.

    >>> from symplant.algebra.expression import integer
    >>> rows = ((integer(0), Name("k")), (Name("m"), integer(1)))
    >>> print(matrix_latex(rows, Spelling.of("s", {"k": "k", "m": "m"})))
    \begin{bmatrix}
    0 & k \\
    m & 1
    \end{bmatrix}
    """
    writer = LatexWriter(spelling)
    rows = [" & ".join(writer.text(entry) for entry in row) for row in matrix]
    gap = "[3pt]" if any(r"\frac" in row for row in rows) else ""
    body = f" \\\\{gap}\n".join(rows)
    columns = len(matrix[0])
    if columns <= MOST_COLUMNS:
        return f"\\begin{{bmatrix}}\n{body}\n\\end{{bmatrix}}"
    return f"\\left[\\begin{{array}}{{*{{{columns}}}{{c}}}}\n{body}\n\\end{{array}}\\right]"


class LatexWriter(TreeWriter):
    r"""Writes trees in LaTeX that `read_latex` reads back to the same value; widths in em.

    >>> from symplant.algebra.expression import Product
    >>> writer = LatexWriter(Spelling.of("s", {"a": r"\alpha", "k": "k"}))
    >>> sine = Call("sin", Name("a"))
    >>> writer.text(Product((Name("k"), Power(sine, 2)))), writer.text(Product((sine, Name("s"))))
    ('k \\sin^{2} \\alpha', '\\sin(\\alpha) s')
    """

    plus = (" + ", BINARY)
    minus = (" - ", BINARY)
    sign = ("-", BINARY)
    times = (r"\cdot ", 0.722)
    loose = (r"\, ", THIN)
    over = (r"\big/ ", 0.58)
    pair = 2 * BRACKETS[0] + INNER
    gap = 0.0

    def __init__(self, spelling: Spelling) -> None:
        super().__init__()
        self.spelling = spelling
        self.between_names = None if spelling.has_compounds else (" ", 0.0)

    def _name(self, node: Name) -> Written:
        latex = self.spelling[node.name]
        kind = "word" if self.spelling.is_word(node.name) else "constant" if node.name == "pi" else "name"
        return Written(latex, width(latex), Level.ATOM, node, kind=kind)

    def _number(self, node: Number) -> Written:
        digits = digits_of(abs(node.value))
        if digits.below:
            text = rf"\frac{{{grouped(digits.mantissa, _GAP)}}}{{{grouped(digits.below, _GAP)}}}"
            level, kind = Level.QUOTIENT, "fraction"
        else:
            text, level = grouped(digits.mantissa, _GAP), Level.ATOM
            kind = "figures" if _GAP in text else "number"
            if digits.power:
                power = f"10^{{{digits.power}}}"
                text, level = (rf"{text} \cdot {power}", Level.PRODUCT) if text else (power, Level.POWER)
        return Written(text, width(text), level, node, node.value < 0, kind)

    def _power(self, node: Power) -> Written:
        base, exponent = self.write(node.base), node.exponent
        raised = f"^{{{exponent}}}"
        space = self.exponent(exponent)
        match node.base:
            case Name(name=name) if (stem := self.spelling.power_base(name)) is not None:
                return Written(stem + raised, width(stem + raised), Level.POWER, node, kind=base.kind)
            case Number() if base.level is Level.ATOM and not base.negative:
                return Written(base.text + raised, base.width + space, Level.POWER, node, kind="number")
            case Call() as call if call.function not in ("exp", "sqrt") and exponent > 0:
                return self._applied(node, call.function, self.write(call.argument), exponent)
        held = self.bracket(base)
        return Written(held.text + raised, held.width + space, Level.POWER, node, kind=held.kind)

    def _quotient(self, node: Quotient, top: Written, bottom: Written) -> Written:
        top, bottom = _unwrapped(top), _unwrapped(bottom)
        text = rf"\frac{{{top.text}}}{{{bottom.text}}}"
        whole = isinstance(node.numerator, Number) and isinstance(node.denominator, Number)
        negative = top.negative ^ bottom.negative
        space = max(top.width, bottom.width) + FRACTION
        return Written(text, space, Level.QUOTIENT, node, negative, "fraction" if whole else "value")

    def _call(self, node: Call, argument: Written) -> Written:
        match node.function:
            case "exp":
                return self._exponential(node, argument)
            case "sqrt":
                inside, space = self.signed(argument)
                return Written(rf"\sqrt{{{inside}}}", space + 1.0, Level.ATOM, node)
        return self._applied(node, node.function, argument, 1)

    def _applied(self, node: Node, function: str, argument: Written, exponent: int) -> Written:
        """A function of an argument; `exponent` stands at its name."""
        name = _COMMANDS.get(function, "\\" + function)
        name += f"^{{{exponent}}}" if exponent != 1 else ""
        if self.tall(argument):
            held = self.bracket(argument)
            closed = (name + held.text, width(name) + held.width)
        else:
            inside, space = self.signed(argument)
            closed = (f"{name}({inside})", width(name) + space + 2 * _ROUND)
        single = isinstance(argument.node, Name) and self.spelling.power_base(argument.node.name) is not None
        if argument.negative or not single:
            return Written(*closed, Level.POWER, node, kind="function")
        text, space = f"{name} {argument.text}", width(name) + argument.width
        return Written(text, space, Level.POWER, node, kind="bare", closed=closed)

    def _exponential(self, node: Call, argument: Written) -> Written:
        inside = self._exponent(argument) if self.spelling.euler else None
        if inside is None:
            held = self.bracket(argument)
            text, space = r"\exp" + held.text, width(r"\exp") + held.width
            return Written(text, space, Level.POWER, node, kind="function")
        text = f"{self.spelling.euler}^{{{inside}}}"
        return Written(text, 0.5 + SCRIPT * width(inside) + SCRIPT_SPACE, Level.POWER, node)

    def _exponent(self, argument: Written) -> str | None:
        """What stands above the e: fractions with a slash; None if it would not be readable there."""
        node = argument.node
        if isinstance(node, Quotient):
            top, bottom = self.write(node.numerator), self.write(node.denominator)
            if top.level is Level.SUM or bottom.level < Level.POWER or self.tall(top) or self.tall(bottom):
                return None
            return f"{'-' if argument.negative else ''}{top.text}/{bottom.text}"
        return None if self.tall(argument) else self.signed(argument)[0]

    def in_product(self, written: Written) -> Written:
        if written.level is Level.SUM:
            return self.bracket(written)
        return written._replace(negative=False) if written.negative else written

    def bracket(self, written: Written) -> Written:
        inside, space = self.signed(written)
        # A reader takes k (m) for a function's value, k (m + 1) for a product.
        kind = "value" if written.negative or written.level is Level.SUM else "call"
        space += 2 * BRACKETS[self.tall(written)] + INNER
        return Written(rf"\left({inside}\right)", space, Level.ATOM, written.node, kind=kind, inside=written)

    def glue(self, before: Written, after: Written) -> tuple[str, float]:
        numeric = after.text[0].isdigit() or (
            after.kind == "fraction" and before.kind in ("number", "figures")
        )
        named = before.kind in ("name", "word", "constant")
        if numeric or (named and after.kind == "call") or self._merge(before.node, after.node):
            return r" \cdot ", 0.722
        if before.kind == "figures":
            return r" \, ", THIN
        words = (before.kind, after.kind)
        if "word" in words and set(words) <= {"word", "name", "number"}:
            return r" \, ", THIN
        return " ", 0.0

    def _merge(self, before: Node, after: Node) -> bool:
        after = after.base if isinstance(after, Power) else after
        if not (isinstance(before, Name) and isinstance(after, Name)):
            return False
        return self.spelling.merges(before.name, after.name)

    def tall(self, written: Written) -> bool:
        return r"\frac" in written.text

    def exponent(self, exponent: int) -> float:
        return SCRIPT * width(str(exponent)) + SCRIPT_SPACE

    def opening(self, function: str, tall: bool) -> tuple[str, float]:
        name = "" if function in ("", "sqrt") else _COMMANDS.get(function, "\\" + function)
        return (rf"{name}\biggl(", width(name) + 0.736) if tall else (rf"{name}\bigl(", width(name) + 0.458)

    def closing(self, function: str, exponent: int, tall: bool) -> tuple[str, float]:
        raised = str(exponent) if exponent != 1 else ""
        if function == "sqrt":
            raised = f"{exponent}/2"
        bracket, space = (r"\biggr)", 0.736) if tall else (r"\bigr)", 0.458)
        return (bracket + f"^{{{raised}}}", space + width(raised)) if raised else (bracket, space)

    def pieces(self, written: Written) -> list[tuple[str, float]]:
        groups = written.text.split(_GAP) if isinstance(written.node, Number) else [written.text]
        return [(_GAP * bool(i) + group, THIN + width(group)) for i, group in enumerate(groups)]


def _unwrapped(written: Written) -> Written:
    """A piece without the brackets that a fraction bar makes needless."""
    inside = written.inside
    return written if inside is None or inside.negative else inside._replace(negative=written.negative)
