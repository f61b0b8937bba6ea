"""The commands and their options."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Annotated

import typer

app = typer.Typer(
    name="ingle",
    help="How hot parts that heat themselves get, and what a temperature limit allows, in workbook cells.",
    epilog="Begin with: ingle fill workbooks/busbars.xlsx",
    no_args_is_help=False,
    rich_markup_mode=None,
    add_completion=False,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
)


def run(arguments: list[str] | None = None) -> int:
    """Run with these arguments (the process's own if None); the exit code."""
    from ingle_addin.command.failure import Failure

    try:
        result = app(arguments, standalone_mode=False, prog_name="ingle")
    except Failure as failure:
        print(f"ingle: {failure}", file=sys.stderr)
        return 2
    except (typer.Abort, KeyboardInterrupt):
        print("ingle: stopped; nothing was written", file=sys.stderr)
        return 2
    except BrokenPipeError:
        sys.stderr.close()  # the reader of our output has left
        return 0
    except Exception as error:
        shown = _usage(error)
        if shown is None:
            raise
        print(f"ingle: {shown}", file=sys.stderr)
        return 2
    return result if isinstance(result, int) else 0


def _usage(error: Exception) -> str | None:
    """The words of a wrong use of the command line, None for any other error."""
    words = getattr(error, "format_message", None)
    if words is None:
        return None
    context = getattr(error, "ctx", None)
    path = context.command_path if context is not None else "ingle"
    message = str(words()).rstrip(".").replace("\n", " ")
    return f"{message[:1].lower()}{message[1:]}; see {path} --help"


def _version(wanted: bool) -> None:
    if wanted:
        from ingle_addin.about import about

        print(about())
        raise typer.Exit


@app.callback(invoke_without_command=True)
def _first(
    context: typer.Context,
    version: Annotated[bool, typer.Option("--version", callback=_version, is_eager=True, help="Show the version.")] = False,
) -> None:
    if context.invoked_subcommand is None and not version:
        print(
            "Ingle fills workbooks whose cells ask how hot self-heating parts get.\n"
            "  ingle fill BOOK.xlsx    computes a workbook into BOOK.filled.xlsx\n"
            "  ingle check BOOK.xlsx   compares a workbook with its stored values\n"
            "  ingle ask ANSWERS CASE  answers one case here\n"
            "  ingle install calc      puts the functions into LibreOffice Calc\n"
            "  ingle doctor            says what is wrong with that\n"
            "  ingle reference         lists all headings and functions\n"
            "  ingle --help            lists all commands"
        )


@app.command(short_help="Compute a workbook.", epilog="Example: ingle fill candidates.xlsx -o candidates.out.xlsx")
def fill(
    book: Annotated[Path, typer.Argument(help="The workbook, .xlsx or .xlsm.", show_default=False)],
    out: Annotated[Path | None, typer.Option("-o", "--out", help="Where to write; STEM.filled.xlsx if not given.")] = None,
    in_place: Annotated[bool, typer.Option("--in-place", help="Write into BOOK itself, which is kept as BOOK.bak.")] = False,
    strict: Annotated[bool, typer.Option("--strict", help="Leave with 1 if an answer is missing.")] = False,
) -> int:
    """Compute a workbook and write every computed value into its cell; all else in the file stays as it is."""
    from ingle_addin.command.filling import fill_book

    return fill_book(book, out, in_place, strict)


@app.command(short_help="Compare a workbook with its stored values.", epilog="Example: ingle check workbooks/busbars.xlsx")
def check(
    book: Annotated[Path, typer.Argument(help="The workbook, .xlsx or .xlsm.", show_default=False)],
    within: Annotated[str, typer.Option("--within", help="Largest difference, over the larger of the number and 1.")] = "1e-6",
    as_json: Annotated[bool, typer.Option("--json", help="Print all that was found as JSON.")] = False,
    allow_unanswered: Annotated[
        bool, typer.Option("--allow-unanswered", help="Rows without an answer do not count; for books that keep a bad row.")
    ] = False,
) -> int:
    """Compute a workbook and list the cells whose stored value differs and the rows without an answer; nothing is written."""
    from ingle_addin.command.checking import check_book

    return check_book(book, within, as_json, allow_unanswered)


@app.command(short_help="Turn one spelling of the functions into the other.", epilog="Example: ingle respell old.xlsx --to dotted")
def respell(
    book: Annotated[Path, typer.Argument(help="The workbook, .xlsx or .xlsm.", show_default=False)],
    to: Annotated[str, typer.Option("--to", help="dotted as in INGLE.PEAK, or underscored as in INGLE_PEAK.", show_default=False)],
    out: Annotated[
        Path | None, typer.Option("-o", "--out", help="Where to write; STEM.dotted.xlsx or the like if not given.")
    ] = None,
    in_place: Annotated[bool, typer.Option("--in-place", help="Write into BOOK itself, which is kept as BOOK.bak.")] = False,
) -> int:
    """Spell every Ingle function in a workbook one way; all else in the file stays as it is, the values too."""
    from ingle_addin.command.respelling import respell_book

    return respell_book(book, to, out, in_place)


@app.command(
    short_help="Answer one case.",
    epilog='Example: ingle ask "peak [°C]; why" "shape = wall; thickness [mm] = 10; conductivity [W/(m·K)] = 390; '
    'generation [W/cm³] = 2; both film [W/(m²·K)] = 12; both fluid [°C] = 35"',
)
def ask(
    answers: Annotated[str, typer.Argument(help="Answer headings, split by ;", show_default=False)],
    case: Annotated[str, typer.Argument(help="HEADING = VALUE; HEADING = VALUE …", show_default=False)],
) -> int:
    """Answer one case in the terminal."""
    from ingle_addin.command.asking import ask_case

    return ask_case(answers, case)


@app.command(short_help="List headings and functions.", epilog="Example: ingle reference")
def reference() -> int:
    """List the input headings, answer headings and worksheet functions."""
    from ingle_addin.command.reference import print_reference

    return print_reference()


installs = typer.Typer(help="Put the functions into a spreadsheet program.", no_args_is_help=False, rich_markup_mode=None)
app.add_typer(installs, name="install", short_help="Put the functions into Calc.")

_OFFICE = typer.Option("--office", help="LibreOffice's program folder; found by itself if not given.")
_PROFILE = typer.Option("--profile", help="A folder for a LibreOffice profile apart from your own; for trials.")


@installs.command("calc", short_help="Into LibreOffice Calc.", epilog="Example: ingle install calc")
def install_calc(
    build_only: Annotated[
        Path | None, typer.Option("--build-only", help="Write the extension to this file, install nothing.")
    ] = None,
    remove: Annotated[bool, typer.Option("--remove", help="Take Ingle out of Calc.")] = False,
    office: Annotated[Path | None, _OFFICE] = None,
    profile: Annotated[Path | None, _PROFILE] = None,
) -> int:
    """Put the functions and the menu of Ingle into LibreOffice Calc."""
    from ingle_addin.command.installing import install_calc as install

    return install(build_only, remove, office, profile)


@app.command(short_help="Say what is wrong with the set-up.", epilog="Example: ingle doctor")
def doctor(
    office: Annotated[Path | None, _OFFICE] = None,
    profile: Annotated[Path | None, _PROFILE] = None,
) -> int:
    """Check Ingle in the spreadsheet programs step by step; each finding that is wrong has its remedy. Leaves with 1 then."""
    from ingle_addin.command.doctor import examine

    return examine(office, profile)
