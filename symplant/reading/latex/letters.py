"""Which LaTeX commands are letters, which dress a letter, and which are functions."""

from __future__ import annotations

__all__ = [
    "DRESSES",
    "FUNCTION_COMMANDS",
    "FUNCTION_WORDS",
    "GREEK",
    "LETTER_COMMANDS",
    "UNKNOWN_FUNCTIONS",
    "words",
]


def words(*lines: str) -> tuple[str, ...]:
    """The words of some lines.

    >>> words("sin cos", "tan")
    ('sin', 'cos', 'tan')
    """
    return tuple(word for line in lines for word in line.split())


#: Greek letters that have a command of their own.
GREEK = frozenset(
    words(
        "alpha beta gamma delta epsilon zeta eta theta iota kappa lambda mu nu xi pi rho sigma tau upsilon",
        "phi chi psi omega Gamma Delta Theta Lambda Xi Pi Sigma Upsilon Phi Psi Omega",
    )
)

#: Commands that stand for one letter.
LETTER_COMMANDS = frozenset(
    "\\" + name
    for name in (
        *GREEK,
        *words(
            "varepsilon vartheta varpi varrho varsigma varphi varkappa digamma",
            "varGamma varDelta varTheta varLambda varXi varPi varSigma varUpsilon varPhi varPsi varOmega",
            "ell hbar hslash imath jmath Re Im wp mho eth",
        ),
    )
)

#: Accents and typefaces: with their argument they make one letter.
DRESSES = frozenset(
    "\\" + name
    for name in words(
        "dot ddot dddot ddddot bar hat tilde vec check breve acute grave mathring",
        "overline underline widehat widetilde overrightarrow",
        "mathrm mathit mathbf mathsf mathtt mathbb mathcal mathscr mathfrak mathnormal boldsymbol",
        "textit textbf textsf texttt",
    )
)

#: LaTeX function names and the functions of expression trees that they mean; \log is the natural logarithm.
FUNCTION_COMMANDS = {
    **{name: name for name in words("sin cos tan exp log sinh cosh tanh atan")},
    "ln": "log",
    "arctan": "atan",
}

#: Functions that people write and that expression trees do not have, with what to write instead.
UNKNOWN_FUNCTIONS = {
    "cot": r"\frac{\cos(x)}{\sin(x)}",
    "sec": r"\frac{1}{\cos(x)}",
    "csc": r"\frac{1}{\sin(x)}",
    "coth": r"\frac{\cosh(x)}{\sinh(x)}",
    "lg": r"\log_{10}(x)",
    **dict.fromkeys(words("arcsin arccos asin acos arctg tg sgn sign abs min max arg lim sup inf"), ""),
}

#: Runs of letters that are a function or a word rather than a product.
FUNCTION_WORDS = frozenset(
    (*FUNCTION_COMMANDS, *UNKNOWN_FUNCTIONS, *words("sqrt det adj and for the mod deg"))
)
