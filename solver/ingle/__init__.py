"""Steady one-dimensional conduction with heat generated inside: walls, cylinders and spheres, as arrays of cases.

SI units; temperatures in °C. Arrays in, arrays out, one case an element; one case is an array of length one.
"""

from ingle.cases import Bar, Cases, Face, FaceKind, Layer
from ingle.shapes import Shape
from ingle.solution import Status
from ingle.sources import Conductor, Drive, Generation, Resistivity
from ingle.steady import QUANTITIES, Answers, profile, steady

__all__ = [
    "QUANTITIES", "Answers", "Bar", "Cases", "Conductor", "Drive", "Face", "FaceKind", "Generation", "Layer", "Resistivity", "Shape",
    "Status", "profile", "steady",
]  # fmt: skip
