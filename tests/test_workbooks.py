"""The committed workbook is what its script builds, is filled, and says what hand formulas say."""

from __future__ import annotations

import math
import shutil
import subprocess
import sys
import zipfile
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from ingle_addin.batch import solve_calls
from ingle_addin.book import Report, fill
from ingle_addin.faults import Fault
from ingle_addin.functions import NAMES
from ingle_addin.heading_reader import Column, is_own, read_answer, read_headings, read_input

openpyxl = pytest.importorskip("openpyxl")
pytest.importorskip("xlsxwriter")
pytest.importorskip("ironcalc")

WORKBOOKS = Path(__file__).resolve().parents[1] / "workbooks"
COMMITTED = WORKBOOKS / "busbars.xlsx"
HEADINGS, FIRST = 8, 9  # rows of the sheet Cases, counted from 1
WITHIN = 1e-9  # relative: another computer's last bits
# Whole sentences of the two rows that are wrong on purpose, as the reader of the sheet sees them.
WRONG = {
    "X01": ("#VALUE!", "Thickness [mm] in this row is '12,5', a text with a decimal comma; type it as a number of your spreadsheet"),
    "X02": ("#N/A", "Both film [W/(m²·K)] in this row needs the temperature of its fluid; fill in 'both fluid [°C]'"),
}


@pytest.fixture(scope="module")
def built(tmp_path_factory: pytest.TempPathFactory) -> Path:
    out = tmp_path_factory.mktemp("workbooks")
    script = [sys.executable, str(WORKBOOKS / "build.py"), "--out", str(out)]
    subprocess.run(script, check=True, capture_output=True, timeout=300)
    return out / "busbars.xlsx"


@pytest.fixture(scope="module")
def refilled(built: Path, tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, Report]:
    # A book just built here: the committed one's last digits may be another computer's.
    copy = Path(shutil.copy(built, tmp_path_factory.mktemp("refilled") / "busbars.xlsx"))
    return copy, fill(copy, functions=NAMES, solve=solve_calls)


@pytest.fixture(scope="module")
def values() -> Any:
    return openpyxl.load_workbook(COMMITTED, data_only=True)


@pytest.fixture(scope="module")
def formulas() -> Any:
    return openpyxl.load_workbook(COMMITTED)


@pytest.fixture(scope="module")
def cases(values: Any) -> dict[str, dict[str, Any]]:
    """The case table: a dict from heading to value for each case number."""
    rows = values["Cases"].iter_rows(min_row=HEADINGS, values_only=True)
    headings = next(rows)
    return {row[0]: dict(zip(headings, row, strict=True)) for row in rows if row[0]}


def _formula(cell: Any) -> Any:
    return (cell.value.ref, cell.value.text) if hasattr(cell.value, "text") else cell.value


def _is_ingle(cell: Any) -> bool:
    return "INGLE." in str(_formula(cell))


def _arrays(sheet: Any) -> set[str]:
    """The cells filled by array formulas."""
    return {cell.coordinate for where in sheet.array_formulae.values() for row in sheet[where] for cell in row}


def _cells(book: Any) -> Iterator[tuple[str, Any]]:
    for sheet in book:
        for row in sheet.iter_rows():
            for cell in row:
                yield f"{sheet.title}!{cell.coordinate}", cell


def _looks(book: Any) -> dict[str, tuple[Any, ...]]:
    """What each cell holds and how it looks; of an array's other cells, which hold computed values, only how they look."""
    arrays = {f"{sheet.title}!{place}" for sheet in book for place in _arrays(sheet)}
    looks: dict[str, tuple[Any, ...]] = {}
    for place, cell in _cells(book):
        held = _formula(cell) if place not in arrays or hasattr(cell.value, "text") else None
        looks[place] = (held, cell.number_format, cell.fill.fgColor.rgb, cell.protection.locked)
    return looks


def _agree(one: object, other: object) -> bool:
    if isinstance(one, float | int) and isinstance(other, float | int):
        return math.isclose(one, other, rel_tol=WITHIN, abs_tol=1e-12)
    return one == other


def test_committed_workbook_is_what_the_script_builds(built: Path) -> None:
    old, new = openpyxl.load_workbook(COMMITTED), openpyxl.load_workbook(built)
    assert old.sheetnames == new.sheetnames == ["Cases", "Profile", "Summary", "Assumptions"]
    ours, theirs = _looks(new), _looks(old)
    differ = {place for place in ours.keys() | theirs.keys() if ours.get(place) != theirs.get(place)}
    assert not differ, "run python workbooks/build.py"


