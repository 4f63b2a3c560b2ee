"""Zeros of all kinds, hidden modes, and their dependence on the letters."""
