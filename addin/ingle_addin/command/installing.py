"""`ingle install calc`."""

from __future__ import annotations

from pathlib import Path

from ingle_addin.command.failure import Failure


def install_calc(build_only: Path | None, remove: bool, folder: Path | None, profile: Path | None) -> int:
    """Put Ingle into Calc, take it out, or only write the extension's file; print what was done."""
    from ingle_addin.calc.extension import build
    from ingle_addin.calc.install import install
    from ingle_addin.calc.install import remove as take_out
    from ingle_addin.calc.office import OfficeError, find

    if build_only is not None:
        if remove:
            raise Failure("--build-only writes a file and --remove changes Calc; give one of them")
        try:
            print(f"{build(build_only)}: the extension, for this installation of Ingle only")
        except OSError as error:
            raise Failure(f"{build_only} cannot be written ({error.strerror}); name a file in a folder you may write to") from None
        return 0
    try:
        office = find(folder, profile)
        lines = take_out(office) if remove else install(office)
    except OfficeError as error:
        raise Failure(str(error)) from None
    for line in lines:
        print(line)
    return 0
