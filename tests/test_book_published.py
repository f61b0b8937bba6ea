"""Ordinary formulas come out as the open definitions of their functions say."""

from __future__ import annotations

import pytest
import sheets
from published.ordinary_formulas import CELLS, RESULTS

FORMULAS = {formula: (clause, value) for clause, each in RESULTS.items() for formula, value in each.items()}
ROWS = {formula: row for row, formula in enumerate(FORMULAS, 1)}


@pytest.fixture(scope="module")
def filled(tmp_path_factory: pytest.TempPathFactory) -> sheets.Filled:
    """One workbook with every formula, in column H."""
    cells = dict(CELLS) | {f"H{row}": f"={formula}" for formula, row in ROWS.items()}
    return sheets.filled(tmp_path_factory.mktemp("published"), cells)


def test_there_are_enough_of_them() -> None:
    assert len(FORMULAS) == sum(map(len, RESULTS.values())) > 150


@pytest.mark.parametrize("formula", FORMULAS)
def test_ordinary_formula(filled: sheets.Filled, formula: str) -> None:
    _, expected = FORMULAS[formula]
    cell = f"H{ROWS[formula]}"
    assert [each.reason for each in filled.report.not_computed if each.cell == cell] == []
    found = filled.values[cell]
    if isinstance(expected, str) and expected.startswith("#"):
        assert str(found) == expected
    elif isinstance(expected, (bool, str)):
        assert found == expected
        assert type(found) is type(expected)
    else:
        assert not isinstance(found, bool)
        assert found == pytest.approx(expected, rel=1e-12, abs=1e-14)
