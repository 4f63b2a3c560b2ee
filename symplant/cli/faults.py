"""Faults of the input as a reader of a terminal or a program wants to see them."""

from __future__ import annotations

import json
from collections.abc import Sequence

from symplant.errors import Fault

__all__ = ["faults_json", "faults_text"]


def faults_text(faults: Sequence[Fault], source: str) -> str:
    """Every fault with its place, reason and suggestion.

    >>> print(faults_text([Fault("time", "unknown value 'sampled'", "continuous or discrete")], "fan.toml"))
    symplant: fan.toml has 1 fault
    <BLANKLINE>
      time
          unknown value 'sampled'
          continuous or discrete
    <BLANKLINE>
    """
    count = f"{len(faults)} fault" + ("" if len(faults) == 1 else "s")
    lines = [f"symplant: {source} has {count}", ""]
    for fault in faults:
        where = fault.place
        if fault.file and fault.file != source:
            where = f"{fault.file}  {fault.place}".rstrip()
        lines.append(f"  {where}" if where else "  the file")
        lines += [f"      {part}" for part in (fault.reason, fault.suggestion) if part]
    return "\n".join(lines) + "\n"


def faults_json(command: str, faults: Sequence[Fault]) -> str:
    """The same for a program."""
    from symplant.writing.answer import fault_answer

    return json.dumps(fault_answer(command, faults), indent=2, ensure_ascii=False) + "\n"
