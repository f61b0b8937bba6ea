"""Puts the extension into the user's Calc and takes it out again."""

from __future__ import annotations

import stat
import sys
import tempfile
from pathlib import Path

from ingle_addin.about import about
from ingle_addin.calc.extension import build, package_folders
from ingle_addin.calc.office import Office, OfficeError
from ingle_addin.calc.registration import IDENTIFIER

_NO_PYTHON = (
    "this LibreOffice came without its Python; install it (Debian and Ubuntu: python3-uno, Fedora: libreoffice-pyuno) and run this "
    "again"
)
RESTART = "close every window of LibreOffice and start it again"


def install(office: Office) -> list[str]:
    """Build and add the extension; what was done, a line each. OfficeError if the office refuses."""
    version = office.version()
    if version and int(version.split(".")[0]) < 7:
        raise OfficeError(f"LibreOffice {version} in {office.program} is too old; Ingle needs 7.0 or newer")
    if office.lacks_python:
        raise OfficeError(_NO_PYTHON)
    with tempfile.TemporaryDirectory() as folder:
        office.manage("add", "-f", "-s", str(build(Path(folder) / "ingle.oxt")))
    lines = [f"LibreOffice {version} in {office.program}", f"{about()} is in its Calc now, {office.whom}."]
    closed = closed_folder() if office.shared and office.profile is None else None
    if closed is not None:
        lines.append(
            f"Other users cannot read {closed}, where its Python lies: they will see #N/A. Install Ingle in a folder open to all."
        )
    return [*lines, f"Now {RESTART}; then =INGLE.ABOUT() in a cell answers."]


def remove(office: Office) -> list[str]:
    """Take the extension out; what was done, a line each."""
    where = f"LibreOffice {office.version()} in {office.program}"
    listed = office.manage("list")
    if IDENTIFIER not in listed:
        if office.extension() is not None:
            raise OfficeError("Ingle was installed for all users of this computer; remove it as administrator (root)")
        return [where, "Ingle was not in its Calc; nothing was changed."]
    office.manage("remove", IDENTIFIER)
    return [where, f"Ingle is no longer in its Calc; {RESTART}."]


def closed_folder() -> Path | None:
    """A folder on the way to Ingle's Python that other users of this computer cannot enter."""
    python = Path(sys.executable)
    for target in (python, python.resolve(), *map(Path, package_folders())):
        for folder in reversed(target.parents):
            if folder.exists() and not folder.stat().st_mode & stat.S_IXOTH:
                return folder
    return None
