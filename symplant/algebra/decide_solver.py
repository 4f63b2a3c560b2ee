"""Nonlinear real arithmetic by z3, in a process of its own: an exact decision where it comes to one.

"unsat" is believed, and the answer then says "proved by z3"; a point that z3 gives is replayed exactly and
counts only if it holds.  The work is bounded by z3's own count of operations; a limit on time stands
behind it in case that count stops.
"""

from __future__ import annotations

import json
import subprocess
import sys
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from importlib.util import find_spec
from typing import Any

from symplant.algebra.box import Interval
from symplant.algebra.decide_search import letters_in
from symplant.algebra.effort import Effort
from symplant.algebra.function_range import tree_range
from symplant.algebra.ring import Element, Ring
from symplant.algebra.value_range import ValueRange, interval_range

__all__ = ["Solved", "smt_text", "solve"]

#: Most terms in all the elements of one question, and most generators.
TERMS, GENERATORS = 400, 12
#: Seconds after which z3 is taken to be lost: it does not count inside every step of its own.
LOST = 8


@dataclass(frozen=True)
class Solved:
    """What z3 said: "unsat", "sat" (with values of the letters), or "unknown"; whether it was asked."""

    answer: str
    values: dict[str, Fraction]
    asked: bool = True


UNKNOWN = Solved("unknown", {}, False)


def solve(
    ring: Ring,
    positive: Sequence[Element],
    not_positive: Sequence[Element],
    effort: Effort,
    nonzero: Sequence[Element] = (),
) -> Solved:
    """Is there a point of the box where some elements are positive and others are not?

    Functions of letters are variables of their own, bounded by what they can be: "unsat" then holds all
    the more, a point says nothing yet.

    >>> from symplant.algebra.effort import NORMAL
    >>> ring = Ring("s", ("a",))
    >>> solve(ring, [], [ring.gen("a") ** 2 + 1], NORMAL).answer
    'unsat'
    """
    elements = [*positive, *not_positive]
    used = ring.used(elements)
    size = sum(len(element) for element in elements)
    if any(max(map(int, element.degrees()), default=0) > effort.solver_degree for element in elements):
        return UNKNOWN
    if not effort.solver or size > TERMS or len(used) > GENERATORS or find_spec("z3") is None:
        return UNKNOWN
    text, names = smt_text(ring, positive, not_positive, nonzero)
    answer = _ask(text, list(names.values()), effort.solver)
    back = {name: key for key, name in names.items()}
    values = {back[name]: Fraction(value) for name, value in answer.get("values", {}).items()}
    return Solved(
        str(answer.get("answer", "unknown")),
        {key: value for key, value in values.items() if key in ring.letters},
    )


def smt_text(
    ring: Ring,
    positive: Sequence[Element],
    not_positive: Sequence[Element],
    nonzero: Sequence[Element] = (),
    any_fails: Sequence[Element] = (),
) -> tuple[str, dict[str, str]]:
    """The question in SMT-LIB, and the names of its variables by generator.

    Of `any_fails` at least one is not positive.
    """
    elements = [*positive, *not_positive, *any_fails]
    used = ring.used(elements)
    keys = sorted(used | set(letters_in(ring, elements)), key=lambda key: ring.position[key])
    names = {key: f"v{number}" for number, key in enumerate(keys)}
    avoided = [e for e in nonzero if ring.used([e]) <= used]
    lines = [f"(declare-fun {name} () Real)" for name in names.values()]
    lines += _bounds(ring, names)
    lines += _relations(ring, names)
    lines += [f"(assert (> {_text(ring, e, names)} 0.0))" for e in positive]
    lines += [f"(assert (<= {_text(ring, e, names)} 0.0))" for e in not_positive]
    lines += [f"(assert (not (= {_text(ring, e, names)} 0.0)))" for e in avoided]
    if any_fails:
        one = " ".join(f"(<= {_text(ring, e, names)} 0.0)" for e in any_fails)
        lines.append(f"(assert (or {one}))")
    return "\n".join(lines), names


def _ask(text: str, names: Sequence[str], limit: int) -> dict[str, Any]:
    question = json.dumps({"text": text, "names": names, "limit": limit})
    try:
        done = subprocess.run(
            [sys.executable, "-m", "symplant.algebra.solver_child"],
            input=question,
            capture_output=True,
            text=True,
            timeout=LOST,
            check=False,
        )
        answer = json.loads(done.stdout)
    except (OSError, subprocess.TimeoutExpired, ValueError):
        return {}
    return answer if isinstance(answer, dict) else {}


def _bounds(ring: Ring, names: dict[str, str]) -> list[str]:
    letters = {x: interval_range(ring.box.intervals.get(x, Interval())) for x in ring.letters}
    lines = []
    for key, name in names.items():
        values = letters.get(key) or tree_range(ring.meanings[ring.position[key]], letters)
        lines += _bound(name, values)
        if key in ring.letters and ring.box.sign(key).is_nonzero and values.low is values.high is None:
            lines.append(f"(assert (not (= {name} 0.0)))")
        sign = ring.signs[ring.position[key]]
        if key not in ring.letters and sign.is_nonnegative:
            lines += _bound(name, interval_range(Interval(declared=sign)))
    return lines


def _bound(name: str, values: ValueRange) -> list[str]:
    lines = []
    if values.low is not None:
        lines.append(f"(assert ({'>=' if values.low_closed else '>'} {name} {_number(values.low)}))")
    if values.high is not None:
        lines.append(f"(assert ({'<=' if values.high_closed else '<'} {name} {_number(values.high)}))")
    return lines


def _relations(ring: Ring, names: dict[str, str]) -> list[str]:
    """The square of a root, and sine and cosine on the unit circle, where all of it is in the question."""
    lines = []
    for function in ring.functions:
        if function.key not in names or function.square is None:
            continue
        square = ring.element(*function.square)
        if ring.used([square]) <= set(names):
            own = names[function.key]
            lines.append(f"(assert (= (* {own} {own}) {_text(ring, square, names)}))")
    return lines


def _text(ring: Ring, element: Element, names: dict[str, str]) -> str:
    terms = []
    for exponents, value in element.to_dict().items():
        factors = [_number(Fraction(int(value)))]
        for place, exponent in enumerate(exponents):
            if exponent:
                factors += [names[ring.keys[place]]] * int(exponent)
        terms.append(factors[0] if len(factors) == 1 else f"(* {' '.join(factors)})")
    return terms[0] if len(terms) == 1 else f"(+ {' '.join(terms)})"


def _number(value: Fraction) -> str:
    size = (
        f"(/ {abs(value.numerator)}.0 {value.denominator}.0)" if value.denominator > 1 else f"{abs(value)}.0"
    )
    return f"(- {size})" if value < 0 else size
