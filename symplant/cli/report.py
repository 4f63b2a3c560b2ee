"""`symplant report`: the LaTeX report of a plant, compiled where a TeX is installed."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import TYPE_CHECKING

import click

from symplant.cli.derive import Keeper
from symplant.cli.session import Session, dump, page_width, plant_command, speaks_unicode

if TYPE_CHECKING:
    from symplant.cli.budget import Channel

__all__ = ["report"]


@click.command(short_help="LaTeX report, every formula of it read back.")
@plant_command
@click.option(
    "-o",
    "--output",
    "folder",
    type=click.Path(path_type=Path),
    required=True,
    metavar="FOLDER",
    help="Where to write; made if it is not there, other files in it are left alone.",
)
def report(
    plant: Path, as_json: bool, folder: Path, max_seconds: float | None, max_memory: int | None
) -> None:
    """Write the report: plant, closed forms, stability conditions, checks.

    Every formula in it has been read back from its LaTeX and compared with what was derived.
    """
    session = Session("report", plant, as_json, max_seconds, max_memory)
    width, unicode = page_width(), speaks_unicode()

    def work(channel: Channel) -> int:
        from symplant.checking.numerical_process import NumericalProcess

        with NumericalProcess() as numerics:  # first of all: its libraries load slowly
            from symplant.face.work import derive_plan, stability_and_check
            from symplant.reading.plant_file import read_plant_file
            from symplant.writing.files import require_folder_target
            from symplant.writing.notation import Notation

            require_folder_target(folder)
            model = read_plant_file(plant)
            channel.plan([*derive_plan(model, stability=True), "the read-back", "the files"])
            keeper = Keeper(channel, Notation(model), as_json, width, unicode)
            found = stability_and_check(model, numerics, channel.stage, keeper.found)
        from symplant.writing.report import compose_report, write_report

        channel.stage("the read-back")
        composed = compose_report(
            found.derived.derivation, found.derived.substitution, found.finding, found.checks
        )
        channel.stage("the files")
        written = write_report(composed, folder, channel)
        failed = [check for check in composed.checks if not check.passed]
        if as_json:
            from symplant.writing.answer import report_answer

            channel.out(dump(report_answer(model, written, composed.checks)))
        else:
            lines = [f"CHECK FAILED: {check.what}: {check.detail}" for check in failed]
            lines.append(f"report     {written.main}")
            if written.pdf is not None:
                lines.append(f"pdf        {written.pdf}")
            lines += [f"note       {written.note}"] if written.note else []
            lines.append(f"checks     {len(composed.checks) - len(failed)} of {len(composed.checks)} passed")
            channel.out("\n".join(lines) + "\n")
        return 1 if failed else 0

    sys.exit(session.run(work))
