"""The name and version of this installation, and what its answers are not."""

from __future__ import annotations

from functools import cache

CAUTION = (
    "Results are estimates of steady one-dimensional conduction. They do not replace local codes, type tests or the judgement "
    "of a licensed engineer; a part that can burn, overheat a cable or run away needs its own test."
)


@cache
def version() -> str:
    """The version of the installed package; 0 where it is not installed as one."""
    from importlib.metadata import PackageNotFoundError
    from importlib.metadata import version as version_of

    try:
        return version_of("ingle")
    except PackageNotFoundError:
        return "0"


@cache
def about() -> str:
    """`Ingle` and its version, as INGLE.ABOUT and `ingle --version` say it."""
    return f"Ingle {version()}" if version() != "0" else "Ingle (not installed as a package)"
