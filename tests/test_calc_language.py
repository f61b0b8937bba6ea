"""Calc in another language (German: its own function names, a comma in numbers) finds Ingle's functions under the same names."""

from __future__ import annotations

import shutil
import time
from pathlib import Path

import calc_office
import openpyxl
import pytest
from ingle_addin.functions import FUNCTIONS

PACK = Path(str(shutil.which("soffice"))).resolve().parents[1] / "share" / "registry" / "Langpack-de.xcd"
GERMAN = (
    '<item oor:path="/org.openoffice.Office.Linguistic/General"><prop oor:name="UILocale"><value>de</value></prop></item>'
    '<item oor:path="/org.openoffice.Setup/L10N"><prop oor:name="ooLocale"><value>de</value></prop></item>'
    '<item oor:path="/org.openoffice.Setup/L10N"><prop oor:name="ooSetupSystemLocale"><value>de-DE</value></prop></item>'
)
HEADINGS = ["shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "both held [°C]"]


@pytest.mark.long
@pytest.mark.skipif(bool(calc_office.MISSING), reason=calc_office.MISSING or "-")
@pytest.mark.skipif(not PACK.exists(), reason="the German language pack of LibreOffice (libreoffice-l10n-de) is not installed")
def test_a_german_calc(tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "Tabelle1"
    for row in (HEADINGS, ["wall", 20.5, 2.0, 1e5, 20.0], ["wall", None, 2.0, 1e5, 20.0]):
        sheet.append(row)
    sheet["G2"], sheet["G3"] = "=INGLE.PEAK($A$1:$E$1,A2:E2)", "=IFERROR(INGLE.PEAK($A$1:$E$1,A3:E3),INGLE.WHY($A$1:$E$1,A3:E3))"
    book.save(tmp_path / "book.xlsx")
    peak = 20.0 + 1e5 * 0.0205**2 / (8.0 * 2.0)  # T + qL²/8k
    with calc_office.office(tmp_path / "office", GERMAN) as calc:
        assert calc.sheets(calc.open("new")) == ["Tabelle1"]  # it is German
        number = calc.open(str(tmp_path / "book.xlsx"))
        calc.fill(number, "Tabelle1", "H2:H3", [["=INGLE.PEAK($A$1:$E$1;A2:E2)"], ['=INGLE.PEAK($A$1:$E$1;"wall";20.5;2;1E5;B4:B4)']])
        (first, second), (why, blank) = calc.values(number, "Tabelle1", "G2:H3")
        assert first == second == pytest.approx(peak, rel=1e-12)
        assert str(why).startswith("Thickness [mm] in this row is blank")
        assert blank == "#ZAHL!"  # what a German Calc shows for #NUM!: no heat can leave
        assert calc.local_formulas(number, "Tabelle1", "G3") == [
            "=WENNFEHLER(INGLE.PEAK($A$1:$E$1;A3:E3);INGLE.WHY($A$1:$E$1;A3:E3))"
        ]
        for function in FUNCTIONS:
            assert calc.described(function.name)["description"].casefold().startswith(function.returns.casefold())
        calc.save(number, str(tmp_path / "saved.xlsx"))
        calc.save(number, str(tmp_path / "saved.ods"))
        again = calc.open(str(tmp_path / "saved.ods"))
        assert calc.values(again, "Tabelle1", "G2") == [[first]]
        said = calc.dispatch(again, "Tabelle1", "G3", "ingle.calc:explain")
        assert said.splitlines()[0] == "G3  INGLE.PEAK"
        worker = int(calc.dispatch(again, "Tabelle1", "G3", "ingle.calc:about").splitlines()[0].rsplit(" ", 1)[1])
        assert Path(f"/proc/{worker}").exists()
    for _ in range(100):  # the worker ends with Calc
        if not Path(f"/proc/{worker}").exists():
            break
        time.sleep(0.1)
    assert not Path(f"/proc/{worker}").exists()
    saved = openpyxl.load_workbook(tmp_path / "saved.xlsx")["Tabelle1"]
    assert saved["G2"].value == "=INGLE.PEAK($A$1:$E$1,A2:E2)"
