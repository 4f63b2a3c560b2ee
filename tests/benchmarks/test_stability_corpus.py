"""The stability corpus in one run: verdict, conditions that bind, how they were settled, time, disagreements.

pytest tests/benchmarks/test_stability_corpus.py -q -s
"""

from __future__ import annotations

import json
import re
import subprocess
import sys
import time
from collections import Counter
from dataclasses import dataclass
from fractions import Fraction
from random import Random
from typing import Any

import numpy as np
import scipy.linalg
from flint import acb_mat, arb, fmpq
from stability_plants import corpus

from symplant.algebra.decide_search import SignTable
from symplant.algebra.decide_solver import smt_text
from symplant.algebra.enclosure import tree_ball, working_precision
from symplant.algebra.text import node_text
from symplant.derivation.derive import derive
from symplant.derivation.pencil import build_pencil
from symplant.derivation.stability import StabilityFinding, stability
from symplant.derivation.stability.candidates import candidates
from symplant.derivation.stability.subject import subject_of
from symplant.plant.model import Model

POINTS, SOLVER_SECONDS = 1000, 20
#: A longer polynomial is not handed to z3 in raw determinants.
LONGEST = 150


@dataclass
class Row:
    """What came of one plant."""

    name: str
    finding: StabilityFinding
    seconds: float
    compared: int
    disagreements: int
    raw: tuple[str, float] | None


def test_corpus() -> None:
    rows = [_run(name, model) for name, model in corpus()]
    _print(rows)
    assert len(rows) >= 40
    decided = [row for row in rows if row.finding.verdict != "undecided"]
    assert len(decided) >= 0.9 * len(rows)
    assert not [row.name for row in rows if row.disagreements]
    assert max(row.seconds for row in rows) < 60
    for row in rows:
        if re.fullmatch(r"damped chain [1-4]", row.name):
            assert row.finding.verdict == "stable" and not row.finding.binding


def _run(name: str, model: Model) -> Row:
    derivation = derive(model)
    began = time.perf_counter()
    finding = stability(derivation)
    seconds = time.perf_counter() - began
    compared, disagreements = _against_eigenvalues(model, finding)
    row = Row(name, finding, seconds, compared, disagreements, _raw(model))
    print(f"  {name}: {finding.verdict}, {seconds:.2f} s", file=sys.stderr, flush=True)
    return row


def _print(rows: list[Row]) -> None:
    print(
        f"\n{'plant':34} {'verdict':12} {'bind':>4} {'time':>8} {'z3, raw conditions':>22}  points  settled"
    )
    for row in rows:
        how = Counter(c.status for c in row.finding.conditions)
        raw = "-" if row.raw is None else f"{row.raw[0]} {row.raw[1]:.2f} s, x{row.raw[1] / row.seconds:.1f}"
        print(
            f"{row.name:34} {row.finding.verdict:12} {len(row.finding.binding):4} {row.seconds:6.2f} s "
            f"{raw:>22}  {row.compared:5}{f' ({row.disagreements} WRONG)' if row.disagreements else ''}  "
            + ", ".join(f"{count} {status}" for status, count in sorted(how.items()))
        )
        for reason in sorted(
            {c.because for c in row.finding.conditions if c.status in ("always", "implied")}
        ):
            print(f"{'':36}{reason[:110]}")
    decided = sum(row.finding.verdict != "undecided" for row in rows)
    ours = sum(row.seconds for row in rows if row.raw)
    theirs = sum(row.raw[1] for row in rows if row.raw)
    answered = sum(row.raw is not None and row.raw[0] in ("sat", "unsat") for row in rows)
    print(
        f"{len(rows)} plants, {decided} decided ({100 * decided / len(rows):.0f} %), longest "
        f"{max(row.seconds for row in rows):.1f} s, {sum(row.compared for row in rows)} points compared, "
        f"{sum(row.disagreements for row in rows)} disagreements; z3 on the raw conditions answered "
        f"{answered} of {sum(row.raw is not None for row in rows)} in {theirs / ours:.1f} times our time"
    )


