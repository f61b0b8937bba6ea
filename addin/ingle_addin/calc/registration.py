"""What the extension tells the office: its functions, menu and services, as texts made from the table of functions.

Calc binds a function in a file by its display name, and calls the method of the same name in lower case on the service
INGLE. Arguments are numbered, since their own names may be words that the interface language keeps for itself.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from xml.sax.saxutils import escape, quoteattr

from ingle_addin.case_tables import CaseTable
from ingle_addin.functions import FUNCTIONS, Argument, Function

IDENTIFIER = "ingle.for.calc"
SERVICE = "INGLE"
MODULE, INTERFACE = "inglecalc", "XFunctions"
HANDLER, PROTOCOL = "inglecalc.Commands", "ingle.calc:"
ONE_BY_ONE = 20  # parameters for value arguments before the one that takes the rest
_NOT_YET = "not available yet"

_HEAD = '<?xml version="1.0" encoding="UTF-8"?>\n'
_REGISTRY = (
    'xmlns:oor="http://openoffice.org/2001/registry" xmlns:xs="http://www.w3.org/2001/XMLSchema" oor:package="org.openoffice.Office"'
)


def method(function: Function) -> str:
    """The function's method on the service."""
    return function.name.partition(".")[2].lower()


def interface() -> str:
    """The interface type. Whatever a cell may hold is an `any`; every answer is rows of values."""
    lines = [f"    {_RESULT} {method(function)}({_parameters(function)});" for function in FUNCTIONS]
    return "\n".join([f"module {MODULE} {{", f"interface {INTERFACE}", "{", *lines, "};", "};", ""])


_RESULT = "sequence< sequence< any > >"


def arguments(function: Function) -> list[Argument]:
    """The function's parameters in Calc: an argument that may be repeated stands there several times, then once for the rest.

    Within an array formula Calc hands over whole ranges to parameters that it knows one by one, but goes through the cells
    of what falls into the rest, with a call for each.
    """
    found: list[Argument] = []
    for argument in function.arguments:
        if argument.repeats:
            found += [Argument(argument.name, argument.help)] * ONE_BY_ONE  # the wizard numbers them
        found.append(argument)
    return found


def _parameters(function: Function) -> str:
    kinds = ["sequence< any >" if argument.repeats else "any" for argument in arguments(function)]
    return ", ".join(f"[in] {kind} arg{number:02}" for number, kind in enumerate(kinds, 1))


def functions() -> str:
    """Names, descriptions and arguments for the function wizard and for files."""
    nodes = "".join(_node(method(function), _function(function)) for function in FUNCTIONS)
    return _data("CalcAddIns", _named("AddInInfo", _node(SERVICE, _named("AddInFunctions", nodes))))


def _function(function: Function) -> str:
    described = function.returns if function.available else f"{function.returns} ({_NOT_YET})"
    parameters = "".join(
        _node(f"arg{number:02}", _text("DisplayName", argument.name) + _text("Description", argument.help))
        for number, argument in enumerate(arguments(function), 1)
    )
    return (
        _text("DisplayName", function.name)
        + _text("Description", described[:1].upper() + described[1:])
        + '<prop oor:name="Category"><value>Add-In</value></prop>'
        + _text("CompatibilityName", function.name)
        + _named("Parameters", parameters)
    )


def menu(shapes: Sequence[CaseTable]) -> str:
    """The menu `Ingle` of spreadsheet windows."""
    tables = [(f"insert?shape={table.shape}", table.title) for table in shapes]
    inserts = "".join(_entry(f"t{number}", command, title) for number, (command, title) in enumerate(tables))
    entries = (
        _node("m1", _text("Title", "Insert a case table") + _prop("URL", f"{PROTOCOL}tables") + _named("Submenu", inserts)),
        _entry("m2", "explain", "Explain this cell"),
        _entry("m3", "recalculate", "Recalculate all Ingle cells"),
        _node("m4", _prop("URL", "private:separator")),
        _entry("m5", "about", "About Ingle"),
    )
    bar = _prop("Context", "com.sun.star.sheet.SpreadsheetDocument") + _text("Title", "Ingle") + _named("Submenu", "".join(entries))
    return _data("Addons", _named("AddonUI", _named("OfficeMenuBar", _node("inglecalc.menu", bar))))


def _entry(name: str, command: str, title: str) -> str:
    return _node(name, _prop("URL", PROTOCOL + command) + _text("Title", title) + _prop("Target", "_self"))


def protocol_handler() -> str:
    """That our commands are ours to carry out."""
    protocols = f'<prop oor:name="Protocols" oor:type="oor:string-list"><value>{PROTOCOL}*</value></prop>'
    return _data("ProtocolHandler", _named("HandlerSet", _node(HANDLER, protocols)))


def components(path: str) -> str:
    """The services of the component at this path of the extension."""
    services = ((SERVICE, SERVICE), (HANDLER, "com.sun.star.frame.ProtocolHandler"))
    inside = "".join(f'<implementation name="{name}"><service name="{service}"/></implementation>' for name, service in services)
    component = f'<component loader="com.sun.star.loader.Python" uri={quoteattr(path)}>{inside}</component>'
    return f'{_HEAD}<components xmlns="http://openoffice.org/2010/uno-components">{component}</components>\n'


def description(version: str) -> str:
    """The extension's name and version, and the office it needs."""
    return (
        f'{_HEAD}<description xmlns="http://openoffice.org/extensions/description/2006">\n'
        f"<identifier value={quoteattr(IDENTIFIER)}/>\n<version value={quoteattr(version)}/>\n"
        '<display-name><name lang="en">Ingle: temperatures of parts that heat themselves</name></display-name>\n'
        '<dependencies><l:LibreOffice-minimal-version value="7.0" l:name="LibreOffice 7.0" '
        'xmlns:l="http://libreoffice.org/extensions/description/2011"/></dependencies>\n</description>\n'
    )


def manifest(parts: Iterable[tuple[str, str]]) -> str:
    """Which part of the extension is what: (path, media type)."""
    entries = "".join(
        f"<manifest:file-entry manifest:full-path={quoteattr(path)} manifest:media-type={quoteattr(kind)}/>\n" for path, kind in parts
    )
    return f'{_HEAD}<manifest:manifest xmlns:manifest="http://openoffice.org/2001/manifest">\n{entries}</manifest:manifest>\n'


def _data(name: str, content: str) -> str:
    return f'{_HEAD}<oor:component-data {_REGISTRY} oor:name="{name}">{content}</oor:component-data>\n'


def _named(name: str, content: str) -> str:
    return f"<node oor:name={quoteattr(name)}>{content}</node>\n"


def _node(name: str, content: str) -> str:
    return f'<node oor:name={quoteattr(name)} oor:op="replace">{content}</node>\n'


def _prop(name: str, value: str) -> str:
    return f'<prop oor:name="{name}" oor:type="xs:string"><value>{escape(value)}</value></prop>'


def _text(name: str, value: str) -> str:
    return f'<prop oor:name="{name}"><value xml:lang="en">{escape(value)}</value></prop>'
