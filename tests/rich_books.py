"""Workbooks full of what careless writers lose, by XlsxWriter, by hand and by Calc, all with formulas to be computed."""

from __future__ import annotations

import io
import re
import shutil
import subprocess
import warnings
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any
from xml.etree import ElementTree

import xlsxwriter
from book_samples import MAIN, RELATIONS, parts_of, rewritten
from ingle_addin.book.refs import cell_name, key_of, parse_rect

OFFICE = shutil.which("soffice")
# One red dot.
PNG = bytes.fromhex(
    "89504e470d0a1a0a0000000d49484452000000010000000108020000009077"
    "53de0000000c4944415408d763f8cfc0000003010100c9fe92ef0000000049454e44ae426082"
)


def _dot() -> io.BytesIO:
    return io.BytesIO(PNG)


def cases(book: Any, page: Any) -> None:
    """Six rows with an ordinary formula, an Ingle call, and one that rests on it."""
    bold = book.add_format({"bold": True, "num_format": "0.0"})
    page.write_row("A1", ["x [mm]", "y", "sum", "answer", "share"])
    for row in range(2, 8):
        page.write_row(f"A{row}", [row, row * 1.5])
        page.write_formula(f"C{row}", f"=A{row}+B{row}", None, 0)
        page.write_formula(f"D{row}", f"=INGLE.PEAK($A$1:$B$1,A{row}:B{row})", bold, 0)
        page.write_formula(f"E{row}", f'=IF(D{row}>10,"<hot> & high",D{row}/3)', None, "old")


def charts(book: Any, page: Any) -> None:
    for index, kind in enumerate(["area", "bar", "column", "doughnut", "line", "pie", "radar", "scatter", "stock"]):
        chart = book.add_chart({"type": kind})
        for column in "BCD" if kind == "stock" else "D":
            chart.add_series({"name": "=Data!$D$1", "categories": "=Data!$A$2:$A$7", "values": f"=Data!${column}$2:${column}$7"})
        chart.set_title({"name": f"A {kind} chart"})
        page.insert_chart(row=10 * index, col=7, chart=chart)
    trend = book.add_chart({"type": "scatter", "subtype": "smooth"})
    trend.add_series({"categories": "=Data!$A$2:$A$7", "values": "=Data!$D$2:$D$7", "trendline": {"type": "polynomial", "order": 2},
                      "y_error_bars": {"type": "standard_error"}, "marker": {"type": "diamond"}})  # fmt: skip
    second = book.add_chart({"type": "line"})
    second.add_series({"values": "=Data!$C$2:$C$7", "y2_axis": True})
    bars = book.add_chart({"type": "column", "subtype": "stacked"})
    bars.add_series({"values": "=Data!$B$2:$B$7", "data_labels": {"value": True}})
    bars.combine(second)
    page.insert_chart("R2", bars)
    book.add_chartsheet("Chart").set_chart(trend)
    book.add_worksheet("After the chart").write_formula("A1", "=Data!D2*2", None, 0)


def pictures(_book: Any, page: Any) -> None:
    page.insert_image("H2", "dot.png", {"image_data": _dot(), "description": "a dot"})
    page.embed_image("H20", "dot.png", {"image_data": _dot()})
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", UserWarning)  # newer versions of the writer need the second argument no more
        page.set_background(_dot(), is_byte_stream=True)
    page.set_header("&L&G", {"image_left": "dot.png", "image_data_left": _dot()})
    page.insert_textbox("H30", "a text box", {"fill": {"color": "yellow"}})
    page.insert_checkbox("H40", True)
    page.write_comment("A2", "first case", {"author": "someone", "visible": True})
    page.write_comment("D2", "answer")


def rules(book: Any, page: Any) -> None:
    red = book.add_format({"bg_color": "red"})
    page.conditional_format("D2:D7", {"type": "data_bar", "data_bar_2010": True, "bar_negative_color_same": True})
    page.conditional_format("C2:C7", {"type": "3_color_scale"})
    page.conditional_format("B2:B7", {"type": "icon_set", "icon_style": "5_arrows"})
    page.conditional_format("A2:E7", {"type": "formula", "criteria": "=INGLE.PEAK($A$1:$B$1,$A2:$B2)>9", "format": red})
    page.data_validation("A2", {"validate": "list", "source": ["1", "2"]})
    page.data_validation("B2:B7", {"validate": "custom", "value": "=B2<100", "input_title": "How much?"})
    page.add_sparkline("F2", {"range": "Data!A2:D2", "type": "column", "markers": True})
    page.add_sparkline("F3", {"location": ["F3", "F4"], "range": ["Data!A3:D3", "Data!A4:D4"]})
    page.ignore_errors({"number_stored_as_text": "A1:E7", "eval_error": "D2:D7"})