def test_committed_values_are_what_the_script_computes(built: Path, values: Any) -> None:
    new = dict(_cells(openpyxl.load_workbook(built, data_only=True)))
    differ = {place: (cell.value, new[place].value) for place, cell in _cells(values) if not _agree(cell.value, new[place].value)}
    assert differ == {}


def test_parts_besides_the_sheets_are_what_the_script_builds(built: Path) -> None:
    # Sheets hold computed values, whose last digits may differ on another computer; the rest is the same to the byte.
    with zipfile.ZipFile(COMMITTED) as old, zipfile.ZipFile(built) as new:
        assert old.namelist() == new.namelist()
        parts = [name for name in old.namelist() if not name.startswith("xl/worksheets/sheet")]
        assert [name for name in parts if old.read(name) != new.read(name)] == []


def test_filling_again_changes_nothing(refilled: tuple[Path, Report]) -> None:
    _, report = refilled
    assert report.changed_cells == 0
    assert report.not_computed == ()
    assert report.truncated == ()
    assert report.remarks == ()


def test_filling_again_keeps_every_byte(refilled: tuple[Path, Report]) -> None:
    copy, report = refilled
    assert report.out is not None
    assert report.out.name == "busbars.filled.xlsx"
    assert report.out.read_bytes() == copy.read_bytes()


def test_every_ingle_cell_has_a_value(values: Any, formulas: Any) -> None:
    stored = dict(_cells(values))
    asked = [place for place, cell in _cells(formulas) if _is_ingle(cell)]
    asked += [f"{sheet.title}!{place}" for sheet in formulas for place in _arrays(sheet)]
    assert len(asked) > 300
    # A formula guarded by IF may hold empty text, which reads as None; the guard then names what the row does not have.
    empty = {place for place in asked if stored[place].value is None}
    solid = {f"Cases!AH{row}" for row in (*range(21, 26), 30, 31)}
    no_limit = {f"Cases!{column}25" for column in ("AM", "AO", "AP")}
    assert empty == solid | no_limit


def test_only_the_rows_meant_to_be_wrong_have_errors(values: Any, cases: dict[str, dict[str, Any]]) -> None:
    wrong = {place for place, cell in _cells(values) if cell.data_type == "e"}
    last = FIRST + len(cases) - 1
    meant = {f"Cases!{cell.coordinate}" for row in (last - 1, last) for cell in values["Cases"][row][31:42]}
    # The chart's limit of the candidate without a limit is #N/A, which a line leaves out.
    chart = {place for place in wrong if place.startswith("Summary!C")}
    assert wrong == meant | chart
    assert len(chart) == 1


@pytest.mark.parametrize("number", WRONG)
def test_wrong_rows_say_why(cases: dict[str, dict[str, Any]], number: str) -> None:
    error, sentence = WRONG[number]
    row = cases[number]
    assert row["peak [°C]"] == row["utilisation [%]"] == error
    assert row["verdict"] == "no answer"
    assert row["why"] == sentence


def test_all_other_rows_are_answered(cases: dict[str, dict[str, Any]]) -> None:
    good = {number: row for number, row in cases.items() if number not in WRONG}
    assert len(good) == 26
    over = {number for number, row in good.items() if row["verdict"] == "over limit"}
    assert over == {"B05", "B11", "H02", "S02"}
    for number, row in good.items():
        passed = f"Limit [°C] in this row is {row['limit [°C]']}, and the peak is above it; lower the source or cool the body more"
        assert row["why"] == (passed if number in over else "ok"), number
    assert {number for number, row in good.items() if row["verdict"] == "no limit"} == {"R05"}
    assert {row["verdict"] for row in good.values()} == {"ok", "over limit", "no limit"}
    for number, row in good.items():
        above = row["limit [°C]"] is not None and row["peak [°C]"] > row["limit [°C]"]
        assert above == (number in over), number


def test_headings_are_known(values: Any) -> None:
    row = [cell.value or "" for cell in values["Cases"][HEADINGS]]
    gap = row.index("")
    inputs, answers = row[:gap], row[gap + 1 :]
    plan = read_headings(tuple(inputs))
    assert plan.fault is None
    assert plan.width == 30
    assert all(isinstance(read_input(text, 0), Column) for text in inputs if not is_own(text))
    assert [text for text in answers if not is_own(text) and isinstance(read_answer(text), Fault)] == []
    profile = values["Profile"]
    heads = [profile.cell(r, 1).value for r in range(11, 34)]
    assert heads == [text for text in inputs if not is_own(text)]
    assert not any(isinstance(read_answer(profile.cell(r, 4).value), Fault) for r in range(33, 37))


# Source of the hand formulas: closed form of steady conduction, derived in each comment from (k T')' = −q.


