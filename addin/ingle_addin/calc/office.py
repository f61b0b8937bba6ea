"""Finds LibreOffice on this computer and speaks to its extension manager and its command line."""

from __future__ import annotations

import os
import re
import shutil
import subprocess
import sys
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

from ingle_addin.calc.registration import IDENTIFIER

_PATIENCE = 180.0  # seconds for any one run of the office
_VERSION = re.compile(r"LibreOffice\S*\s+(\d+(?:\.\d+)+)")
# The lines of the list are in the office's language: the identifier, then the version after any word.
_LISTED = re.compile(rf"\b{re.escape(IDENTIFIER)}\s*\n[^\n:]*:\s*(\S+)")
_PLACE = re.compile(r"vnd\.sun\.star\.expand:\$(UNO_(?:USER|SHARED)_PACKAGES_CACHE)/(\S+?/ingle\.oxt)\s")


class OfficeError(Exception):
    """The office cannot be found or refuses; the text says what to do."""


@dataclass(frozen=True)
class Extension:
    """Ingle as the office holds it: its version, and its folder where that is known."""

    version: str
    folder: Path | None


@dataclass(frozen=True)
class Office:
    """An installed office; ``profile`` is a profile other than the user's own, the folder that holds it."""

    program: Path
    soffice: Path
    unopkg: Path
    profile: Path | None = None

    @property
    def shared(self) -> bool:
        """Whether extensions go to all users: root has none of its own."""
        return hasattr(os, "geteuid") and os.geteuid() == 0

    @property
    def arguments(self) -> list[str]:
        """What every program of the office is told about the profile."""
        if self.profile is None:
            return []
        (self.profile / "shared").mkdir(parents=True, exist_ok=True)
        user, shared = ((self.profile / name).resolve().as_uri() for name in ("profile", "shared"))
        return [f"-env:UserInstallation={user}", f"-env:UNO_SHARED_PACKAGES_CACHE={shared}"]

    @property
    def whom(self) -> str:
        """Who has what is installed."""
        if self.profile is not None:
            return f"in the profile in {self.profile}"
        return "for all users of this computer" if self.shared else "for this user"

    @property
    def lacks_python(self) -> bool:
        """Whether the office came without its Python, as some Linux packages do."""
        return sys.platform.startswith("linux") and not (self.program / "pythonloader.py").exists()

    def version(self) -> str:
        """The version that the office tells, empty if it tells none."""
        found = _VERSION.search(self.run(self.soffice, "--version").stdout)
        return found[1] if found else ""

    def run(self, program: Path, *arguments: str) -> subprocess.CompletedProcess[str]:
        """Run one of the office's programs; OfficeError if it does not end."""
        command = [str(program), *arguments, *self.arguments]
        environment = {name: value for name, value in os.environ.items() if not name.startswith("PYTHON")}
        try:
            return subprocess.run(
                command, stdin=subprocess.DEVNULL, capture_output=True, text=True, errors="replace", check=False,
                timeout=_PATIENCE, env=environment,
            )  # fmt: skip
        except subprocess.TimeoutExpired:
            raise OfficeError(f"{program.name} did not end within {_PATIENCE:g} s; close LibreOffice and try again") from None
        except OSError as error:
            raise OfficeError(f"{program} cannot be run ({error.strerror}); repair the installation of LibreOffice") from None

    def manage(self, verb: str, *arguments: str) -> str:
        """Let the extension manager add, remove or list; OfficeError with its own last line if it refuses."""
        done = self.run(self.unopkg, verb, *(["--shared"] if self.shared else []), *arguments)
        if done.returncode != 0:
            lines = [line.strip() for line in (done.stderr + done.stdout).splitlines() if line.strip()]
            telling = [line for line in lines if "unopkg" not in line] or lines or ["no reason was given"]
            raise OfficeError(f"LibreOffice's extension manager refused: {telling[0]}")
        return done.stdout

    def extension(self) -> Extension | None:
        """Ingle's extension as the office has it, None if it has none: the user's own before one for all users."""
        listed = ["list"] if not self.shared else []
        for arguments in (*([listed] if listed else []), ["list", "--shared"]):
            text = self.run(self.unopkg, *arguments).stdout
            found = _LISTED.search(text)
            if found:
                place = _PLACE.search(text, found.start())
                return Extension(found[1], self._folder(*place.groups()) if place else None)
        return None

    def _folder(self, variable: str, path: str) -> Path | None:
        """The folder of an extension; the office's own variable says beneath which of these."""
        if variable == "UNO_USER_PACKAGES_CACHE":
            roots = [self.user / "uno_packages" / "cache"]
        elif self.profile is not None:
            roots = [self.profile / "shared"]
        else:
            share = Path("share") / "uno_packages" / "cache"
            roots = [
                self.program.parent / share,
                Path("/var/lib/libreoffice") / share,
                Path("/var/spool/libreoffice/uno_packages/cache"),
            ]
        return next((root / path for root in roots if (root / path).is_dir()), None)

    @property
    def user(self) -> Path:
        """The user's folder of the profile."""
        if self.profile is not None:
            return self.profile / "profile" / "user"
        if sys.platform == "win32":
            return Path(os.environ.get("APPDATA", "")) / "LibreOffice" / "4" / "user"
        if sys.platform == "darwin":
            return Path.home() / "Library" / "Application Support" / "LibreOffice" / "4" / "user"
        return Path(os.environ.get("XDG_CONFIG_HOME") or Path.home() / ".config") / "libreoffice" / "4" / "user"

    @property
    def is_open(self) -> bool:
        """Whether the office runs on this profile now, as far as its lock file tells."""
        return (self.user.parent / ".lock").exists()


def find(folder: Path | None = None, profile: Path | None = None) -> Office:
    """The office in ``folder``, or the first found where it is usually installed; OfficeError if there is none."""
    for program in [folder] if folder is not None else _usual_places():
        for place in (program, program / "program", program / "Contents" / "MacOS"):
            soffice, unopkg = _named(place, ("soffice.com", "soffice")), _named(place, ("unopkg.com", "unopkg"))
            if soffice is not None and unopkg is not None:
                return Office(place, soffice, unopkg, profile)
    if folder is not None:
        raise OfficeError(f"{folder} holds no LibreOffice (no soffice and unopkg); name its program folder")
    raise OfficeError("LibreOffice was not found; install it with Calc, 7.0 or newer, or name its program folder with --office")


def _named(folder: Path, names: Sequence[str]) -> Path | None:
    return next((folder / name for name in names if (folder / name).is_file()), None)


def _usual_places() -> Iterator[Path]:
    for name in ("soffice", "libreoffice"):
        found = shutil.which(name)
        if found:
            yield Path(found).resolve().parent
    if sys.platform == "win32":
        for variable in ("ProgramFiles", "ProgramFiles(x86)", "LOCALAPPDATA"):
            yield Path(os.environ.get(variable, "C:\\Program Files")) / "LibreOffice"
    elif sys.platform == "darwin":
        yield Path("/Applications/LibreOffice.app")
        yield Path.home() / "Applications" / "LibreOffice.app"
    else:
        yield from (Path("/usr/lib/libreoffice"), Path("/usr/lib64/libreoffice"))
        yield from sorted(Path("/opt").glob("libreoffice*"), reverse=True)
