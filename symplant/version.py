"""The version number, alone in a file so that `--version` loads nothing else."""

__version__ = "0.1.0"
