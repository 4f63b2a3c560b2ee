"""The three ways in which a mode hides."""

from __future__ import annotations

from typing import Literal, TypeAlias

__all__ = ["Kind"]

Kind: TypeAlias = Literal["uncontrollable", "unobservable", "both"]
