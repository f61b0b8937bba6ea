"""Steady one-dimensional conduction with heat generated inside: walls, cylinders and spheres, as arrays of cases.

SI units; temperatures in °C. Arrays in, arrays out, one case an element; one case is an array of length one.
"""

from ingle.cases import Cases, Face, FaceKind, Layer
from ingle.shapes import Shape
from ingle.solution import Status
from ingle.steady import QUANTITIES, Answers, profile, steady

__all__ = ["QUANTITIES", "Answers", "Cases", "Face", "FaceKind", "Layer", "Shape", "Status", "profile", "steady"]
