"""The worker's client without Calc: one restart within a call, the time limit, the pause after failures, a clean start."""

from __future__ import annotations

import os
import signal
import struct
import subprocess
import sys
import time
from collections.abc import Iterator
from pathlib import Path

import pytest
from ingle_addin.about import about
from ingle_addin.calc import extension
from ingle_addin.calc.inside import client as client_module
from ingle_addin.calc.inside import wire
from ingle_addin.calc.inside.client import Client, WorkerError, clean_environment
from ingle_addin.calc.inside.errors import NUMBERS, error_value
from ingle_addin.calc.worker import ERRORS, Desk
from ingle_addin.cells import CellError

HEADINGS = ("shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "both held [°C]")
ROW = ("wall", 20.0, 2.0, 1e5, 20.0)
PEAK = 20.0 + 1e5 * 0.02**2 / (8.0 * 2.0)  # T + qL²/8k
CALL = ("INGLE.PEAK", ((HEADINGS,), (ROW,)), False)
ENDED = "Ingle's worker ended by itself (code {}); choose Ingle > Recalculate, or run: ingle doctor"


@pytest.fixture
def worker() -> Iterator[Client]:
    client = Client(extension.worker_command())
    yield client
    client.close()


@pytest.fixture
def bad(tmp_path: Path) -> Iterator[Client]:
    """A worker that does as it is told; how often it was started is in marks(tmp_path)."""
    client = bad_client(tmp_path, "as told", 0.7)
    yield client
    client.close()


def bad_client(folder: Path, way: str, seconds: float) -> Client:
    script = Path(__file__).with_name("calc_bad_worker.py")
    start = f"import sys; sys.path[:0] = {extension.package_folders()!r}; import runpy; sys.argv = sys.argv[1:]; "
    start += f"runpy.run_path({str(script)!r}, run_name='__main__')"
    return Client([sys.executable, "-I", "-c", start, str(script), way, str(folder / "marks")], seconds)


def marks(folder: Path) -> int:
    return len((folder / "marks").read_text().splitlines())


@pytest.fixture(autouse=True)
def short_start(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(client_module, "START_SECONDS", 10.0)


def test_a_call_is_answered_by_a_process_of_its_own(worker: Client) -> None:
    assert worker.process_id is None  # nothing is started before it is needed
    assert worker.ask(CALL) == ((PEAK,),)
    name, process = worker.ask(("hello",))
    assert name == about()
    assert process == worker.process_id != os.getpid()
    assert worker.ask(("INGLE.PEAK", ((HEADINGS,), (ROW, ROW)), False)) == ((PEAK,), (PEAK,))
    long = tuple((("wall", 20.0, 2.0, 1e5, float(number))) for number in range(20_000))
    rows = worker.ask(("INGLE.PEAK", ((HEADINGS,), long), False), 20_000)
    assert [rows[0][0], rows[-1][0]] == [PEAK - 20.0, PEAK + 19_979.0]
    worker.close()
    assert worker.process_id is None
    with pytest.raises(ProcessLookupError):
        os.kill(process, 0)
    assert worker.ask(CALL) == ((PEAK,),)


def test_a_killed_worker_is_started_again_within_the_call(worker: Client) -> None:
    first = worker.ask(("hello",))[1]
    os.kill(first, signal.SIGKILL)
    assert worker.ask(CALL) == ((PEAK,),)
    assert worker.process_id != first


def test_a_stopped_worker_is_killed_when_its_answer_is_overdue_and_started_again() -> None:
    worker = Client(extension.worker_command(), 0.6)
    try:
        first = worker.ask(("hello",))[1]
        os.kill(first, signal.SIGSTOP)
        assert worker.ask(CALL) == ((PEAK,),)
        assert worker.process_id != first
        # Nor does one that reads no more hold up a message longer than the pipe.
        os.kill(worker.ask(("hello",))[1], signal.SIGSTOP)
        rows = worker.ask(("INGLE.PEAK", ((HEADINGS,), (ROW,) * 20_000), False))
        assert rows == ((PEAK,),) * 20_000
    finally:
        worker.close()


def test_a_call_that_ends_the_worker_is_tried_twice_and_its_neighbours_are_answered(bad: Client, tmp_path: Path) -> None:
    with pytest.raises(WorkerError, match=rf"^{ENDED.format(5).replace('(', '[(]').replace(')', '[)]')}$"):
        bad.ask("die")
    assert marks(tmp_path) == 2
    assert bad.ask("fine")[0] == "fine"
    assert bad.ask("nonsense again")[0] == "nonsense again"
    with pytest.raises(WorkerError, match="ended by itself"):
        bad.ask("nonsense")
    assert bad.ask("fine")[0] == "fine"


def test_a_worker_that_dies_once_heals_within_the_call(bad: Client, tmp_path: Path) -> None:
    assert bad.ask("die once")[0] == "die once"
    assert marks(tmp_path) == 2


def test_ten_thousand_cells_do_not_wait_one_by_one(tmp_path: Path) -> None:
    dead = bad_client(tmp_path, "dies at once", 20.0)
    reasons = set()
    for _ in range(10_000):
        with pytest.raises(WorkerError) as caught:
            dead.ask("fine")
        reasons.add(str(caught.value))
    assert reasons == {ENDED.format(3)}
    assert marks(tmp_path) == 2 * 3  # three calls of two starts each, then none
    dead.forget()
    with pytest.raises(WorkerError):
        dead.ask("fine")
    assert marks(tmp_path) == 8


def test_after_an_answer_that_is_overdue_twice_no_cell_waits_again(
    bad: Client, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(client_module, "START_SECONDS", 0.8)
    start = time.monotonic()
    for _ in range(1000):
        with pytest.raises(
            WorkerError, match=r"^Ingle did not answer within 0.7 s; choose Ingle > Recalculate, or run: ingle doctor$"
        ):
            bad.ask("sleep")
    assert marks(tmp_path) == 2
    assert time.monotonic() - start < 60.0  # a thousand waits would be twenty minutes
    bad.forget()
    assert bad.ask("fine")[0] == "fine"


def test_after_the_pause_one_start_is_tried_and_the_pause_doubles(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    clock = [1000.0]
    dead = bad_client(tmp_path, "dies at once", 20.0)
    monkeypatch.setattr(client_module.time, "monotonic", lambda: clock[0])
    starts = []
    for moment in (0.0, 0.0, 0.0, 29.0, 31.0, 60.0, 90.0, 92.0):
        clock[0] = 1000.0 + moment
        with pytest.raises(WorkerError):
            dead.ask("fine")
        starts.append(marks(tmp_path))
    assert starts == [2, 4, 6, 6, 7, 7, 7, 8]


def test_an_environment_that_is_gone_says_what_to_run(tmp_path: Path) -> None:
    gone = Client([str(tmp_path / "python"), "-c", "pass"])
    sentence = f"could not be started; install Ingle again, then run: ingle install calc (it was {tmp_path / 'python'})"
    for _ in range(3):
        with pytest.raises(WorkerError) as caught:
            gone.ask(CALL)
        assert str(caught.value) == "Ingle's Python " + sentence
    command = extension.worker_command()
    without = Client([*command[:4]])  # its own folders are not told
    code = subprocess.run([*command[:4]], stdin=subprocess.DEVNULL, check=False, cwd=tmp_path).returncode
    if code == client_module.NO_PACKAGE:  # unless this Python has Ingle installed for good
        with pytest.raises(WorkerError) as caught:
            without.ask(CALL)
        holds = "holds no working Ingle; install Ingle again, then run: ingle install calc"
        assert str(caught.value) == f"Ingle's Python {holds} (it was {sys.executable})"
    without.close()


def test_the_environment_is_cleaned_and_the_worker_deaf_to_it(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    (tmp_path / "numpy.py").write_text("raise SystemExit('the wrong numpy')")
    given = {"PYTHONPATH": str(tmp_path), "PYTHONHOME": "/nowhere", "LD_LIBRARY_PATH": "/nowhere", "UNO_PATH": "x",
             "URE_BOOTSTRAP": "x", "PATH": "/bin", "HOME": "/home/someone"}  # fmt: skip
    assert clean_environment(given) == {"PATH": "/bin", "HOME": "/home/someone"}
    for name in ("PYTHONPATH", "LD_LIBRARY_PATH"):
        monkeypatch.setenv(name, str(tmp_path))
    monkeypatch.chdir(tmp_path)
    worker = Client(extension.worker_command())
    assert worker.ask(CALL) == ((PEAK,),)
    worker.close()


def test_the_worker_ends_when_its_client_is_killed(tmp_path: Path) -> None:
    code = (
        "import sys, time\n"
        f"sys.path[:0] = {extension.package_folders()!r}\n"
        "from ingle_addin.calc.inside.client import Client\n"
        "from ingle_addin.calc.extension import worker_command\n"
        "client = Client(worker_command())\n"
        "print(client.ask(('hello',))[1], flush=True)\n"
        "time.sleep(60)\n"
    )
    with subprocess.Popen([sys.executable, "-c", code], stdout=subprocess.PIPE, text=True, cwd=tmp_path) as host:
        assert host.stdout is not None
        process = int(host.stdout.readline())
        os.kill(process, 0)
        host.kill()
    for _ in range(200):
        if not alive(process):
            return
        time.sleep(0.05)
    raise AssertionError("the worker outlives its client")


def alive(process: int) -> bool:
    try:
        state = Path(f"/proc/{process}/stat").read_text().rpartition(")")[2].split()[0]
    except (FileNotFoundError, ProcessLookupError):
        return False
    return state != "Z"  # ended, only not yet collected by whoever inherited it


# The worker's own side.


def test_errors_travel_as_the_numbers_that_calc_knows() -> None:
    assert {error.value for error in CellError} == set(NUMBERS)
    for error in CellError:
        sent = wire.frame(((ERRORS[error],),))
        read, write = os.pipe()
        os.write(write, sent)
        os.close(write)
        ((value,),) = wire.read(read)
        os.close(read)
        assert value != value
        assert int.from_bytes(_bits(value)[:4], "little") == NUMBERS[error.value]
        assert _bits(value) == _bits(error_value(error.value))


def _bits(value: float) -> bytes:
    return struct.pack("<d", value)


def test_what_fails_inside_the_worker_is_one_answer_and_not_the_end(monkeypatch: pytest.MonkeyPatch) -> None:
    read, write = os.pipe()
    back, out = os.pipe()
    desk = Desk()

    class Failing(Desk):
        def answer(self, message: tuple[object, ...]) -> object:
            if message[0] == "INGLE.PEAK":
                raise ZeroDivisionError("by nothing")
            return desk.answer(message)

    from ingle_addin.calc import worker as module

    os.write(write, wire.frame(CALL))
    monkeypatch.setattr(module, "Desk", Failing)
    monkeypatch.setattr(module.os, "dup", lambda _: out)
    monkeypatch.setattr(module.os, "dup2", lambda *_: None)
    os.close(write)
    with os.fdopen(read) as source:
        monkeypatch.setattr(module.sys, "stdin", source)
        module.main()
    assert wire.read(back) == "Ingle itself failed here (ZeroDivisionError: by nothing); please report it with this row"
    os.close(back)
    os.close(out)