def _generation(row: dict[str, Any]) -> float:
    """I²R per volume [W/m³], from the resistivity and section that the row states."""
    return float(row["# resistivity [nΩ·m]"] * 1e-9 * (row["# current [A]"] / (row["# section [mm²]"] * 1e-6)) ** 2)


def test_copper_resistivity_of_the_standard(cases: dict[str, dict[str, Any]]) -> None:
    # IEC 60028: 17.24 nΩ·m at 20 °C, coefficient 0.00393 per kelvin; at 85 °C that is 65 K more.
    assert cases["B01"]["# resistivity [nΩ·m]"] == pytest.approx(17.24 * (1 + 0.00393 * 65), rel=1e-12)


@pytest.mark.parametrize(("number", "a"), [("B01", 0.005), ("B04", 0.005), ("B05", 0.005), ("B07", 0.005), ("B09", 0.004)])
def test_bar_with_equal_faces(cases: dict[str, dict[str, Any]], number: str, a: float) -> None:
    # T' = −q x/k from the middle, so T(0) − T(a) = q a²/(2k); all heat of the half, q a, leaves through h: T(a) − Tf = q a/h.
    row = cases[number]
    q, k, h, fluid = _generation(row), row["conductivity [W/(m·K)]"], row["both film [W/(m²·K)]"], row["both fluid [°C]"]
    assert row["right face [°C]"] == pytest.approx(fluid + q * a / h, rel=1e-12)
    assert row["peak [°C]"] == pytest.approx(fluid + q * a / h + q * a**2 / (2 * k), rel=1e-12)
    assert row["peak place [mm]"] == pytest.approx(1e3 * a, rel=1e-9)
    # The rise is in proportion to q, so the allowable q is q × (limit − fluid)/(peak − fluid), and the current its root.
    share = (row["limit [°C]"] - fluid) / (row["peak [°C]"] - fluid)
    assert row["# allowable source, in its own unit"] == pytest.approx(1e-3 * q * share, rel=1e-12)
    slope = {"Copper": 0.00393, "Aluminium": 0.004}[row["# material"]]  # as the sheet Assumptions gives them
    # At that current the metal is at its limit, so its resistivity there counts: ρ = ρ₂₀ [1 + slope (T − 20 °C)].
    hotter = (1.0 + slope * (row["limit [°C]"] - 20.0)) / (1.0 + slope * (row["# resistivity at [°C]"] - 20.0))
    assert row["# allowable current [A]"] == pytest.approx(row["# current [A]"] * math.sqrt(share / hotter), rel=1e-12)
    assert row["utilisation [%]"] == pytest.approx(100 / share, rel=1e-12)


def test_half_bar_agrees_with_the_whole(cases: dict[str, dict[str, Any]]) -> None:
    # By symmetry no heat crosses the middle: the right half, insulated there, has the whole bar's temperatures.
    whole, half = cases["B01"], cases["B02"]
    for heading in ("generation [kW/m³]", "peak [°C]", "right face [°C]", "right heat out [W]", "headroom [K]", "utilisation [%]"):
        assert half[heading] == pytest.approx(whole[heading], rel=1e-12), heading
    assert half["left face [°C]"] == pytest.approx(half["peak [°C]"], rel=1e-12)
    assert half["peak place [mm]"] == 0
    assert whole["peak place [mm]"] - half["thickness [mm]"] == pytest.approx(half["peak place [mm]"], abs=1e-9)


def test_bar_near_the_panel_wall(cases: dict[str, dict[str, Any]]) -> None:
    # Flux to the right is F0 + q x with F0 = −h1 (T0 − T1), T(L) = T0 − F0 L/k − q L²/2k, and F0 + q L = h2 (T(L) − T2):
    # T0 [h1 + h2 (1 + h1 L/k)] = q L + q h2 L²/2k + h2 T2 + h1 T1 (1 + h2 L/k). The peak is where F0 + q x = 0.
    row = cases["B03"]
    q, k, L = _generation(row), row["conductivity [W/(m·K)]"], 0.010
    h1, t1 = row["left film [W/(m²·K)]"], row["left fluid [°C]"]
    h2, t2 = row["right film [W/(m²·K)]"], row["right fluid [°C]"]
    t0 = (q * L + q * h2 * L**2 / (2 * k) + h2 * t2 + h1 * t1 * (1 + h2 * L / k)) / (h1 + h2 * (1 + h1 * L / k))
    x = h1 * (t0 - t1) / q
    assert row["left face [°C]"] == pytest.approx(t0, rel=1e-12)
    assert row["peak place [mm]"] == pytest.approx(1e3 * x, rel=1e-9)
    assert row["peak [°C]"] == pytest.approx(t0 + q * x**2 / (2 * k), rel=1e-12)
    assert row["left share [%]"] == pytest.approx(100 * x / L, rel=1e-9)