def _against_eigenvalues(model: Model, finding: StabilityFinding) -> tuple[int, int]:
    """Random points of the box at which floating point is sure, and those where we say otherwise."""
    sample = _sample(model)
    A, E = _matrices(model, sample)
    elements = [c.element for c in finding.binding]
    signs = SignTable(finding.ring, elements).signs(sample)
    never = any(c.status == "never" for c in finding.conditions)
    compared = wrong = 0
    for a, e, row, point in zip(A, E, signs, sample, strict=True):
        if not (np.isfinite(a).all() and np.isfinite(e).all()) or (len(row) and not row.all()):
            continue
        poles = np.linalg.eigvals(a) if model.E is None else scipy.linalg.eigvals(a, e)
        poles = poles[np.isfinite(poles) & (np.abs(poles) < 1e12)]
        if not len(poles):
            continue
        margin = float(max(np.abs(poles)) - 1 if model.discrete else max(poles.real))
        if abs(margin) < 1e-6 * (1 + max(np.abs(poles))):
            continue
        compared += 1
        ours = not never and bool((row > 0).all())
        if ours != (margin < 0):
            # Badly scaled matrices cost double precision all its digits: look again with 100 of them.
            wrong += ours != (_precise_margin(model, point) < 0)
    return compared, wrong


def _precise_margin(model: Model, point: dict[str, Fraction]) -> float:
    """The margin by eigenvalues in 333 bits; those of (A, E) by 1/(s - 1), which drops infinite ones."""
    with working_precision(333):
        letters = {name: arb(fmpq(v.numerator, v.denominator)) for name, v in point.items()}
        A, E = (
            None if matrix is None else acb_mat([[tree_ball(x, letters) for x in row] for row in matrix])
            for matrix in (model.A, model.E)
        )
        if E is None:
            poles = A.eig(algorithm="approx", nonstop=True)
        else:
            found = (A - E).solve(E).eig(algorithm="approx", nonstop=True)
            poles = [1 + 1 / mu for mu in found if float(abs(mu).mid()) > 1e-60]
        return max(float(abs(s).mid()) - 1 if model.discrete else float(s.real.mid()) for s in poles)


def _sample(model: Model) -> list[dict[str, Fraction]]:
    random = Random(7)
    sample = []
    for _ in range(POINTS):
        point = {}
        for p in model.parameters:
            interval = p.interval
            if p.lower is not None and p.upper is not None:
                value = p.lower + Fraction(random.randint(0, 1000), 1000) * (p.upper - p.lower)
            else:
                value = Fraction(f"{10 ** random.uniform(-1, 1):.4f}") * Fraction(p.nominal or 1)
                value = value if interval.contains(value) or not interval.contains(-value) else -value
                if interval.sign.value in ("real", "nonzero") and random.random() < 0.5:
                    value = -value
            if not interval.contains(value):
                value = next(v for v in (p.nominal, p.lower, p.upper, Fraction(1)) if v is not None)
            point[p.name] = value
        sample.append(point)
    return sample


def _matrices(model: Model, sample: list[dict[str, Fraction]]) -> tuple[Any, Any]:
    """A and E at all points at once; the texts are those of this corpus alone."""
    names = {name: f"v{i}" for i, name in enumerate(model.letters)}
    values: dict[str, Any] = {v: np.array([float(p[n]) for p in sample]) for n, v in names.items()}
    values |= {f: getattr(np, f) for f in ("sin", "cos", "tan", "exp", "log", "sqrt", "sinh", "cosh", "tanh")}
    values |= {"atan": np.arctan, "pi": np.pi}

    def whole(matrix: Any) -> Any:
        result = np.zeros((len(sample), len(matrix), len(matrix[0])))
        for i, row in enumerate(matrix):
            for j, entry in enumerate(row):
                text = re.sub(r"[A-Za-z_]\w*", lambda m: names.get(m[0], m[0]), node_text(entry))
                with np.errstate(all="ignore"):
                    result[:, i, j] = eval(text, {"__builtins__": {}}, values)
        return result

    n = len(model.A)
    E = np.broadcast_to(np.eye(n), (len(sample), n, n)) if model.E is None else whole(model.E)
    return whole(model.A), E


def _raw(model: Model) -> tuple[str, float] | None:
    """Everything in one question: is there a point of the box where one of the raw conditions fails?"""
    subject = subject_of(build_pencil(model))
    parts = [part for part in subject.parts if not part.symmetric]
    if any(len(part.polynomial.element) > LONGEST for part in parts):
        return None  # the determinants alone would take gigabytes
    elements = [c.make() for i, part in enumerate(parts) for c in candidates(subject, part, i)]
    elements = [e for e in elements if e and not e.is_constant()]
    if not elements:
        return None
    text, _ = smt_text(subject.ring, [], [], subject.nonzero, any_fails=elements)
    began = time.perf_counter()
    try:
        done = subprocess.run(
            [sys.executable, "-m", "symplant.algebra.solver_child"],
            input=json.dumps({"text": text, "names": [], "limit": 0}),
            capture_output=True,
            text=True,
            timeout=SOLVER_SECONDS,
            check=False,
        )
        answer = str(json.loads(done.stdout)["answer"])
    except subprocess.TimeoutExpired:
        answer = "no answer"
    return answer, time.perf_counter() - began
