"""The LaTeX report: whole, reproducible, compiled without a box that runs off the page."""

from __future__ import annotations

import re
import shutil
import subprocess
from dataclasses import replace
from pathlib import Path

import pytest

from symplant import CheckError, Plant
from symplant.algebra.verdict import Verdict
from symplant.derivation.stability import stability
from symplant.face.work import derive_and_check
from symplant.reading.plant_file import read_plant_file, read_plant_text
from symplant.writing.report import compose_report, fingerprint, write_report

ROOT = Path(__file__).resolve().parent.parent
EXAMPLES = sorted((ROOT / "examples").glob("*.toml"))

NASTY = r"""
format = 1
title = "50 % of {this} & that_one \\input{/etc/passwd} $x^2$ ~ # ω € \\end{document}"
states = ["x", { name = "v", latex = "\\dot{x}", about = "a_b % rate & more" }]
inputs = [{ name = "F", unit = "N·m/(rad*s²)", about = "\\write18{ls}" }]
outputs = ["y"]
[parameters]
m = { unit = "kg", range = [1, 3], about = "mass #1 — “heavy”", nominal = 2 }
D_p = { latex = "D'", sign = "positive", unit = "N*s/m" }
e = { sign = "positive", about = "a letter called e" }
K_t = { latex = "K_{\\mathrm{t}}", nominal = 3e-12 }
[matrices]
A = [["0", "1"], ["-K_t*exp(-e)/m", "-D_p/m"]]
B = [["0"], ["1/m"]]
C = [["1", "0"]]
"""


def composed(model):
    derived = derive_and_check(model)
    finding = stability(derived.derivation)
    return compose_report(derived.derivation, derived.substitution, finding, derived.checks)


def tex_log(folder):
    """What TeX says of a report, in full; empty where no TeX is installed."""
    program = shutil.which("pdflatex")
    if program is None:
        return ""
    subprocess.run(
        [program, "-interaction=nonstopmode", "report.tex"], cwd=folder, capture_output=True, check=True
    )
    return (folder / "report.log").read_text(encoding="utf-8", errors="replace")


@pytest.mark.parametrize("path", EXAMPLES, ids=[path.stem for path in EXAMPLES])
def test_reports_of_the_examples(path, tmp_path):
    report = composed(read_plant_file(path))
    assert report.passed
    assert {str(c.verdict) for c in report.checks} <= {"proved", "agrees"}
    assert any("read back" in check.method for check in report.checks)
    written = write_report(report, tmp_path / "out")
    assert (written.pdf is not None) == (shutil.which("pdflatex") is not None), written.note
    left = {item.name for item in (tmp_path / "out").iterdir()}
    assert left == {"report.tex"} | ({"report.pdf"} if written.pdf else set())
    assert not re.findall(r"Overfull \\hbox \((\d+)", tex_log(tmp_path / "out"))
    text = written.main.read_text(encoding="utf-8")
    for part in ("Cautions", "Nomenclature", "Characteristic polynomial", "Stability", "tab:substitution"):
        assert part in text


def test_two_runs_write_the_same_bytes(tmp_path):
    for name in ("one", "two"):
        write_report(composed(read_plant_file(EXAMPLES[0])), tmp_path / name)
    for item in (tmp_path / "one").iterdir():
        assert item.read_bytes() == (tmp_path / "two" / item.name).read_bytes()


def test_text_of_the_user_is_only_ever_typeset(tmp_path):
    report = composed(read_plant_text(NASTY))
    assert report.passed
    for command in (r"\input{/etc", r"\write18", r"\end{document} "):
        assert command not in report.text
    assert report.text.count(r"\end{document}") == 1
    written = write_report(report, tmp_path / "out")
    assert (written.pdf is not None) == (shutil.which("pdflatex") is not None), written.note


def test_spellings_of_the_user_are_printed():
    text = composed(read_plant_text(NASTY)).text
    assert "D'" in text and r"K_{\mathrm{t}}" in text and r"\mathrm{e}^{-e}" in text


def test_a_failed_check_is_said_first(tmp_path):
    derived = derive_and_check(read_plant_file(EXAMPLES[0]))
    checks = (
        replace(derived.checks[0], verdict=Verdict.REFUTED, detail="at k = 1: 2, 3"),
        *derived.checks[1:],
    )
    finding = stability(derived.derivation)
    report = compose_report(derived.derivation, derived.substitution, finding, checks)
    assert not report.passed
    assert report.text.index("A check of these results failed") < report.text.index(r"\section{Scope}")


def test_a_misprint_is_found_by_the_read_back(monkeypatch):
    from symplant.writing.formula import FormulaWriter

    honest = FormulaWriter.polynomial

    def misprinted(self, lhs, element):
        formula = honest(self, lhs, element)
        return replace(formula, lines=(formula.lines[0].replace("+", "-", 1), *formula.lines[1:]))

    monkeypatch.setattr(FormulaWriter, "polynomial", misprinted)
    report = composed(read_plant_file(ROOT / "examples/harvester_bucking.toml"))
    refuted = [check for check in report.checks if check.verdict is Verdict.REFUTED]
    assert refuted and any("characteristic polynomial" in check.what for check in refuted)


def test_the_face_raises_when_a_check_fails(monkeypatch, tmp_path):
    plant = Plant.from_file(EXAMPLES[0])
    plant.derive()
    derived = plant._derived
    bad = replace(derived.checks[0], verdict=Verdict.REFUTED)
    plant._derived = replace(derived, checks=(bad, *derived.checks[1:]))
    with pytest.raises(CheckError):
        plant.report(tmp_path / "out")


def test_the_fingerprint_follows_the_plant():
    text = EXAMPLES[0].read_text(encoding="utf-8")
    one = fingerprint(read_plant_text(text))
    assert one == fingerprint(read_plant_text(text + "\n# a comment\n"))
    assert one != fingerprint(read_plant_text(text.replace('["k", "-(a + b)"', '["k", "-(a - b)"')))


def test_multipliers_and_assumptions_are_read_back_too():
    from symplant.derivation.derive import derive
    from symplant.writing.printing import Printer
    from symplant.writing.report_results import assumptions, characteristic

    text = NASTY.replace("-K_t*exp(-e)/m", "-sqrt(u)/m").replace("[parameters]", "[parameters]\nu = {}")
    derivation = derive(read_plant_text(text))
    printer = Printer(derivation.model, derivation.ring)
    characteristic(derivation, printer)
    assumptions(derivation, printer)
    assert {"multiplier", "assumed for real values"} <= {printed.what for printed in printer.printed}
    assert composed(derivation.model).passed
