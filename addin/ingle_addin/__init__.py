"""Ingle in spreadsheets: headings, units, worksheet functions, and each way to reach them."""

from ingle_addin.asking import ask

__all__ = ["ask"]
