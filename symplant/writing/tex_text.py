r"""Running text, names of units and numbers as LaTeX that cannot misbehave.

Text of the plant file (titles, what a letter is about) is only ever typeset: every character that LaTeX
would act on is written out.
"""

from __future__ import annotations

import re
from fractions import Fraction

from symplant.writing.numbers import digits_of

__all__ = ["number_latex", "prose", "tex_text", "unit_latex"]

_SPECIAL = {
    "\\": r"\textbackslash{}",
    "{": r"\{",
    "}": r"\}",
    "$": r"\$",
    "&": r"\&",
    "#": r"\#",
    "%": r"\%",
    "_": r"\_",
    "^": r"\textasciicircum{}",
    "~": r"\textasciitilde{}",
    "<": r"\ensuremath{<}",
    ">": r"\ensuremath{>}",
    "|": r"\ensuremath{|}",
    '"': r"\textquotedbl{}",
    "\u2212": r"\ensuremath{-}",
    "\u00b7": r"\ensuremath{\cdot}",
    "\u00d7": r"\ensuremath{\times}",
    "\u00b2": r"\ensuremath{^{2}}",
    "\u00b3": r"\ensuremath{^{3}}",
    "\u00b0": r"\ensuremath{^{\circ}}",
    "\u00b5": r"\ensuremath{\mu}",
    "\u2013": "--",
    "\u2014": "---",
    "\u2018": "`",
    "\u2019": "'",
    "\u201c": "``",
    "\u201d": "''",
    "\u2026": r"\dots{}",
    "\u2264": r"\ensuremath{\le}",
    "\u2265": r"\ensuremath{\ge}",
    "\u00a0": "~",
}
_GREEK = [
    "alpha",
    "beta",
    "gamma",
    "delta",
    "varepsilon",
    "zeta",
    "eta",
    "theta",
    "iota",
    "kappa",
    "lambda",
    "mu",
    "nu",
    "xi",
    "omicron",
    "pi",
    "rho",
    "varsigma",
    "sigma",
    "tau",
    "upsilon",
    "varphi",
    "chi",
    "psi",
    "omega",
]
_GREEK_CAPITALS = {"Γ": "Gamma", "Δ": "Delta", "Θ": "Theta", "Λ": "Lambda", "Ξ": "Xi", "Π": "Pi"} | {
    "Σ": "Sigma",
    "Υ": "Upsilon",
    "Φ": "Phi",
    "Ψ": "Psi",
    "Ω": "Omega",
}
_UNIT = re.compile(r"(\*\*|\^)\(?([+-]?\d+(?:/\d+)?)\)?|([^\W\d_]+|%|°)|(\d+)|([*·⋅ ])|([/()])")


def tex_text(text: str) -> str:
    r"""Running text with nothing left for LaTeX to act on.

    >>> print(tex_text("50 % of k_1, \\input{x}"))
    50 \% of k\_1, \textbackslash{}input\{x\}
    """
    return "".join(_character(character) for character in " ".join(text.split()))


def prose(text: str) -> str:
    r"""Our own sentences as LaTeX: powers of a variable are set as formulas, the first letter is large.

    >>> print(prose("coefficient of s^2: always"))
    Coefficient of $s^{2}$: always.
    """
    parts = re.split(r"\b([A-Za-z])\^(\d+)", text.strip())
    written = tex_text_part(parts[0])
    for letter, power, rest in zip(parts[1::3], parts[2::3], parts[3::3], strict=True):
        written += f"${letter}^{{{power}}}$" + tex_text_part(rest)
    written = written[:1].upper() + written[1:]
    return written if written.endswith((".", "!", "?")) else f"{written}."


def tex_text_part(text: str) -> str:
    """Part of a running text: as `tex_text`, with the spaces at its ends kept."""
    return "".join(_character(character) for character in text)


def _character(character: str) -> str:
    if character in _SPECIAL:
        return _SPECIAL[character]
    code = ord(character)
    if 0x3B1 <= code <= 0x3C9:
        name = _GREEK[code - 0x3B1]
        return "o" if name == "omicron" else rf"\ensuremath{{\{name}}}"
    if character in _GREEK_CAPITALS:
        return rf"\ensuremath{{\{_GREEK_CAPITALS[character]}}}"
    if 0x20 <= code < 0x7F or 0xA1 <= code <= 0x17F:
        return character  # the letters that the T1 encoding has
    return rf"[U+{code:04X}]"


def unit_latex(unit: str) -> str:
    r"""The name of a unit, upright, powers raised; anything else as it stands.

    >>> print(unit_latex("N*s/m"), unit_latex("m**3/(s*Pa)"))
    \mathrm{N\,s/m} \mathrm{m^{3}/(s\,Pa)}
    """
    if unit in ("", "1"):
        return "1" if unit else ""
    unit = re.sub(r"\s*([*/()^·⋅])\s*", r"\1", " ".join(unit.split()))
    parts, place = [], 0
    while place < len(unit):
        found = _UNIT.match(unit, place)
        if found is None:
            return rf"\text{{{tex_text(unit)}}}"
        power_sign, power, name, digits, times, mark = found.groups()
        if power_sign:
            parts.append(f"^{{{power}}}")
        elif name:
            parts.append(tex_text(name))
        elif times:
            parts.append(r"\," if parts else "")
        else:
            parts.append(digits or mark)
        place = found.end()
    return rf"\mathrm{{{''.join(parts)}}}"


def number_latex(value: Fraction) -> str:
    r"""An exact number as a decimal, a power of ten or a fraction.

    >>> print(number_latex(Fraction(96000)), number_latex(Fraction(-1, 3)), number_latex(Fraction(3, 10**12)))
    96000 -\frac{1}{3} 3 \cdot 10^{-12}
    """
    sign, digits = ("-" if value < 0 else ""), digits_of(abs(value))
    if digits.below:
        return rf"{sign}\frac{{{digits.mantissa}}}{{{digits.below}}}"
    if not digits.power:
        return sign + digits.mantissa
    ten = f"10^{{{digits.power}}}"
    return sign + (rf"{digits.mantissa} \cdot {ten}" if digits.mantissa else ten)
