r"""How wide a formula prints, estimated from the glyph widths of Computer Modern.

Widths are in em of the surrounding text (10 to 12 pt).  The advance widths and italic corrections
are those of the font metrics cmmi10 and cmr10; subscripts and superscripts are set in smaller but
relatively wider letters, for which one factor on the safe side is used.  The estimate is meant to be
a little too wide, never too narrow: lines are broken by it.
"""

from __future__ import annotations

import re
from functools import lru_cache

__all__ = ["BINARY", "BRACKETS", "FRACTION", "INNER", "RELATION", "SCRIPT", "SCRIPT_SPACE", "THIN", "width"]

#: Width of a script letter against the same letter of the text, and the space that follows scripts.
SCRIPT, SCRIPT_SPACE = 0.82, 0.05
#: A plus or minus, and a relation, with the spaces round them.
BINARY, RELATION = 0.778 + 0.444, 0.778 + 0.556
#: A thin space; both spaces that a \left ... \right pair may get; what a fraction has beside its bar.
THIN, INNER, FRACTION = 0.167, 0.334, 0.24
#: Width of one bracket by size: plain or \big, with a fraction in it.
BRACKETS = (0.458, 0.736)

_ITALIC = dict(
    zip(
        "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz",
        (750, 809, 786, 856, 796, 782, 786, 912, 518, 651, 921, 681, 1079, 912, 791, 781, 791, 767, 671,
         723, 792, 806, 1083, 907, 803, 754, 529, 429, 433, 520, 466, 597, 513, 576, 345, 469, 552, 318,
         878, 600, 485, 503, 482, 479, 469, 361, 572, 521, 743, 572, 526, 509),
        strict=True,
    )
)  # fmt: skip
_ROMAN = dict(
    zip(
        "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz",
        (750, 708, 722, 764, 681, 653, 785, 750, 361, 514, 778, 625, 917, 750, 778, 681, 778, 736, 556,
         722, 750, 764, 1042, 750, 775, 611, 500, 556, 444, 556, 444, 383, 514, 556, 278, 306, 528, 278,
         833, 556, 500, 556, 528, 392, 394, 389, 556, 542, 736, 528, 542, 444),
        strict=True,
    )
)  # fmt: skip
_COMMANDS = {
    r"\alpha": 643, r"\beta": 618, r"\gamma": 573, r"\delta": 482, r"\epsilon": 406, r"\zeta": 511,
    r"\eta": 532, r"\theta": 497, r"\iota": 354, r"\kappa": 576, r"\lambda": 583, r"\mu": 603, r"\nu": 558,
    r"\xi": 484, r"\pi": 606, r"\rho": 517, r"\sigma": 607, r"\tau": 550, r"\upsilon": 576, r"\phi": 596,
    r"\chi": 626, r"\psi": 687, r"\omega": 658, r"\varepsilon": 466, r"\vartheta": 591, r"\varpi": 856,
    r"\varrho": 517, r"\varsigma": 443, r"\varphi": 654, r"\Gamma": 625, r"\Delta": 833, r"\Theta": 778,
    r"\Lambda": 694, r"\Xi": 667, r"\Pi": 750, r"\Sigma": 722, r"\Upsilon": 778, r"\Phi": 722, r"\Psi": 778,
    r"\Omega": 722, r"\ell": 417, r"\partial": 586, r"\hbar": 576, r"\varkappa": 667, r"\infty": 1000,
    r"\prime": 275, r"\ast": 500, r"\star": 500, "~": 333,
    r"\,": 167, r"\:": 222, r"\>": 222, r"\;": 278, r"\!": 0, r"\ ": 333, r"\quad": 1000, r"\qquad": 2000,
    r"\max": 2055, r"\min": 1667, r"\displaystyle": 0, r"\limits": 0,
}  # fmt: skip
_FUNCTIONS = ("sin", "cos", "tan", "exp", "log", "ln", "sinh", "cosh", "tanh", "arctan", "det", "deg")
_COMMANDS |= {"\\" + f: sum(_ROMAN[c] for c in f) + 334 for f in _FUNCTIONS}
_OPERATORS = dict.fromkeys(("+", "-", r"\times", r"\pm"), BINARY)
_OPERATORS |= {r"\cdot": 0.278 + 0.444, "*": 0.944}
_OPERATORS |= dict.fromkeys(("=", "<", ">", r"\le", r"\ge", r"\leq", r"\geq", r"\ne", r"\neq"), RELATION)
_OPERATORS |= {r"\colon": 0.5, ":": RELATION, r"\approx": RELATION, r"\to": 1.556, "/": 0.5, "|": 0.278}
_SIZES = {"": 0.389, "big": 0.458, "Big": 0.597, "bigg": 0.736, "Bigg": 0.792}
_UPRIGHT = (r"\mathrm", r"\text", r"\operatorname", r"\mathup", r"\textrm", r"\mbox", r"\mathsf", r"\mathtt")
_FRACTIONS = (r"\frac", r"\dfrac", r"\tfrac")
_ACCENTS: tuple[str, ...] = (
    r"\dot",
    r"\ddot",
    r"\dddot",
    r"\bar",
    r"\hat",
    r"\tilde",
    r"\vec",
    r"\check",
    r"\breve",
)
_ACCENTS += (r"\overline", r"\underline", r"\widehat", r"\widetilde")
_BOLD = (r"\mathbf", r"\boldsymbol", r"\bm", r"\mathcal", r"\mathbb", r"\mathfrak", r"\mathscr")