def layout(book: Any, page: Any) -> None:
    page.freeze_panes(1, 0)
    page.autofilter("A1:E7")
    page.merge_range("A10:B10", "merged")
    page.write_url("A11", "https://example.org/", tip="elsewhere")
    page.write_url("A12", "internal:Data!A1")
    page.set_column("G:G", 20, None, {"hidden": True})
    page.set_row(12, 30, book.add_format({"italic": True}), {"level": 1})
    page.set_row(13, None, None, {"level": 1, "collapsed": True})
    page.protect("secret", {"insert_rows": True})
    page.set_landscape()
    page.print_area("A1:E7")
    page.repeat_rows(0)
    page.set_h_pagebreaks([8])
    page.write_rich_string("A14", "rich ", book.add_format({"bold": True}), "text")
    page.write_string("A15", "  spaces\nand lines  ")
    page.write_blank("A16", None, book.add_format({"bg_color": "green"}))
    page.set_selection("B2")
    page.set_tab_color("blue")


def tables_and_names(book: Any, page: Any) -> None:
    columns = [{"header": "a"}, {"header": "b b"}, {"header": "c", "formula": "=[@a]*2", "total_function": "sum"}]
    page.add_table("H2:J6", {"name": "Cases", "columns": columns, "total_row": True, "data": [[1, 2], [3, 4], [5, 6]]})
    page.write_formula("L1", "=SUM(Cases[c])", None, 0)
    book.define_name("limit", "=Data!$D$2")
    book.define_name("Data!local", "=2.5")
    page.write_formula("L2", "=limit*local", None, 0)
    page.write_array_formula("L3:M4", "{=A2:B3*2}", None, 0)
    page.write_dynamic_array_formula("L6:M7", "=INGLE.ASK(A2:B3)", None, 0)
    page.write_formula("L9", "=_xlfn.LET(_xlpm.x,A2,_xlpm.x*2)", None, 0)
    book.set_properties({"title": "Rich", "author": "someone", "comments": "é & <so on>"})
    book.set_custom_property("kept", "yes")
    book.set_custom_property("when", 3.5)
    book.set_calc_mode("manual")


PLAIN: dict[str, Callable[[Any, Any], None]] = {
    "charts": charts,
    "pictures": pictures,
    "rules": rules,
    "layout": layout,
    "tables and names": tables_and_names,
}


def written(path: Path, build: Callable[[Any, Any], None]) -> Path:
    """One of the workbooks above."""
    book = xlsxwriter.Workbook(str(path))
    page = book.add_worksheet("Data")
    cases(book, page)
    build(book, page)
    book.close()
    return path


def with_macros(path: Path) -> Path:
    """A macro workbook with a button; the project is bytes of no meaning, which nobody here should look at."""
    project = path.with_name("vbaProject.bin")
    project.write_bytes(bytes.fromhex("D0CF11E0A1B11AE1") + bytes(range(256)) * 20)
    book = xlsxwriter.Workbook(str(path))
    page = book.add_worksheet("Data")
    cases(book, page)
    page.insert_button("H2", {"macro": "Recalculate", "caption": "Go"})
    book.add_vba_project(str(project))
    book.close()
    project.unlink()
    return path


_SLICER = (
    '<extLst><ext uri="{A8765BA9-456A-4dab-B4F3-ACF838C121DE}" '
    'xmlns:x14="http://schemas.microsoft.com/office/spreadsheetml/2009/9/main"><x14:slicerList>'
    f'<x14:slicer xmlns:r="{RELATIONS}" r:id="rId99"/></x14:slicerList></ext></extLst></worksheet>'
)


