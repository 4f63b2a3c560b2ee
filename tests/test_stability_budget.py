"""Work that is bounded: by operations within a condition, by the clock from outside."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from symplant.algebra.effort import LOW, NORMAL
from symplant.derivation.stability import SettledCondition, stability
from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments

ROOT = Path(__file__).resolve().parent.parent


def _wide(n: int) -> list[list[str]]:
    """Letters of unknown sign everywhere: the last determinant of n = 4 has 115,000 terms."""
    return [
        [
            f"(k{i}+a*b)/(m{i}+q*c{i})" if abs(i - j) < 2 else "k1*a**2*b+c2*sin(alpha)*a" if i == 0 else "0"
            for j in range(n)
        ]
        for i in range(n)
    ]


def _model(rows: list[list[str]]) -> Model:
    n = len(rows)
    return model_from_arguments(rows, [["1"]] * n, [["1"] * n])


def test_each_condition_is_handed_out_when_it_is_settled() -> None:
    handed: list[SettledCondition] = []
    stages: list[str] = []
    planned: list[str] = []
    finding = stability(
        _model(_wide(3)), found=handed.append, stage=stages.append, plan=planned.extend, effort=LOW
    )
    names = [c.condition.name for c in handed]
    assert set(names) == {c.name for c in finding.conditions} and len(names) == len(finding.conditions)
    assert {c.condition.status for c in handed} <= {"always", "never", "required", "undecided"}
    assert planned[-2:] == ["what follows from what", "witnesses"]
    assert all(f"the sign of the {name}" in planned for name in names)
    assert "the sign of the Hurwitz determinant 2" in stages


@pytest.mark.slow
def test_a_wide_plant_ends_by_itself() -> None:
    finding = stability(_model(_wide(4)), effort=NORMAL)
    assert finding.verdict in ("conditional", "undecided")
    assert all(c.because for c in finding.conditions)


def test_more_effort_is_never_less_decided() -> None:
    # Positive, but no sum of means and not by the signs of its terms: two letters in all of the plane.
    rows = [["-(x**2*y**4 + x**4*y**2 - 3*x**2*y**2 + 1 + 1/1000)"]]
    low, normal = (stability(_model(rows), effort=effort).verdict for effort in (LOW, NORMAL))
    assert low in ("stable", "undecided") and normal in ("stable", "undecided")
    assert not (low == "stable" and normal == "undecided")


def _run(path: Path, *options: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "symplant.cli.main", "stability", str(path), *options],
        capture_output=True,
        text=True,
        encoding="utf-8",
        cwd=ROOT,
        check=False,
        timeout=120,
    )


@pytest.fixture
def endless(tmp_path: Path) -> Path:
    """A plant that is derived at once and whose last determinant takes longer than anybody waits."""
    rows = _wide(4)
    letters = sorted(_model(rows).letters)
    text = "format = 1\n[parameters]\n" + "".join(f"{x} = {{}}\n" for x in letters)
    n = len(rows)
    text += (
        f"[matrices]\nA = {json.dumps(rows)}\nB = {json.dumps([['1']] * n)}\nC = {json.dumps([['1'] * n])}\n"
    )
    path = tmp_path / "endless.toml"
    path.write_text(text, encoding="utf-8")
    return path


@pytest.mark.parametrize("options", [(), ("--json",)])
def test_a_budget_prints_the_conditions_settled_so_far(endless: Path, options: tuple[str, ...]) -> None:
    done = _run(endless, "--effort", "high", "--max-seconds", "8", *options)
    assert done.returncode == 3 and "Traceback" not in done.stderr
    if options:
        answer = json.loads(done.stdout)
        assert [c["name"] for c in answer["conditions"]][:1] == ["coefficient of s^0"]
        assert all(c["status"] and c["because"] for c in answer["conditions"])
        unfinished = answer["stopped"]["unfinished"]
    else:
        assert "coefficient of s^0: required" in done.stdout
        unfinished = done.stderr.split("not finished:")[1]
    assert "witnesses" in unfinished  # a list of stages, or the sentence that names them