_TOKEN = re.compile(
    r"\\(?P<size>[bB]igg?)[lrm]?(?![A-Za-z])\s*(?:\\[{}]|[()\[\]/|])"
    r"|\\(?:left|right)(?![A-Za-z])\s*(?P<fence>\\[{}]|[()\[\]|.])"
    r"|\\(?:[A-Za-z]+|.)|[{}^_]|\s+|.",
    re.DOTALL,
)


@lru_cache(maxsize=20_000)
def width(latex: str) -> float:
    r"""Width of a formula in em, on one line, fractions in display size.

    Letters of unknown alphabets count one em; an environment counts as if its rows stood side by side.

    >>> round(width("m s^{2} + k"), 2)
    3.58
    >>> width(r"\frac{a + b}{c}") < width("a + b") + 0.3
    True
    """
    tokens = [match for match in _TOKEN.finditer(latex) if not match[0].isspace()]
    return _Measure(tokens).group(end=None)


class _Measure:
    """One pass over the tokens of a formula; `upright` while inside \\mathrm and the like."""

    def __init__(self, tokens: list[re.Match[str]]) -> None:
        self.tokens = tokens
        self.next = 0
        self.upright = 0

    def group(self, end: str | None) -> float:
        r"""Width up to the token `end` ("}" or "\right"), which is passed."""
        total = scripts = 0.0
        while self.next < len(self.tokens):
            text = self.tokens[self.next][0]
            if end is not None and text.startswith(end):
                self.next += 1
                break
            if text in ("^", "_"):
                # A superscript stands above a subscript: only what is wider counts.
                self.next += 1
                script = SCRIPT * self.item() + SCRIPT_SPACE
                total += max(0.0, script - scripts)
                scripts = max(scripts, script)
                continue
            if text == "'":
                self.next += 1
                total += 0.28
                continue
            scripts = 0.0
            total += self.item()
        return total

    def item(self) -> float:
        """Width of the next token with its arguments; 0 at the end."""
        if self.next >= len(self.tokens):
            return 0.0
        match = self.tokens[self.next]
        text = match[0]
        self.next += 1
        if match["size"]:
            return _SIZES[match["size"]] + (0.12 if text.endswith("/") else 0.0)
        if match["fence"]:
            return self._fenced()
        if text == "{":
            return self.group("}")
        if text in _FRACTIONS:
            return max(self.item(), self.item()) + FRACTION
        if text == r"\sqrt":
            return self.item() + 1.0
        if text in _UPRIGHT:
            self.upright += 1
            inside = self.item()
            self.upright -= 1
            return inside
        if text in _BOLD:
            return 1.2 * self.item()
        if text in _OPERATORS:
            return _OPERATORS[text]
        if text in _COMMANDS:
            return _COMMANDS[text] / 1000
        if text in _ACCENTS:
            return self.item() + 0.05
        return _glyph(text, bool(self.upright))

    def _fenced(self) -> float:
        start = self.next
        inside = self.group(r"\right")
        tall = any(token[0] in _FRACTIONS for token in self.tokens[start : self.next])
        return inside + 2 * BRACKETS[tall] + INNER


def _glyph(text: str, upright: bool) -> float:
    if text.isdigit() and text.isascii():
        return 0.5
    if text in ".,;!":
        return 0.278 if text == "." else 0.278 + THIN
    if text in "()[]":
        return 0.389
    known = _ROMAN if upright else _ITALIC
    return known.get(text, 1000) / 1000
