"""Builds the workbooks people open: written anew, then filled as `ingle fill` does, so that every value is in its cell.

python workbooks/build.py [--out DIR]
"""

from __future__ import annotations

import argparse
import tempfile
from pathlib import Path

import busbars
from ingle_addin.batch import solve_calls
from ingle_addin.book import fill, summary
from ingle_addin.functions import NAMES

HERE = Path(__file__).resolve().parent


def build(out: Path) -> list[str]:
    """Write ``busbars.xlsx`` into ``out``, filled; the lines that `ingle fill` would print."""
    out.mkdir(parents=True, exist_ok=True)
    with tempfile.TemporaryDirectory() as scratch:
        bare = Path(scratch) / "busbars.xlsx"
        busbars.write(bare)
        report = fill(bare, out / "busbars.xlsx", functions=NAMES, solve=solve_calls)
    return summary(report)


def main() -> None:
    parser = argparse.ArgumentParser(description="Build and fill the workbooks.")
    parser.add_argument("--out", type=Path, default=HERE, help="folder to write into; the script's own if not given")
    print("\n".join(build(parser.parse_args().out)))


if __name__ == "__main__":
    main()
