"""The Python face: a plant, and results that carry the names of the machine answers."""

from symplant.face.plant import Plant

__all__ = ["Plant"]
