"""`ingle doctor`: each way into a spreadsheet program checked, with a remedy for what is wrong."""

from __future__ import annotations

from pathlib import Path


def examine(folder: Path | None, profile: Path | None) -> int:
    """Print what is found as it is found; 1 if anything is wrong."""
    from ingle_addin.about import about
    from ingle_addin.calc.doctor import findings

    print(about())
    good = True
    for title, found in (("Calc", findings(folder, profile)),):
        print(f"{title}:")
        for finding in found:
            print(f"  {'ok   ' if finding.good else 'WRONG'}  {finding.what}: {finding.said}", flush=True)
            if not finding.good:
                print(f"         {finding.remedy}", flush=True)
                good = False
    return 0 if good else 1
