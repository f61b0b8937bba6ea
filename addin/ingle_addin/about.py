"""The name and version of this installation."""

from __future__ import annotations

from functools import cache


@cache
def about() -> str:
    """`Ingle` and its version, as INGLE.ABOUT and `ingle --version` say it."""
    from importlib.metadata import PackageNotFoundError, version

    try:
        return f"Ingle {version('ingle')}"
    except PackageNotFoundError:
        return "Ingle (not installed as a package)"