def with_foreign_parts(path: Path) -> Path:
    """A slicer and custom XML added by hand, as a newer program or a document system would leave them."""
    plain = written(path.with_name("plain.xlsx"), tables_and_names)

    def change(name: str, content: bytes) -> bytes:
        if name == "xl/worksheets/sheet1.xml":
            # The slicer's own list of extensions, comments and an instruction, none of which anybody here knows.
            content = content.replace(b"<sheetData>", b"<?keep this?><!-- <c r='A1'/> --><sheetData>")
            return content.replace(b"</worksheet>", _SLICER.encode())
        if name == "xl/worksheets/_rels/sheet1.xml.rels":
            slicer = '<Relationship Id="rId99" Type="http://schemas.microsoft.com/office/2007/relationships/slicer" ' \
                     'Target="../slicers/slicer1.xml"/></Relationships>'  # fmt: skip
            return content.replace(b"</Relationships>", slicer.encode())
        return content

    rewritten(plain, path, change)
    with zipfile.ZipFile(path, "a", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("xl/slicers/slicer1.xml", '<slicers xmlns="urn:x"><slicer name="a"/></slicers>')
        archive.writestr("xl/slicerCaches/slicerCache1.xml", "<slicerCacheDefinition/>")
        archive.writestr("customXml/item1.xml", "<case><f>INGLE.PEAK(1)</f></case>")
        archive.writestr("customXml/_rels/item1.xml.rels", "<Relationships/>")
        archive.writestr("unknown/thing.bin", bytes(range(256)))
    plain.unlink()
    return path


def by_calc(path: Path) -> Path:
    """The rules and the tables once loaded and saved by Calc, which writes everything its own way."""
    assert OFFICE is not None
    source = written(
        path.with_name("source.xlsx"), lambda book, page: (rules(book, page), layout(book, page), tables_and_names(book, page))
    )
    profile = f"-env:UserInstallation={path.with_name('profile').as_uri()}"
    command = [OFFICE, profile, "--headless", "--convert-to", "xlsx:Calc MS Excel 2007 XML", "--outdir", str(path.parent / "calc")]
    subprocess.run([*command, str(source)], check=True, timeout=180, capture_output=True)
    shutil.move(path.parent / "calc" / "source.xlsx", path)
    shutil.rmtree(path.with_name("profile"), ignore_errors=True)
    return path


def with_prefixes(path: Path) -> Path:
    """Another hand's XML: names with a prefix, single quotes, cells and rows without their place."""
    plain = written(path.with_name("plain.xlsx"), lambda _book, _page: None)

    def change(name: str, content: bytes) -> bytes:
        if name != "xl/worksheets/sheet1.xml":
            return content
        text = content.decode()
        text = re.sub(r"<(/?)(?=[a-zA-Z])", r"<\1x:", text).replace(f'xmlns="{MAIN}"', f'xmlns:x="{MAIN}"')
        text = re.sub(r'="([^"\']*)"', r"='\1'", text)
        text = re.sub(r"<x:(c|row) r='[A-Z0-9]+'", r"<x:\1", text)
        return text.replace("</x:f>", "</x:f><!-- a remark -->").encode()

    rewritten(plain, path, change)
    plain.unlink()
    return path


def without_values(xml: bytes) -> str:
    """Canonical XML of a sheet without the values, and the types that go with them, of all cells that formulas fill."""
    root = ElementTree.fromstring(xml)
    filled: set[str] = set()
    for formula in root.iter(f"{{{MAIN}}}f"):
        rect = parse_rect(formula.get("ref", "")) if formula.get("t") == "array" else None
        if rect is not None:
            filled |= {cell_name(key_of(row, column)) for row in range(rect.top, rect.bottom + 1)
                       for column in range(rect.left, rect.right + 1)}  # fmt: skip
    for cell in root.iter(f"{{{MAIN}}}c"):
        if cell.find(f"{{{MAIN}}}f") is not None or cell.get("r") in filled:
            for value in cell.findall(f"{{{MAIN}}}v"):
                cell.remove(value)
            cell.attrib.pop("t", None)
    return ElementTree.canonicalize(ElementTree.tostring(root))


def assert_only_values_changed(before: Path, after: Path, touched: set[str]) -> None:
    """Every part is there, in order; all but the touched sheets to the byte, these but for their values."""
    old, new = parts_of(before), parts_of(after)
    assert list(old) == list(new)
    assert {name for name in old if old[name] != new[name]} == touched
    for name in touched:
        assert without_values(old[name]) == without_values(new[name]), name
