"""Builds the extension: one .oxt file, the same bytes from the same installation."""

from __future__ import annotations

import json
import sys
import zipfile
from importlib.util import find_spec
from pathlib import Path
from typing import Any

from ingle_addin.about import CAUTION, version
from ingle_addin.calc import registration
from ingle_addin.calc.inside.client import ANSWER_SECONDS
from ingle_addin.case_tables import available
from ingle_addin.functions import FUNCTIONS

SETTINGS = "ingle.json"
_INSIDE = Path(__file__).parent / "inside"
_COMPONENT = "component.py"
# The package name under which the inside's files travel: the office's Python may have an Ingle of its own.
_HERE, _THERE = "ingle_addin.calc.inside", "ingle_in_calc"
_EPOCH = (2000, 1, 1, 0, 0, 0)
_CONFIGURATION = "application/vnd.sun.star.configuration-data"
# Only what the worker needs must be found again: its own packages may lie in different folders.
_PACKAGES = ("ingle_addin", "ingle", "numpy", "scipy", "pint")
_START = (
    "import sys\n"
    "sys.path[:0] = sys.argv[1:]\n"
    "try:\n"
    "    from ingle_addin.calc.worker import main\n"
    "except ImportError:\n"
    "    sys.exit(97)\n"
    "main()\n"
)


def worker_command(python: str = sys.executable) -> list[str]:
    """What starts the worker: this Python, told where its packages lie, deaf to variables and folders around it."""
    return [python, "-I", "-c", _START, *package_folders()]


def package_folders() -> list[str]:
    """The folders from which this process would load Ingle and what it needs, in the order of their first use."""
    folders: dict[str, None] = {}
    for name in _PACKAGES:
        spec = find_spec(name)
        if spec is not None and spec.origin is not None:
            folders[str(Path(spec.origin).resolve().parents[1])] = None
    return list(folders)


def settings(seconds: float = ANSWER_SECONDS, python: str = sys.executable) -> dict[str, Any]:
    """What the component reads when the office loads it: also the time limit of an answer and the Python of the worker."""
    return {
        "version": version(),
        "command": worker_command(python),
        "seconds": seconds,
        "interface": f"{registration.MODULE}.{registration.INTERFACE}",
        "service": registration.SERVICE,
        "handler": registration.HANDLER,
        "protocol": registration.PROTOCOL,
        "functions": [
            {
                "method": registration.method(function),
                "name": function.name,
                "repeats": bool(function.arguments and function.arguments[-1].repeats),
            }
            for function in FUNCTIONS
        ],
        "tables": {table.shape: [list(table.headings), list(table.values), list(table.answers)] for table in available()},
        "caution": CAUTION,
    }


def parts(seconds: float = ANSWER_SECONDS, python: str = sys.executable) -> dict[str, str]:
    """The files of the extension and what they hold."""
    component = f"python/{_COMPONENT}"
    found = {
        "description.xml": registration.description(version()),
        "ingle.components": registration.components(component),
        "ingle.idl": registration.interface(),
        "CalcAddIns.xcu": registration.functions(),
        "ProtocolHandler.xcu": registration.protocol_handler(),
        "Addons.xcu": registration.menu(available()),
        SETTINGS: json.dumps(settings(seconds, python), indent=1, ensure_ascii=False) + "\n",
    }
    kinds = [
        # A plain interface text serves as a type library too, so that no development kit of the office is needed.
        ("ingle.idl", "application/vnd.sun.star.uno-typelibrary;type=RDB"),
        ("ingle.components", "application/vnd.sun.star.uno-components"),
        *((name, _CONFIGURATION) for name in ("CalcAddIns.xcu", "ProtocolHandler.xcu", "Addons.xcu")),
    ]
    for path in sorted(_INSIDE.glob("*.py")):
        text = path.read_text(encoding="utf-8").replace(_HERE, _THERE)
        found[component if path.name == _COMPONENT else f"python/pythonpath/{_THERE}/{path.name}"] = text
    return {"META-INF/manifest.xml": registration.manifest(kinds), **found}


def build(path: Path, seconds: float = ANSWER_SECONDS, python: str = sys.executable) -> Path:
    """Write the extension, whole or not at all; the path."""
    beside = path.with_name(path.name + ".part")
    try:
        with zipfile.ZipFile(beside, "w", zipfile.ZIP_DEFLATED) as archive:
            for name, text in parts(seconds, python).items():
                info = zipfile.ZipInfo(name, _EPOCH)
                info.compress_type = zipfile.ZIP_DEFLATED
                info.external_attr = 0o644 << 16
                archive.writestr(info, text)
        beside.replace(path)
    finally:
        beside.unlink(missing_ok=True)
    return path
