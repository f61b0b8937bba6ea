"""Ingle in spreadsheets: headings, units, worksheet functions, and each way to reach them."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from ingle_addin.asking import ask

__all__ = ["ask"]


def __getattr__(name: str) -> Any:
    # numpy and the solver are loaded with the first question, so that the command's help need not wait for them.
    if name == "ask":
        from ingle_addin.asking import ask

        return ask
    raise AttributeError(f"module 'ingle_addin' has no attribute {name!r}")