def test_round_conductor(cases: dict[str, dict[str, Any]]) -> None:
    # T' = −q r/2k in a solid cylinder: q R²/4k inside it, q R/2h outside.
    row = cases["R01"]
    q, k, h, R = _generation(row), row["conductivity [W/(m·K)]"], row["both film [W/(m²·K)]"], 0.010
    assert row["peak [°C]"] == pytest.approx(row["both fluid [°C]"] + q * R / (2 * h) + q * R**2 / (4 * k), rel=1e-12)
    assert row["heat made [W]"] == pytest.approx(q * math.pi * R**2, rel=1e-12)


def test_potted_sensor(cases: dict[str, dict[str, Any]]) -> None:
    # T' = −q r/3k in a solid sphere, q = 3P/4πR³: P/(8πkR) inside it, P/(4πR²h) outside.
    row = cases["S01"]
    P, k, h, R = row["power [W]"], row["conductivity [W/(m·K)]"], row["right film [W/(m²·K)]"], 0.030
    expected = row["right fluid [°C]"] + P / (4 * math.pi * R**2 * h) + P / (8 * math.pi * k * R)
    assert row["peak [°C]"] == pytest.approx(expected, rel=1e-12)


def test_tube_held_at_its_bore(cases: dict[str, dict[str, Any]]) -> None:
    # −k r T' = q (r² − b²)/2 with no flux at r = b; from a to b: q/2k [b² ln(b/a) − (b² − a²)/2].
    row = cases["T01"]
    q, k, a, b = _generation(row), row["conductivity [W/(m·K)]"], 0.005, 0.0125
    rise = q / (2 * k) * (b**2 * math.log(b / a) - (b**2 - a**2) / 2)
    assert row["peak [°C]"] == pytest.approx(row["left held [°C]"] + rise, rel=1e-12)
    assert row["left share [%]"] == pytest.approx(100, rel=1e-12)


def test_summary_counts_and_finds(values: Any, cases: dict[str, dict[str, Any]]) -> None:
    facts = {row[0]: row[1:3] for row in values["Summary"].iter_rows(min_row=7, max_row=18, values_only=True)}
    verdicts = [row["verdict"] for row in cases.values()]
    assert facts["candidates"][0] == len(cases) == 28
    assert facts["within their limit"][0] == verdicts.count("ok")
    assert facts["over their limit"][0] == verdicts.count("over limit")
    assert facts["without an answer"][0] == len(WRONG)
    hottest = max((row for number, row in cases.items() if number not in WRONG), key=lambda row: row["peak [°C]"])
    assert facts["hottest peak [°C]"] == (hottest["peak [°C]"], hottest["# candidate"])
    assert facts["B01 whole and B02 as its half: peaks differ by [K]"][1] == "they agree"
    by_hand = facts["B01 by hand: fluid + q·t/2h + q·t²/8k [°C]"][0]
    assert by_hand == pytest.approx(cases["B01"]["peak [°C]"], rel=1e-12)


def test_profile_is_of_the_chosen_case(values: Any, cases: dict[str, dict[str, Any]]) -> None:
    sheet = values["Profile"]
    row = cases[sheet["B7"].value]
    points = [(sheet.cell(r, 4).value, sheet.cell(r, 5).value) for r in range(11, 32)]
    assert [place for place, _ in points] == pytest.approx([1.5 * i for i in range(21)], abs=1e-9)
    assert points[0][1] == pytest.approx(row["left face [°C]"], rel=1e-12)
    assert points[-1][1] == pytest.approx(row["right face [°C]"], rel=1e-12)
    assert max(T for _, T in points) <= row["peak [°C]"]
    asked = {sheet.cell(r, 4).value: sheet.cell(r, 5).value for r in range(33, 37)}
    assert asked == {heading: row[heading] for heading in asked}


def test_words_on_the_sheets(values: Any) -> None:
    for sheet in values:
        assert sheet["A2"].value == (
            "Quillfen Switchgear Workshop: invented for demonstration. No such workshop, product or limit exists."
        )
        assert sheet["A3"].value == (
            "Estimates of steady one-dimensional conduction with even heat generation. They do not replace local codes, type tests "
            "or licensed practice."
        )


def test_typed_cells_are_unlocked_and_formulas_are_not(formulas: Any) -> None:
    for row in formulas["Cases"].iter_rows(min_row=FIRST, max_row=FIRST + 27, max_col=30):
        for cell in row:
            assert cell.protection.locked == str(cell.value).startswith("="), cell.coordinate
