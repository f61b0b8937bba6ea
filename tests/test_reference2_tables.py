"""The wider scope of the reference: headings, errors, and the random tables."""

from __future__ import annotations

import math

import pytest
import reference
from reference import draw2, units2

TABLES = draw2.tables(11, 120)


def ask(answers: list[str], text: str, *cells: object) -> list[object]:
    return reference.answers(answers, text.split(";"), [list(cells)])[0]


def one(answer: str, text: str, *cells: object) -> object:
    return ask([answer], text, *cells)[0]


# --- headings and errors ---

LAYERS = "shape;outer radius 1 [mm];thickness 2 [mm];conductivity [W/mK];"
LAYERS += "conductivity 2 [W/mK];generation [W/m³];outer held [°C]"
CELLS = ["cylinder", 10.0, 2.0, 20.0, 1.0, 1e5, 20.0]


@pytest.mark.parametrize(
    ("heading", "cell", "error"),
    [
        ("outer radius [mm]", 10.0, "#VALUE!"),
        ("radius [mm]", 10.0, "#VALUE!"),
        ("thickness 3 [mm]", 1.0, "#N/A"),
        ("joint 2 [m²K/W]", 1e-4, "#N/A"),
        ("joint 1 [m²K/W]", -1e-4, "#NUM!"),
        ("joint 1 [W/(m²·K)]", 0.0, "#NUM!"),
        ("power 1 [W]", 1.0, "#VALUE!"),
        ("outer emissivity", 0.5, "#VALUE!"),
        ("resistivity 2 [Ω·m]", 1e-6, "#VALUE!"),
        ("current 2 [A]", 1.0, "#N/A"),
        ("side film [W/m²K]", 1.0, "#VALUE!"),
        ("conductivity slope 2 [1/K]", "5", "#VALUE!"),
        ("conductivity slope 2 [W]", None, "#VALUE!"),
        ("generation slope 2 [1/K]", 0.1, "#VALUE!"),
        ("material 2", "copper", "#N/A"),
        ("thickness 5 [mm]", 1.0, "#N/A"),
        ("inner held [°C]", 20.0, "#VALUE!"),
        ("limit 3 [°C]", 90.0, "#N/A"),
        ("outer radius 2 [mm]", 12.0, "#VALUE!"),
    ],
)
def test_one_more_heading(heading: str, cell: object, error: str) -> None:
    assert one("peak [°C]", LAYERS, *CELLS) == pytest.approx(20.0 + 5.0 * math.log(1.2) + 0.125, rel=1e-9)
    assert one("peak [°C]", f"{LAYERS};{heading}", *CELLS, cell) == error


def test_unnumbered_outside_beside_a_second_layer() -> None:
    text = LAYERS.replace("outer radius 1", "outer radius")
    assert one("peak [°C]", text, *CELLS) == "#VALUE!"


@pytest.mark.parametrize(
    ("cell", "error"),
    [("20:15; 400", "#VALUE!"), ("20;15", "#VALUE!"), ("20:1,5", "#VALUE!"), ("20:-1; 30:2", "#NUM!"), ("-300:1; 30:2", "#NUM!")],
)
def test_bad_text_tables(cell: str, error: str) -> None:
    assert one("peak [°C]", LAYERS, *CELLS[:3], cell, *CELLS[4:]) == error


def test_units_by_hand() -> None:
    def factor(spelling: str, kind: str) -> float:
        found = units2.find(spelling, (kind,))
        assert found is not None
        return found[1][0]

    assert factor("µΩ·cm", "resistivity") == pytest.approx(1e-8, rel=1e-12)
    assert factor("Ω·mm²/m", "resistivity") == pytest.approx(1e-6, rel=1e-12)
    assert factor("A/mm²", "current density") == pytest.approx(1e6, rel=1e-12)
    assert factor("cm²·K/W", "joint") == pytest.approx(1e-4, rel=1e-12)


# --- the random tables ---


def _rows() -> list[tuple[list[str], list[object], list[object], list[float]]]:
    out = []
    for texts, rows in TABLES:
        found = reference.answers(draw2.ANSWERS, texts, rows)
        bounds = reference.rounding.tolerances(draw2.ANSWERS, texts, rows)
        out += [(texts, *one_) for one_ in zip(rows, found, bounds, strict=True)]
    return out


ROWS = _rows()


def _of(found: list[object], name: str) -> object:
    return found[draw2.ANSWERS.index(name)]


def test_tables_repeat_and_are_mostly_legal() -> None:
    assert draw2.tables(12, 25) == draw2.tables(12, 25)
    verdicts = [_of(found, "verdict") for _, _, found, _ in ROWS]
    assert len(verdicts) == 120
    good = sum(v in ("ok", "no limit", "over limit", "caution", "runaway") for v in verdicts)
    assert good > 84
    assert verdicts.count("runaway") > 0
    for _, _, found, bounds in ROWS:
        for value, error in zip(found, bounds, strict=True):
            assert error >= 0.0
            assert isinstance(value, str) or math.isfinite(value)


def test_heats_balance_and_the_answers_are_close() -> None:
    for _, _, found, bounds in ROWS:
        balance = _of(found, "balance [%]")
        assert isinstance(balance, str) or balance < 1e-3
        peak, headroom = _of(found, "peak [K]"), bounds[draw2.ANSWERS.index("peak [K]")]
        assert isinstance(peak, str) or headroom < 1e-5 * peak


def test_at_the_allowable_the_limit_is_just_reached() -> None:
    checked = 0
    sources = {"generation": "W/m³", "power": "W", "line power": "W/m", "current": "A", "voltage": "V"}
    for texts, cells, found, _ in ROWS:
        utilisation, by = _of(found, "utilisation [%]"), _of(found, "limited by")
        if isinstance(utilisation, str) or utilisation <= 0.0 or by == "runaway" or by.startswith("#"):
            continue
        names = [" ".join(text.partition("[")[0].split()).lower() for text in texts]
        bare = [name.rstrip(" 1234") if name.rstrip(" 1234") in sources else "" for name in names]
        filled = [i for i, name in enumerate(bare) if name and cells[i] is not None and str(cells[i]).strip()]
        if len(filled) != 1 or not isinstance(cells[filled[0]], float):
            continue
        changed = list(cells)
        changed[filled[0]] = float(cells[filled[0]]) * 100.0 / utilisation
        room, limit = reference.answers(["headroom [K]", "limited by"], texts, [changed])[0]
        error = reference.tolerance("headroom [K]", texts, changed)
        assert limit == by
        assert abs(room) < 20 * error + 1e-9
        checked += 1
    assert checked > 5
