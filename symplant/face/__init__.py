"""The Python face: a plant, and results that carry the names of the machine answers.

Commands use `work` alone, so nothing is imported here.
"""
