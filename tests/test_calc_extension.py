"""The extension's file: made from the table of functions, the same each time, and fit for the office's own Python."""

from __future__ import annotations

import ast
import json
import sys
import zipfile
from pathlib import Path
from xml.etree import ElementTree

import pytest
from ingle_addin.about import version
from ingle_addin.calc import extension, registration
from ingle_addin.case_tables import available
from ingle_addin.functions import FUNCTIONS

OOR = "{http://openoffice.org/2001/registry}"
INSIDE = Path(extension.__file__).parent / "inside"
OLDEST = (3, 8)  # the Python that LibreOffice 7 brings along on Windows and macOS
OFFICE = {"uno", "unohelper", "com"}


@pytest.fixture(scope="module")
def parts(tmp_path_factory: pytest.TempPathFactory) -> dict[str, str]:
    path = extension.build(tmp_path_factory.mktemp("extension") / "ingle.oxt")
    with zipfile.ZipFile(path) as archive:
        assert archive.testzip() is None
        return {name: archive.read(name).decode() for name in archive.namelist()}


def test_the_same_installation_gives_the_same_bytes_and_leaves_nothing_beside(tmp_path: Path) -> None:
    one, two = (extension.build(tmp_path / f"{name}.oxt").read_bytes() for name in ("one", "two"))
    assert one == two
    assert sorted(path.name for path in tmp_path.iterdir()) == ["one.oxt", "two.oxt"]
    with pytest.raises(FileNotFoundError):
        extension.build(tmp_path / "nowhere" / "ingle.oxt")


def test_every_part_is_declared_and_every_declared_part_is_there(parts: dict[str, str]) -> None:
    space = "{http://openoffice.org/2001/manifest}"
    manifest = ElementTree.fromstring(parts["META-INF/manifest.xml"])
    declared = {entry.get(f"{space}full-path") for entry in manifest.iter(f"{space}file-entry")}
    assert declared == {"ingle.idl", "ingle.components", "CalcAddIns.xcu", "ProtocolHandler.xcu", "Addons.xcu"}
    assert declared <= parts.keys()
    for name, text in parts.items():
        if name.endswith((".xml", ".xcu", ".components")):
            ElementTree.fromstring(text)
    assert "python/component.py" in parts
    assert f'<version value="{version()}"/>' in parts["description.xml"]


def node(parent: ElementTree.Element, name: str) -> ElementTree.Element:
    (found,) = (child for child in parent.findall("node") if child.get(f"{OOR}name") == name)
    return found


def prop(parent: ElementTree.Element, name: str) -> str:
    (found,) = (child for child in parent.findall("prop") if child.get(f"{OOR}name") == name)
    return str(found.findtext("value"))


def test_functions_and_arguments_are_those_of_the_table(parts: dict[str, str]) -> None:
    root = ElementTree.fromstring(parts["CalcAddIns.xcu"])
    service = node(node(root, "AddInInfo"), registration.SERVICE)
    functions = node(service, "AddInFunctions")
    assert [each.get(f"{OOR}name") for each in functions] == [f.name.removeprefix("INGLE.").lower() for f in FUNCTIONS]
    for function in FUNCTIONS:
        described = node(functions, registration.method(function))
        assert prop(described, "DisplayName") == prop(described, "CompatibilityName") == function.name
        assert function.returns[1:] in prop(described, "Description")
        assert prop(described, "Description").endswith("(not available yet)") is not function.available
        told = [(prop(each, "DisplayName"), prop(each, "Description")) for each in node(described, "Parameters")]
        assert told == [(each.name, each.help) for each in registration.arguments(function)]
        names = [str(each.get(f"{OOR}name")) for each in node(described, "Parameters")]
        assert names == sorted(names)  # the office may read them in the order of their names
        (line,) = (line for line in parts["ingle.idl"].splitlines() if f" {registration.method(function)}(" in line)
        assert [word for word in line.replace(",", " ").replace(")", " ").split() if word.startswith("arg")] == names
    repeating = [f.name for f in FUNCTIONS if f.arguments and f.arguments[-1].repeats]
    assert parts["ingle.idl"].count("sequence< any > arg") == len(repeating) == 7


def test_the_menu_offers_the_tables_that_can_be_answered(parts: dict[str, str]) -> None:
    urls = [
        element.findtext("value")
        for element in ElementTree.fromstring(parts["Addons.xcu"]).iter("prop")
        if element.get(f"{OOR}name") == "URL"
    ]
    inserts = [f"ingle.calc:insert?shape={table.shape}" for table in available()]
    rest = ["ingle.calc:explain", "ingle.calc:recalculate", "private:separator", "ingle.calc:about"]
    assert urls == ["ingle.calc:tables", *inserts, *rest]


def test_settings_start_this_python_with_these_packages(parts: dict[str, str]) -> None:
    settings = json.loads(parts[extension.SETTINGS])
    assert settings["command"][0] == sys.executable
    assert settings["command"][-len(extension.package_folders()) :] == extension.package_folders()
    assert all((Path(folder)).is_dir() for folder in extension.package_folders())
    assert settings["version"] == version()
    assert [each["name"] for each in settings["functions"]] == [function.name for function in FUNCTIONS]


@pytest.mark.parametrize("path", sorted(INSIDE.glob("*.py")), ids=lambda path: path.name)
def test_what_runs_in_the_office_needs_its_own_python_only(path: Path, parts: dict[str, str]) -> None:
    text = path.read_text(encoding="utf-8")
    tree = ast.parse(text, feature_version=OLDEST)
    names = {
        name
        for each in ast.walk(tree)
        if isinstance(each, (ast.Import, ast.ImportFrom))
        for name in ([alias.name for alias in each.names] if isinstance(each, ast.Import) else [str(each.module)])
    }
    own = {name for name in names if name.startswith("ingle_addin")}
    assert all(name.startswith("ingle_addin.calc.inside.") or name == "ingle_addin.calc.inside" for name in own)
    assert {name.split(".")[0] for name in names - own} <= OFFICE | sys.stdlib_module_names
    later = {"removeprefix", "removesuffix", "readlink"}  # methods newer than the oldest Python
    assert not later & {each.attr for each in ast.walk(tree) if isinstance(each, ast.Attribute)}
    assert "strict=" not in text  # of zip: newer too
    packed = parts["python/component.py" if path.name == "component.py" else f"python/pythonpath/ingle_in_calc/{path.name}"]
    assert packed == text.replace("ingle_addin.calc.inside", "ingle_in_calc")
    assert "ingle_addin" not in packed
