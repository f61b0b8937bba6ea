"""Messages between Calc and the worker: one pickled object behind its length, over pipes of our own.

Protocol 4 is read and written alike by every Python that either side may be. Only built-in types travel.
"""

from __future__ import annotations

import os
import pickle
import struct
from typing import Any

_LENGTH = struct.Struct("<Q")
_CHUNK = 1 << 16


def frame(message: Any) -> bytes:
    """A message as it travels."""
    content = pickle.dumps(message, 4)
    return _LENGTH.pack(len(content)) + content


def write(descriptor: int, data: bytes) -> None:
    """Write all of it; OSError when the other side is gone."""
    sent = os.write(descriptor, data)
    if sent < len(data):
        rest = memoryview(data)[sent:]
        while rest:
            rest = rest[os.write(descriptor, rest) :]


def read(descriptor: int) -> Any:
    """The next message; EOFError when the other side is gone."""
    data = os.read(descriptor, _CHUNK)
    head = _LENGTH.size
    while len(data) < head:
        data = _more(descriptor, data, _CHUNK)
    end = head + _LENGTH.unpack_from(data)[0]
    if len(data) != end:
        parts, have = [data], len(data)
        while have < end:
            part = os.read(descriptor, min(end - have, 1 << 20))
            if not part:
                raise EOFError
            parts.append(part)
            have += len(part)
        data = b"".join(parts)
    return pickle.loads(memoryview(data)[head:end])


def _more(descriptor: int, data: bytes, size: int) -> bytes:
    part = os.read(descriptor, size)
    if not part:
        raise EOFError
    return data + part
