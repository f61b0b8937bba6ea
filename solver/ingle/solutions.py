"""Which engine solves which cases."""

from __future__ import annotations

from ingle.cases import Cases, Structure
from ingle.march_solution import MarchSolution
from ingle.network_solution import NetworkSolution
from ingle.solution import Solution


def solution_of(cases: Cases, structure: Structure) -> Solution:
    """The march where no source depends on temperature and no side loses heat, else the network of two-ports."""
    return NetworkSolution(cases, structure) if cases.in_temperature else MarchSolution(cases, structure)
