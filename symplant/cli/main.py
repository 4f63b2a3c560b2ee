"""The command line: `symplant COMMAND PLANT.toml [options]`."""

from __future__ import annotations

import sys

import click

from symplant.cli.derive import derive
from symplant.cli.hidden import hidden
from symplant.cli.report import report
from symplant.cli.stability import stability
from symplant.cli.zeros import zeros
from symplant.version import __version__

__all__ = ["main", "symplant"]


@click.group(
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
    epilog="Exit status: 0 done; 1 a claim is refuted or a check fails; 2 the input is at fault; "
    "3 stopped by a budget or by Ctrl-C.",
)
@click.version_option(__version__, message="symplant %(version)s")
def symplant() -> None:
    """Closed forms for plants whose matrices carry physical parameters.

    A plant file (TOML) holds the matrices with their letters; symplant derives poles, zeros and
    stability conditions as formulas, proves them, and writes LaTeX that it has read back and checked.

    Shell completion: put the output of `_SYMPLANT_COMPLETE=bash_source symplant` (zsh_source,
    fish_source) into your shell's start-up file.
    """


for _command in (derive, stability, zeros, hidden, report):
    symplant.add_command(_command)


def main() -> None:
    """Entry point of the `symplant` script."""
    sys.exit(symplant(prog_name="symplant"))


if __name__ == "__main__":
    main()
