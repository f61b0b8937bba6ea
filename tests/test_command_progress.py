"""Progress: nothing within two seconds, then a line in a file or a bar on a terminal."""

from __future__ import annotations

import os
import subprocess
import sys
import time
from pathlib import Path

import pytest
from ingle_addin.batch import solve_calls
from ingle_addin.book import fill
from ingle_addin.command import progress
from ingle_addin.functions import NAMES
from test_command import book


def test_nothing_is_said_of_what_is_quick(capsys: pytest.CaptureFixture[str]) -> None:
    with progress.shown_progress() as tell:
        tell("reading", 0.5)
    assert capsys.readouterr() == ("", "")


def test_a_line_now_and_then_in_a_file(capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(progress, "PATIENCE", 0.05)
    monkeypatch.setattr(progress, "BETWEEN_LINES", 0.2)

    def next_line() -> str:
        until = time.monotonic() + 30.0
        while time.monotonic() < until:
            lines = capsys.readouterr().err.splitlines()
            if lines:
                return lines[-1]
            time.sleep(0.01)
        return "nothing"

    with progress.shown_progress() as tell:
        tell("reading Data", 0.25)
        assert next_line() == "ingle: 25% done, reading Data …"
        tell("solving", 0.125)  # a share that went back would only puzzle
        assert next_line() == "ingle: 25% done, solving …"


def test_a_bar_on_a_terminal(tmp_path: Path) -> None:
    """A process of its own whose error stream is a terminal of 80 columns."""
    script = (
        "import time\nfrom ingle_addin.command import progress\nprogress.PATIENCE = 0.05\n"
        "with progress.shown_progress() as tell:\n    tell('solving [1]', 0.5)\n    time.sleep(1.0)\n"
    )
    pty = pytest.importorskip("pty", reason="there are no pseudo-terminals on this platform")
    ours, theirs = pty.openpty()
    environment = {**os.environ, "TERM": "xterm", "COLUMNS": "80", "PYTHONUTF8": "1"}
    with subprocess.Popen([sys.executable, "-c", script], stderr=theirs, cwd=tmp_path, env=environment) as process:
        os.close(theirs)
        seen = b""
        try:
            while chunk := os.read(ours, 4096):
                seen += chunk
        except OSError:  # the other side is closed
            pass
        assert process.wait() == 0
    os.close(ours)
    assert "solving [1]" in seen.decode()
    assert "━" in seen.decode()


def test_the_stages_of_a_fill_go_forward(tmp_path: Path) -> None:
    told: list[tuple[str, float]] = []
    fill(book(tmp_path / "parts.xlsx"), functions=NAMES, solve=solve_calls, progress=lambda *each: told.append(each))
    assert [stage for stage, _ in told] == [
        "reading Data",
        "reading formulas",
        "loading the calculation engine",
        "calculating",
        "solving 2 × INGLE.PEAK",
        "solving 2 × INGLE.WHY",
        "solving",
        "calculating",
        "writing",
    ]
    shares = [share for stage, share in told if stage != "calculating"]
    assert shares == sorted(shares)
    assert 0.0 <= min(shares) <= max(shares) < 1.0
