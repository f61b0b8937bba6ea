"""`ingle install calc` and `ingle doctor`, in a real office with a profile of its own; and what they say when something is amiss."""

from __future__ import annotations

import os
import shutil
import stat
import subprocess
import sys
import tempfile
from pathlib import Path

import calc_office
import pytest
from ingle_addin.about import about, version
from ingle_addin.calc import doctor, install
from ingle_addin.calc import office as office_module
from ingle_addin.calc.office import Extension, Office, OfficeError, find
from ingle_addin.command.app import run
from ingle_addin.findings import Finding

NEEDS_OFFICE = pytest.mark.skipif(bool(calc_office.MISSING), reason=calc_office.MISSING or "-")


def command(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, list[str], str]:
    code = run(list(words))
    said = capsys.readouterr()
    return code, said.out.splitlines(), said.err.strip()


@pytest.mark.long
@NEEDS_OFFICE
def test_install_doctor_and_remove_in_a_real_office(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("HOME", str(tmp_path))
    profile = ("--profile", str(tmp_path / "trial"))
    where = f"LibreOffice {find().version()} in {find().program}"
    before = command(capsys, "doctor", *profile)
    seen = [about(), "Calc:", f"  ok     LibreOffice: {where.removeprefix('LibreOffice ')}"]
    assert before == (1, [*seen, "  WRONG  extension: not installed", "         run: ingle install calc"], "")
    assert command(capsys, "install", "calc", "--remove", *profile) == (
        0, [where, "Ingle was not in its Calc; nothing was changed."], "",
    )  # fmt: skip
    restart = "close every window of LibreOffice and start it again"
    assert command(capsys, "install", "calc", *profile) == (
        0,
        [
            where,
            f"{about()} is in its Calc now, in the profile in {profile[1]}.",
            f"Now {restart}; then =INGLE.ABOUT() in a cell answers.",
        ],
        "",
    )
    seen += [f"  ok     extension: version {version()}", f"  ok     worker: {about()} in {sys.executable}"]
    assert command(capsys, "doctor", *profile) == (0, [*seen, "  ok     a cell in Calc: INGLE.PEAK answers 22.5, as it should"], "")
    # A Python that is gone, and an older extension, as the office tells of it.
    settings = next((tmp_path / "trial").rglob("ingle.json"))
    text = settings.read_text(encoding="utf-8")
    settings.write_text(text.replace(sys.executable, "/nowhere/python"), encoding="utf-8")
    assert command(capsys, "doctor", *profile) == (
        1,
        [*seen[:-1], "  WRONG  worker: Ingle's Python could not be started",
         "         install Ingle again, then run: ingle install calc (it was /nowhere/python)"],
        "",
    )  # fmt: skip
    settings.unlink()
    lost = [*seen[:-1], "  WRONG  worker: the extension's settings cannot be read", "         run: ingle install calc"]
    assert command(capsys, "doctor", *profile) == (1, lost, "")
    assert command(capsys, "install", "calc", "--remove", *profile) == (
        0, [where, f"Ingle is no longer in its Calc; {restart}."], "",
    )  # fmt: skip
    assert command(capsys, "doctor", *profile) == before


@pytest.mark.long
@NEEDS_OFFICE
def test_an_ordinary_user_installs_for_himself(tmp_path: Path) -> None:
    """In the user's own profile; run by root it becomes a user that is allowed no more than to read root's own files."""
    root = os.geteuid() == 0
    home = Path(tempfile.mkdtemp(prefix="ingle-user-")) if root else tmp_path
    caps = ("--inh-caps=+dac_override", "--ambient-caps=+dac_override")
    become = ["setpriv", "--reuid=65534", "--regid=65534", "--clear-groups", *caps] if root else []
    code = "from ingle_addin.command import main; main()"
    variables = {"HOME": str(home), "PATH": os.environ["PATH"], "PYTHONPATH": os.pathsep.join(install.package_folders())}
    restart = "close every window of LibreOffice and start it again"
    steps = {
        ("install", "calc"): f"Now {restart}; then =INGLE.ABOUT() in a cell answers.",
        ("doctor",): "  ok     a cell in Calc: INGLE.PEAK answers 22.5, as it should",
        ("install", "calc", "--remove"): f"Ingle is no longer in its Calc; {restart}.",
    }
    try:
        if root:
            os.chown(home, 65534, 65534)
        for words, last in steps.items():
            command = [*become, sys.executable, "-B", "-c", code, *words]
            done = subprocess.run(command, env=variables, cwd=home, capture_output=True, text=True, check=False)
            assert (done.returncode, done.stdout.splitlines()[-1:]) == (0, [last]), done
            if words == ("install", "calc"):
                assert done.stdout.splitlines()[1] == f"{about()} is in its Calc now, for this user."
                assert list(home.rglob("ingle.json"))
    finally:
        if root:
            shutil.rmtree(home)


def test_build_only_writes_the_file_and_needs_no_office(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "ingle.oxt"
    told = f"{path}: the extension, for this installation of Ingle only"
    assert command(capsys, "install", "calc", "--build-only", str(path)) == (0, [told], "")
    assert path.read_bytes()[:2] == b"PK"
    nowhere = tmp_path / "nowhere" / "ingle.oxt"
    reason = "cannot be written (No such file or directory); name a file in a folder you may write to"
    assert command(capsys, "install", "calc", "--build-only", str(nowhere)) == (2, [], f"ingle: {nowhere} {reason}")
    both = command(capsys, "install", "calc", "--build-only", str(path), "--remove")
    assert both == (2, [], "ingle: --build-only writes a file and --remove changes Calc; give one of them")
    assert command(capsys, "install") == (2, [], "ingle: missing command; see ingle install --help")


# An office that is not as it should be: a stand-in made of scripts.


def fake(folder: Path, version_line: str = "LibreOffice 7.4.7.2 40(Build:2)", unopkg: str = "exit 0", loader: bool = True) -> Path:
    program = folder / "program"
    program.mkdir(parents=True)
    for name, text in (("soffice", f'echo "{version_line}"'), ("unopkg", unopkg)):
        path = program / name
        path.write_text(f"#!/bin/sh\n{text}\n")
        path.chmod(path.stat().st_mode | stat.S_IXUSR)
    if loader:
        (program / "pythonloader.py").touch()
    return program


LISTED = """cat <<'END'
All deployed shared extensions:

Identifier: ingle.for.calc
  Version: {}
  URL: vnd.sun.star.expand:$UNO_SHARED_PACKAGES_CACHE/uno_packages/lu1.tmp_/ingle.oxt
  is registered: yes
END"""


@pytest.mark.skipif(sys.platform == "win32", reason="the stand-in is made of shell scripts")
@pytest.mark.parametrize(
    ("fault", "sentence"),
    [
        ({"version_line": "LibreOffice 6.4.7.2"}, "LibreOffice 6.4.7.2 in {program} is too old; Ingle needs 7.0 or newer"),
        (
            {"loader": False},
            "this LibreOffice came without its Python; install it (Debian and Ubuntu: python3-uno, Fedora: libreoffice-pyuno) and "
            "run this again",
        ),
        (
            {"unopkg": 'echo "ERROR: the disk is full" >&2; echo "ERROR: unopkg failed." >&2; exit 1'},
            "LibreOffice's extension manager refused: ERROR: the disk is full",
        ),
    ],
)
def test_an_office_that_cannot_take_the_extension(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], fault: dict[str, str], sentence: str
) -> None:
    program = fake(tmp_path, **fault)  # type: ignore[arg-type]
    if "loader" in fault and not sys.platform.startswith("linux"):
        pytest.skip("only on Linux does an office come without its Python")
    told = command(capsys, "install", "calc", "--office", str(program))
    assert told == (2, [], f"ingle: {sentence.format(program=program)}")


def test_no_office_anywhere(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> None:
    none = f"{tmp_path} holds no LibreOffice (no soffice and unopkg); name its program folder"
    assert command(capsys, "install", "calc", "--office", str(tmp_path)) == (2, [], f"ingle: {none}")
    monkeypatch.setattr(office_module, "_usual_places", lambda: iter(()))
    missing = "LibreOffice was not found; install it with Calc, 7.0 or newer, or name its program folder with --office"
    assert command(capsys, "install", "calc") == (2, [], f"ingle: {missing}")
    assert command(capsys, "doctor") == (1, [about(), "Calc:", "  WRONG  LibreOffice: not found", f"         {missing}"], "")


@pytest.mark.skipif(sys.platform == "win32", reason="the stand-in is made of shell scripts")
def test_doctor_names_what_is_wrong_and_the_remedy(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    old = fake(tmp_path / "old", "LibreOffice 6.4.7.2")
    assert list(doctor.findings(old)) == [
        Finding("LibreOffice", f"6.4.7.2 in {old}", "install LibreOffice 7.0 or newer"),
        Finding("extension", "not installed", "run: ingle install calc"),
    ]
    if sys.platform.startswith("linux"):
        bare = fake(tmp_path / "bare", loader=False)
        remedy = "install the package python3-uno (Debian, Ubuntu) or libreoffice-pyuno (Fedora)"
        assert list(doctor.findings(bare))[1:] == [Finding("its Python", "missing", remedy)]
    older = fake(tmp_path / "older", unopkg=LISTED.format("0.0.1"))
    said = f"version 0.0.1, but Ingle here is {version()}"
    lost = Finding("worker", "the extension's settings cannot be read", "run: ingle install calc")
    assert list(doctor.findings(older))[1:] == [Finding("extension", said, "run: ingle install calc"), lost]
    stuck = fake(tmp_path / "stuck", unopkg="sleep 30")
    monkeypatch.setattr(office_module, "_PATIENCE", 0.5)
    assert list(doctor.findings(stuck))[1:] == [
        Finding("extension", "cannot be listed", "unopkg did not end within 0.5 s; close LibreOffice and try again")
    ]


@pytest.mark.skipif(sys.platform == "win32", reason="the stand-in is made of shell scripts")
def test_doctor_in_an_office_that_is_open_or_answers_wrong(tmp_path: Path) -> None:
    program = fake(tmp_path / "office")
    office = Office(program, program / "soffice", program / "unopkg", tmp_path / "trial")
    office.user.mkdir(parents=True)
    silent = doctor._in_calc(office)
    again = "close every window of LibreOffice and start it again"
    assert silent == Finding("a cell in Calc", "no answer from LibreOffice: no reason was given", f"{again}, then run this again")
    (office.user.parent / ".lock").touch()
    shut = "not tried, since LibreOffice is open; close it and run this again to try"
    assert doctor._in_calc(office) == Finding("a cell in Calc", shut)
    (office.user.parent / ".lock").unlink()
    answer = 'while [ "$1" != --outdir ]; do shift; done; printf "a\\nb\\n#NAME?\\n#NAME?\\n" > "$2/sample.csv"'
    (program / "soffice").write_text(f"#!/bin/sh\n{answer}\n")
    wrong = "INGLE.PEAK answers #NAME? where 22.5 is right; INGLE.WHY: #NAME?"
    assert doctor._in_calc(office) == Finding("a cell in Calc", wrong, f"run: ingle install calc; then {again}")


@pytest.mark.skipif(sys.platform == "win32", reason="the stand-in is made of shell scripts")
def test_an_extension_for_all_users_is_removed_by_root_alone(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    program = fake(tmp_path, unopkg=f'case "$*" in *--shared*) {LISTED.format("1")}\n;; esac')
    monkeypatch.setattr(Office, "shared", False)
    office = find(program)
    with pytest.raises(OfficeError) as caught:
        install.remove(office)
    assert str(caught.value) == "Ingle was installed for all users of this computer; remove it as administrator (root)"


@pytest.mark.skipif(sys.platform == "win32", reason="the stand-in is made of shell scripts")
def test_root_installs_for_all_and_is_told_who_cannot_use_it(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    program = fake(tmp_path, unopkg=f'echo "$@" >> {tmp_path}/calls')
    monkeypatch.setattr(Office, "shared", True)
    monkeypatch.setattr(install, "closed_folder", lambda: Path("/root"))
    done = install.install(find(program))
    restart = "Now close every window of LibreOffice and start it again; then =INGLE.ABOUT() in a cell answers."
    assert done == [
        f"LibreOffice 7.4.7.2 in {program}",
        f"{about()} is in its Calc now, for all users of this computer.",
        "Other users cannot read /root, where its Python lies: they will see #N/A. Install Ingle in a folder open to all.",
        restart,
    ]
    verb, *rest, oxt = (tmp_path / "calls").read_text().split()
    assert [verb, *rest, Path(oxt).name] == ["add", "--shared", "-f", "-s", "ingle.oxt"]
    monkeypatch.setattr(Office, "shared", False)
    assert install.install(find(program))[1:] == [f"{about()} is in its Calc now, for this user.", restart]
    assert "--shared" not in (tmp_path / "calls").read_text().splitlines()[1]


@pytest.mark.skipif(sys.platform == "win32", reason="the stand-in is made of shell scripts")
def test_a_program_that_cannot_be_run(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    program = fake(tmp_path)
    (program / "soffice").write_text("no program")
    (program / "soffice").chmod(0o644)
    told = f"{program / 'soffice'} cannot be run (Permission denied); repair the installation of LibreOffice"
    assert command(capsys, "install", "calc", "--office", str(program)) == (2, [], f"ingle: {told}")
    silent = fake(tmp_path / "silent", unopkg="exit 1")
    refused = "LibreOffice's extension manager refused: no reason was given"
    assert command(capsys, "install", "calc", "--office", str(silent)) == (2, [], f"ingle: {refused}")


def test_doctor_knows_a_worker_of_another_version_and_one_that_computes_wrong(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (tmp_path / "ingle.json").write_text('{"command": ["/some/python"], "seconds": 1.0}')
    found = Extension("1", tmp_path)
    replies: dict[str, object] = {"hello": ("Ingle 0.0.1", 7), "INGLE.PEAK": ((21.5,),)}

    class Stand:
        def __init__(self, command: list[str], seconds: float) -> None:
            assert (command, seconds) == (["/some/python"], 1.0)

        def ask(self, message: tuple[str, ...]) -> object:
            return replies[message[0]]

        def close(self) -> None:
            pass

    monkeypatch.setattr(doctor, "Client", Stand)
    said = f"/some/python holds Ingle 0.0.1, but this is {about()}"
    assert doctor._worker(found) == Finding("worker", said, "run: ingle install calc")
    replies["hello"] = (about(), 7)
    said = "/some/python answers ((21.5,),) where 22.5 is right"
    assert doctor._worker(found) == Finding("worker", said, "install Ingle again, then run: ingle install calc")
    replies["INGLE.PEAK"] = ((22.5,),)
    assert doctor._worker(found) == Finding("worker", f"{about()} in /some/python")


def test_root_is_told_of_a_folder_that_others_cannot_read(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    closed = tmp_path / "closed"
    (closed / "packages").mkdir(parents=True)
    monkeypatch.setattr(install.sys, "executable", "/")
    monkeypatch.setattr(install, "package_folders", lambda: [str(closed / "packages")])
    for folder in [tmp_path, *tmp_path.parents][:-2]:
        if not folder.stat().st_mode & stat.S_IXOTH:
            assert install.closed_folder() is not None  # pytest's own folder is closed already
            return
    assert install.closed_folder() is None
    closed.chmod(0o700)
    assert install.closed_folder() == closed
