"""Calc's side of the worker: starts it on first use, waits for its answers, and never waits long for one that is gone.

The one process computes for every open document. A watch thread kills it when an answer is overdue, so that the thread that
waits needs nothing but a blocking read: no thread is woken for a call, a worker that has stopped reading cannot hold up a
long write either, and pipes that know no ``select`` (Windows) do as well.
"""

from __future__ import annotations

import os
import pickle
import subprocess
import tempfile
import threading
import time
from collections.abc import Mapping, Sequence
from typing import Any

from ingle_addin.calc.inside import wire

ANSWER_SECONDS = 20.0  # for one answer; more for long tables
START_SECONDS = 40.0  # more for the first, with numpy and scipy to load
PAUSE_SECONDS = 30.0  # for which a worker that fails is not asked again
_LONGEST_PAUSE = 600.0
_CELLS_A_SECOND = 10_000.0
NO_PACKAGE = 97  # the worker's exit code where its Python cannot import it
_CRASHES = 3  # calls in a row that end the worker before it is left alone
_STRIPPED = ("PYTHON", "LD_LIBRARY_PATH", "LD_PRELOAD", "DYLD_", "UNO_", "URE_", "__PYVENV_LAUNCHER__", "VIRTUAL_ENV")


class WorkerError(Exception):
    """No answer came; the text says why and what to do."""


def clean_environment(environment: Mapping[str, str]) -> dict[str, str]:
    """The office's environment without what would lead another Python to the office's own files."""
    return {name: value for name, value in environment.items() if not name.upper().startswith(_STRIPPED)}


class Client:
    """One worker: ``command`` starts it, ``seconds`` is the time limit of an answer."""

    def __init__(self, command: Sequence[str], seconds: float = ANSWER_SECONDS) -> None:
        self._command = list(command)
        self._seconds = seconds
        self._lock = threading.Lock()
        self._process: subprocess.Popen[bytes] | None = None
        self._due = 0.0  # when the answer awaited now is overdue; 0 while none is
        self._overdue = False
        self._gone = False
        self._crashes = 0
        self._shut_until = 0.0
        self._pause = PAUSE_SECONDS
        self._reason = ""
        self._watch: threading.Thread | None = None
        self._awake = threading.Event()

    @property
    def process_id(self) -> int | None:
        """The worker's process while it runs."""
        return self._process.pid if self._process is not None and self._process.poll() is None else None

    def ask(self, message: Any, cells: int = 0) -> Any:
        """The worker's answer to a message that holds so many cells; WorkerError if none comes.

        A worker that ends or stops answering is started once more within the call. After that it is left alone for a
        while, so that ten thousand cells do not wait one by one.
        """
        with self._lock:
            now = time.monotonic()
            if now < self._shut_until:
                raise WorkerError(self._reason)
            data = wire.frame(message)
            patience = self._seconds + cells / _CELLS_A_SECOND
            for last in (False, True):
                try:
                    answer = self._exchange(data, patience)
                except (OSError, EOFError, pickle.UnpicklingError):
                    self._reason = self._end(patience)
                    if last or self._pause > PAUSE_SECONDS:
                        break
                else:
                    self._crashes = 0
                    self._pause = PAUSE_SECONDS
                    return answer
            self._fail()
            raise WorkerError(self._reason)

    def forget(self) -> None:
        """Forget past failures, so that the next question is put to a worker again."""
        with self._lock:
            self._crashes, self._shut_until, self._pause = 0, 0.0, PAUSE_SECONDS

    def close(self) -> None:
        """End the worker."""
        with self._lock:
            self._end(0.0)

    def _exchange(self, data: bytes, patience: float) -> Any:
        process = self._process
        if process is None:
            process = self._start()
            patience += START_SECONDS
        assert process.stdin is not None
        assert process.stdout is not None
        self._due = time.monotonic() + patience
        if not self._awake.is_set():
            self._awake.set()
        try:
            wire.write(process.stdin.fileno(), data)
            return wire.read(process.stdout.fileno())
        finally:
            self._due = 0.0

    def _start(self) -> subprocess.Popen[bytes]:
        self._overdue = self._gone = False
        self._process = subprocess.Popen(
            self._command,
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            bufsize=0,
            env=clean_environment(os.environ),
            cwd=tempfile.gettempdir(),  # no folder of the user's is kept in use by it
            start_new_session=True,  # an interrupt meant for the office's terminal is not for the worker
            creationflags=getattr(subprocess, "CREATE_NO_WINDOW", 0),
        )
        if self._watch is None:
            self._watch = threading.Thread(target=self._watching, name="Ingle watch", daemon=True)
            self._watch.start()
        return self._process

    def _watching(self) -> None:
        while True:
            self._awake.wait()
            self._awake.clear()
            while True:
                due = self._due
                if not due:
                    break
                left = due - time.monotonic()
                if left <= 0.0 and self._due == due:
                    self._overdue = True
                    process = self._process
                    if process is not None:
                        process.kill()
                    break
                time.sleep(min(0.25, max(left, 0.01)))

    def _end(self, patience: float) -> str:
        """End the worker, if it is not gone by itself; how it came to that, in a sentence."""
        process, self._process = self._process, None
        if process is None:
            self._gone = True
            return self._gone_words("could not be started")
        process.kill()
        code = process.wait()
        for pipe in (process.stdin, process.stdout):
            if pipe is not None:
                pipe.close()
        self._gone = code == NO_PACKAGE
        if self._gone:
            return self._gone_words("holds no working Ingle")
        if self._overdue:
            return f"Ingle did not answer within {patience:.3g} s; choose Ingle > Recalculate, or run: ingle doctor"
        return f"Ingle's worker ended by itself (code {code}); choose Ingle > Recalculate, or run: ingle doctor"

    def _gone_words(self, what: str) -> str:
        return f"Ingle's Python {what}; install Ingle again, then run: ingle install calc (it was {self._command[0]})"

    def _fail(self) -> None:
        self._crashes += 1
        if self._gone or self._overdue or self._crashes >= _CRASHES or self._pause > PAUSE_SECONDS:
            self._shut_until = time.monotonic() + self._pause
            self._pause = min(2.0 * self._pause, _LONGEST_PAUSE)
