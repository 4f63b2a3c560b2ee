"""Expression trees as text for a terminal: in Unicode, or in Python arithmetic where there is only ASCII."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterable, Mapping

from symplant.algebra.expression import Call, Name, Node, Number, Power, Quotient
from symplant.reading.latex.letters import GREEK
from symplant.writing.numbers import digits_of
from symplant.writing.written import Level, TreeWriter, Written

__all__ = ["AsciiWriter", "UnicodeWriter", "columns", "terminal_names"]

_SUPERSCRIPT = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
_SUBSCRIPT = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
_NAME = re.compile(r"(?P<stem>.*?[^\d_])(?P<index>(?:_[^\W\d].*?)?)(?P<digits>_?\d+)?", re.DOTALL)


def terminal_names(names: Iterable[str]) -> dict[str, str]:
    """How names are shown in Unicode: Greek letters, and numbers at their end as indices.

    Names that would look alike stay as they are.

    >>> terminal_names(["m1", "omega_n", "lambda", "k_1", "k1"])
    {'m1': 'm₁', 'omega_n': 'ω_n', 'lambda': 'λ', 'k_1': 'k_1', 'k1': 'k1'}
    """
    shown = {name: _shown(name) for name in names}
    seen: dict[str, int] = {}
    for name, text in shown.items():
        for each in {name, text}:
            seen[each] = seen.get(each, 0) + 1
    return {name: text if seen[text] == 1 else name for name, text in shown.items()}


def _shown(name: str) -> str:
    match = _NAME.fullmatch(name)
    if match is None:
        return name
    stem, index, digits = match["stem"], match["index"], (match["digits"] or "").lstrip("_")
    return _greek(stem) + index + digits.translate(_SUBSCRIPT)


def _greek(word: str) -> str:
    """The Greek letter that a word names, or the word."""
    if word not in GREEK:
        return word
    case = "SMALL" if word[0].islower() else "CAPITAL"
    return unicodedata.lookup(f"GREEK {case} LETTER {word.upper().replace('LAMBDA', 'LAMDA')}")


def columns(text: str) -> int:
    """Columns of a terminal that a text takes up.

    >>> columns("ω² m₁"), columns("質量")
    (5, 4)
    """
    if text.isascii():
        return len(text)
    wide = sum(unicodedata.east_asian_width(character) in "WF" for character in text)
    return len(text) + wide - sum(unicodedata.combining(character) > 0 for character in text)


class UnicodeWriter(TreeWriter):
    """Writes trees as people write them by hand; widths in columns.

    >>> writer = UnicodeWriter(terminal_names(["k", "omega0"]))
    >>> writer.text(Quotient(Name("k"), Power(Name("omega0"), 2)))
    'k/ω₀²'
    """

    plus, minus, sign = (" + ", 3.0), (" − ", 3.0), ("−", 1.0)
    times, loose, over = ("· ", 2.0), (" ", 1.0), (" / ", 3.0)
    pair, gap = 2.0, 1.0
    functions: Mapping[str, str] = {"log": "ln", "atan": "arctan"}

    def __init__(self, names: Mapping[str, str]) -> None:
        super().__init__()
        self.names = names
        self.between_names = self.loose

    def raised(self, exponent: int) -> str:
        """An exponent behind its base."""
        return str(exponent).translate(_SUPERSCRIPT)

    def _piece(
        self, text: str, level: Level, node: Node, kind: str = "value", negative: bool = False
    ) -> Written:
        return Written(text, columns(text), level, node, negative, kind)

    def _name(self, node: Name) -> Written:
        text = self.names.get(node.name, "π" if node.name == "pi" else node.name)
        return self._piece(text, Level.ATOM, node, "constant" if node.name == "pi" else "name")

    def _number(self, node: Number) -> Written:
        digits = digits_of(abs(node.value))
        text, level = digits.mantissa, Level.ATOM
        if digits.below:
            text, level = f"{digits.mantissa}/{digits.below}", Level.QUOTIENT
        elif digits.power:
            text = f"{text}·10{self.raised(digits.power)}" if text else f"10{self.raised(digits.power)}"
            level = Level.PRODUCT
        return self._piece(text, level, node, "fraction" if digits.below else "number", node.value < 0)

    def _power(self, node: Power) -> Written:
        raised = self.raised(node.exponent)
        if isinstance(node.base, Call) and node.base.function not in ("sqrt", "exp") and node.exponent > 0:
            return self._applied(node, node.base.function, self.write(node.base.argument), raised)
        base = self.write(node.base)
        held = base if base.level is Level.ATOM and not base.negative else self.bracket(base)
        return self._piece(
            held.text + raised, Level.POWER, node, base.kind if base.kind == "name" else "value"
        )

    def _quotient(self, node: Quotient, top: Written, bottom: Written) -> Written:
        above = top if top.level >= Level.PRODUCT and top.kind != "fraction" else self.bracket(top)
        below = bottom if bottom.level >= Level.POWER else self.bracket(bottom._replace(negative=False))
        negative = (top.negative and above is top) ^ bottom.negative
        slash = " / " if " " in above.text + below.text else "/"
        whole = isinstance(node.numerator, Number) and isinstance(node.denominator, Number)
        kind = "fraction" if whole else "value"
        return self._piece(f"{above.text}{slash}{below.text}", Level.QUOTIENT, node, kind, negative)

    def _call(self, node: Call, argument: Written) -> Written:
        if node.function == "sqrt":
            simple = argument.level is Level.ATOM and not argument.negative
            held = argument if simple else self.bracket(argument)
            return self._piece(f"√{held.text}", Level.POWER, node)
        return self._applied(node, node.function, argument, "")

    def _applied(self, node: Node, function: str, argument: Written, raised: str) -> Written:
        name = self.functions.get(function, function)
        return self._piece(f"{name}{raised}({self.signed(argument)[0]})", Level.POWER, node, "function")

    def in_product(self, written: Written) -> Written:
        if written.level in (Level.SUM, Level.QUOTIENT):
            return self.bracket(
                written._replace(negative=False) if written.level is Level.QUOTIENT else written
            )
        return written._replace(negative=False) if written.negative else written

    def bracket(self, written: Written) -> Written:
        text = f"({self.signed(written)[0]})"
        return Written(text, columns(text), Level.ATOM, written.node, inside=written)

    def glue(self, before: Written, after: Written) -> tuple[str, float]:
        return ("·", 1.0) if after.text[0].isdigit() else self.loose

    def exponent(self, exponent: int) -> float:
        return float(len(self.raised(exponent)))

    def opening(self, function: str, tall: bool) -> tuple[str, float]:
        text = f"{self.functions.get(function, function)}("
        return text, float(len(text))

    def closing(self, function: str, exponent: int, tall: bool) -> tuple[str, float]:
        text = ")" + (self.raised(exponent) if exponent != 1 else "")
        return text, float(len(text))

    def tall(self, written: Written) -> bool:
        return False

    def pieces(self, written: Written) -> list[tuple[str, float]]:
        return [(character, float(columns(character))) for character in written.text]


class AsciiWriter(UnicodeWriter):
    """Writes trees in Python arithmetic, decimals and powers of ten as such.

    >>> AsciiWriter({}).text(Quotient(Name("k"), Power(Name("omega0"), 2)))
    'k/omega0**2'
    """

    minus, sign = (" - ", 3.0), ("-", 1.0)
    times, loose, over = ("* ", 2.0), ("*", 1.0), ("/", 1.0)
    functions: Mapping[str, str] = {}

    def raised(self, exponent: int) -> str:
        return f"**{exponent}" if exponent >= 0 else f"**({exponent})"

    def _name(self, node: Name) -> Written:
        return self._piece(node.name, Level.ATOM, node, "constant" if node.name == "pi" else "name")

    def _number(self, node: Number) -> Written:
        digits = digits_of(abs(node.value))
        if not digits.power:
            return super()._number(node)
        return self._piece(
            f"{digits.mantissa or 1}e{digits.power}", Level.ATOM, node, "number", node.value < 0
        )

    def _power(self, node: Power) -> Written:
        base = self.write(node.base)
        held = base if base.level is Level.ATOM and not base.negative else self.bracket(base)
        text = held.text + self.raised(node.exponent)
        return self._piece(text, Level.POWER, node, base.kind if base.kind == "name" else "value")

    def _quotient(self, node: Quotient, top: Written, bottom: Written) -> Written:
        written = super()._quotient(node, top, bottom)
        text = written.text.replace(" / ", "/", 1) if " " in written.text else written.text
        return written._replace(text=text, width=float(len(text)))

    def _call(self, node: Call, argument: Written) -> Written:
        text = f"{node.function}({self.signed(argument)[0]})"
        return self._piece(text, Level.ATOM, node, "function")

    def glue(self, before: Written, after: Written) -> tuple[str, float]:
        return self.loose
