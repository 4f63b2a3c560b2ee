"""The LaTeX report: composed, read back, written whole, and compiled where a TeX is installed."""

from __future__ import annotations

import hashlib
import os
import shutil
import subprocess
from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

from symplant.algebra.text import node_text
from symplant.algebra.verdict import Check, Verdict
from symplant.checking.readback import read_back
from symplant.version import __version__
from symplant.writing.files import StagingLog, staged_folder
from symplant.writing.printing import Printer
from symplant.writing.report_checks import check_rows, point_rows, substitution_rows
from symplant.writing.report_plant import equations, matrix_displays, nomenclature, scope, vectors
from symplant.writing.report_results import (
    assumptions,
    channel_sections,
    characteristic,
    zero_section,
)
from symplant.writing.report_stability import stability_section
from symplant.writing.tex_text import tex_text

if TYPE_CHECKING:
    from symplant.checking.substitution import Substitution
    from symplant.derivation.derive import Derivation
    from symplant.derivation.stability import StabilityFinding
    from symplant.plant.model import Model

__all__ = ["Report", "compose_report", "fingerprint", "write_report"]

MAIN = "report.tex"
PDF = "report.pdf"
#: Seconds that a run of TeX may take; a report takes one or two.
TEX_SECONDS = 120


@dataclass(frozen=True)
class Report:
    """A report as text, with every check made, those of the printed formulas included."""

    text: str
    checks: tuple[Check, ...]

    @property
    def passed(self) -> bool:
        """Whether no check found anything wrong."""
        return all(check.passed for check in self.checks)


@dataclass(frozen=True)
class WrittenReport:
    """Where a report was written: the main LaTeX file and, if a TeX was found, the PDF."""

    main: Path
    pdf: Path | None
    note: str


def compose_report(
    derivation: Derivation,
    substitution: Substitution,
    finding: StabilityFinding,
    checks: tuple[Check, ...],
    stage: Callable[[str], None] = lambda name: None,
) -> Report:
    """The report of a plant: every formula in it is read back from its LaTeX and compared."""
    model = derivation.model
    printer = Printer(model, derivation.ring)
    display, note = characteristic(derivation, printer)
    parts: dict[str, Any] = {
        "version": __version__,
        "fingerprint": fingerprint(model),
        "title": tex_text(model.title or "Plant"),
        "scope": scope(model),
        "equation_of_state": equations(model),
        "state_line": vectors(model, printer.spelling),
        "matrices": matrix_displays(derivation, printer),
        "nomenclature": nomenclature(model, printer.spelling),
        "characteristic_intro": "",
        "characteristic": display,
        "characteristic_note": note,
        "channels_intro": _channels_intro(derivation),
        "channels": channel_sections(derivation, printer),
        "zero": zero_section(derivation, printer),
        "stability": stability_section(finding, printer),
        "assumptions": assumptions(derivation, printer),
    }
    stage("reading the printed formulas back")
    every = (*checks, *read_back(printer.printed, printer.spelling.inverse, substitution.points))
    parts |= {
        "failures": [check for check in every if check.verdict is Verdict.REFUTED],
        "checks": check_rows(every),
        "points": point_rows(substitution.points, printer.spelling),
        "substitution": substitution_rows(substitution),
    }
    return Report(_template().render(parts) + "\n", every)


def write_report(
    report: Report,
    folder: Path,
    log: StagingLog | None = None,
    stage: Callable[[str], None] = lambda name: None,
) -> WrittenReport:
    """Write a report into a folder, whole or not at all; compile it where a TeX is installed.

    Errors: InputError if the folder cannot be written.
    """
    with staged_folder(folder, log) as room:
        (room / MAIN).write_text(report.text, encoding="utf-8")
        stage("compiling the report")
        note = _compiled(room)
        compiled = (room / PDF).exists()
    return WrittenReport(folder / MAIN, folder / PDF if compiled else None, note)


def fingerprint(model: Model) -> str:
    """Sixteen hexadecimal digits that change when a matrix, a letter or a range changes.

    >>> from symplant.algebra.expression import Name
    >>> from symplant.plant.model import Model
    >>> one = ((Name("k"),),)
    >>> len(fingerprint(Model(one, one, one, None, None, (), (), (), ())))
    16
    """
    lines = [f"discrete={model.discrete}"]
    for name, matrix in model.matrices.items():
        lines += [f"{name}={[[node_text(entry) for entry in row] for row in matrix]}"]
    lines += [repr(parameter) for parameter in model.parameters]
    lines += [f"{s.name},{s.unit}" for s in (*model.states, *model.inputs, *model.outputs)]
    return hashlib.sha256("\n".join(lines).encode()).hexdigest()[:16]


def _channels_intro(derivation: Derivation) -> str:
    s = derivation.model.variable
    middle = rf"\mathbf{{C}}\,\operatorname{{adj}}({s}\,\mathbf{{E}} - \mathbf{{A}})\,\mathbf{{B}}"
    if derivation.model.E is None:
        middle = middle.replace(r"\mathbf{E}", r"\mathbf{I}")
    return (
        rf"Numerators are those of ${middle}$ (and the direct feedthrough), denominators those of the same "
        r"determinant; nothing is cancelled."
    )


@cache
def _template() -> Any:
    from jinja2 import Environment, PackageLoader, StrictUndefined

    environment = Environment(
        loader=PackageLoader("symplant.writing"),
        block_start_string=r"\BLOCK{",
        block_end_string="}",
        variable_start_string=r"\VAR{",
        variable_end_string="}",
        comment_start_string=r"\REMARK{",
        comment_end_string="}",
        trim_blocks=True,
        lstrip_blocks=True,
        autoescape=False,  # what comes in is LaTeX already; running text went through tex_text
        undefined=StrictUndefined,
    )
    return environment.get_template("report.tex.j2")


def _compiled(room: Path) -> str:
    """Run TeX in `room`; what became of it, in a sentence."""
    program = shutil.which("pdflatex")
    if program is None:
        return "no pdflatex was found: compile report.tex where there is one"
    # No shell escape, no writing outside the folder, and the same PDF from the same report.
    environment = os.environ | {
        "openout_any": "p",
        "SOURCE_DATE_EPOCH": "0",
        "FORCE_SOURCE_DATE": "1",
        "max_print_line": "1000",
    }
    command = [program, "-no-shell-escape", "-interaction=nonstopmode", "-halt-on-error", MAIN]
    try:
        for _ in range(2):  # the second run knows the widths of the tables and the references
            done = subprocess.run(
                command,
                cwd=room,
                env=environment,
                stdin=subprocess.DEVNULL,
                capture_output=True,
                timeout=TEX_SECONDS,
                check=False,
            )
            if done.returncode:
                break
    except (OSError, subprocess.TimeoutExpired) as error:
        return f"pdflatex could not be run: {error}"
    finally:
        log = room / "report.log"
        reason = _first_error(log)
        for ending in (".aux", ".log", ".out"):
            (room / f"report{ending}").unlink(missing_ok=True)
    if done.returncode:
        (room / PDF).unlink(missing_ok=True)
        return f"pdflatex could not compile the report: {reason or 'see its log'}"
    return ""


def _first_error(log: Path) -> str:
    if not log.exists():
        return ""
    lines = log.read_text(encoding="utf-8", errors="replace").splitlines()
    return next((line[2:] for line in lines if line.startswith("! ")), "")
