"""The zip file around a workbook: opened with suspicion, read in counted pieces, copied without being unpacked."""

from __future__ import annotations

import struct
import zipfile
import zlib
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import IO

from ingle_addin.book.errors import BookError

MAX_PARTS = 2_000
MAX_PART_BYTES = 512 * 1024 * 1024
MAX_TOTAL_BYTES = 1024 * 1024 * 1024
MAX_RATIO = 100  # an honest worksheet of 400,000 formulas inflates five-fold
RATIO_FREE_BYTES = 8 * 1024 * 1024  # below this a part may be as repetitive as it likes: it cannot hurt
CHUNK = 256 * 1024

_OLE = bytes.fromhex("D0CF11E0A1B11AE1")
_LOCAL = struct.Struct("<4s2B4HL2L2H")
_CENTRAL = struct.Struct("<4s4B4HL2L5H2L")
_END = struct.Struct("<4s4H2LH")
_ZIP64_EXTRA = 1
_DATA_DESCRIPTOR = 0x08
_ENCRYPTED = 0x01


class Archive:
    """A workbook's zip file, open for reading.

    Parts are named as in the file (no leading slash). Every read is counted against the limits above, because a few
    kilobytes can claim to be gigabytes. Raises :class:`BookError` for whatever is not an honest zip file.
    """

    def __init__(self, path: Path) -> None:
        self.path = path
        self._inflated = 0
        try:
            self._file: IO[bytes] = path.open("rb")
        except FileNotFoundError:
            raise BookError(f"{path} does not exist; check the folder and the spelling") from None
        except IsADirectoryError:
            raise BookError(f"{path} is a folder; name the workbook in it") from None
        except PermissionError:
            if path.is_dir():
                raise BookError(f"{path} is a folder; name the workbook in it") from None
            raise BookError(f"{path} may not be read; ask its owner for the right to") from None
        except OSError as error:
            raise BookError(f"{path} cannot be opened: {error.strerror}") from None
        try:
            self._open_zip()
        except BaseException:
            self._file.close()
            raise

    def _open_zip(self) -> None:
        path, head = self.path, self._file.read(8)
        if head == _OLE:
            raise BookError(_ole_message(path, self._file))
        if not head:
            raise BookError(f"{path} is empty; take an earlier copy of it")
        if not head.startswith(b"PK"):
            raise BookError(f"{path} is not an .xlsx workbook; open it in the spreadsheet program and save it as .xlsx")
        try:
            self._zip = zipfile.ZipFile(self._file)
        except (zipfile.BadZipFile, ValueError, OSError, struct.error, NotImplementedError):
            raise BookError(f"{path} is cut short or damaged; take an earlier copy of it") from None
        self.infos = self._zip.infolist()
        if len(self.infos) > MAX_PARTS:
            raise BookError(f"{path} has {len(self.infos)} parts, more than the {MAX_PARTS} of any honest workbook")
        self._by_name: dict[str, zipfile.ZipInfo] = {}
        for info in self.infos:
            if info.filename in self._by_name:
                raise BookError(f"{path} holds the part {info.filename} twice; open it and save it anew")
            self._by_name[info.filename] = info
            if info.flag_bits & _ENCRYPTED:
                raise BookError(f"{path} is protected by a password; save it without one first")

    def __enter__(self) -> Archive:
        return self

    def __exit__(self, *_: object) -> None:
        self._zip.close()
        self._file.close()

    def __contains__(self, name: str) -> bool:
        return name in self._by_name

    def stream(self, name: str) -> Iterator[bytes]:
        """The part's bytes in pieces of at most :data:`CHUNK`, counted while they are inflated."""
        info = self._by_name.get(name)
        if info is None:
            raise BookError(f"{self.path} lacks the part {name}; open it in the spreadsheet program and save it anew")
        size = 0
        try:
            with self._zip.open(info) as part:
                while chunk := part.read(CHUNK):
                    size += len(chunk)
                    self._inflated += len(chunk)
                    self._refuse_bomb(info, size)
                    yield chunk
        except (zipfile.BadZipFile, zlib.error, EOFError, OSError, NotImplementedError, ValueError, struct.error):
            raise BookError(f"{self.path} is damaged in its part {name}; take an earlier copy of it") from None

    def read(self, name: str) -> bytes:
        """The whole part; see :meth:`stream`."""
        return b"".join(self.stream(name))

    def _refuse_bomb(self, info: zipfile.ZipInfo, size: int) -> None:
        path, name = self.path, info.filename
        if size > MAX_PART_BYTES:
            raise BookError(f"{path}: the part {name} is larger than {MAX_PART_BYTES >> 20} MB; split the workbook")
        if self._inflated > 2 * MAX_TOTAL_BYTES:  # every sheet is read twice: to compute and to write
            raise BookError(f"{path} is larger than {MAX_TOTAL_BYTES >> 20} MB unpacked; split the workbook")
        if size > RATIO_FREE_BYTES and size > MAX_RATIO * max(1, info.compress_size):
            raise BookError(f"{path}: the part {name} unpacks to more than {MAX_RATIO} times its size, as no honest workbook does")

    def copy(self, out: IO[bytes], changed: Mapping[str, bytes]) -> None:
        """Write the same archive to ``out``: parts in their order, unchanged ones without being unpacked.

        ``changed`` maps part names to new contents, which are compressed. File times, attributes and comments stay.
        """
        directory: list[bytes] = []
        for info in self.infos:
            if info.filename in changed:
                content = changed[info.filename]
                crc, size, method = zlib.crc32(content), len(content), zipfile.ZIP_DEFLATED
                squeeze = zlib.compressobj(_LEVEL, zlib.DEFLATED, -15)
                payload = squeeze.compress(content) + squeeze.flush()
            else:
                crc, size, method = info.CRC, info.file_size, info.compress_type
                payload = self._raw(info)
            directory.append(_write_member(out, info, payload, crc, size, method))
        start = out.tell()
        for record in directory:
            out.write(record)
        comment = self._zip.comment
        out.write(_END.pack(b"PK\5\6", 0, 0, len(directory), len(directory), out.tell() - start, start, len(comment)))
        out.write(comment)

    def _raw(self, info: zipfile.ZipInfo) -> bytes:
        self._file.seek(info.header_offset)
        header = self._file.read(_LOCAL.size)
        if len(header) != _LOCAL.size or not header.startswith(b"PK\3\4"):
            raise BookError(f"{self.path} is damaged in its part {info.filename}; take an earlier copy of it")
        *_, name_length, extra_length = _LOCAL.unpack(header)
        self._file.seek(name_length + extra_length, 1)
        payload = self._file.read(info.compress_size)
        if len(payload) != info.compress_size:
            raise BookError(f"{self.path} is damaged in its part {info.filename}; take an earlier copy of it")
        return payload


# On a large sheet level 6 takes twice as long as level 4 and saves a twentieth of the size.
_LEVEL = 4


def _write_member(out: IO[bytes], info: zipfile.ZipInfo, payload: bytes, crc: int, size: int, method: int) -> bytes:
    """Write one member; return its record for the central directory."""
    # Sizes are known here, so that neither a data descriptor nor the zip64 fields of a streaming writer are needed.
    flags = info.flag_bits & ~_DATA_DESCRIPTOR
    name = info.orig_filename.encode("utf-8" if flags & 0x800 else "cp437")
    extra = _without_zip64(info.extra)
    year, month, day, hour, minute, second = info.date_time
    date = (year - 1980) << 9 | month << 5 | day
    time = hour << 11 | minute << 5 | second // 2
    offset = out.tell()
    needs = max(20, min(info.extract_version, 45)) if method != zipfile.ZIP_STORED else 10
    reserved = 0
    out.write(_LOCAL.pack(b"PK\3\4", needs, reserved, flags, method, time, date, crc, len(payload), size, len(name), len(extra)))
    out.write(name)
    out.write(extra)
    out.write(payload)
    return (
        _CENTRAL.pack(
            b"PK\1\2", info.create_version, info.create_system, needs, reserved, flags, method, time, date, crc,
            len(payload), size, len(name), len(extra), len(info.comment), 0, info.internal_attr, info.external_attr,
            offset,
        )
        + name + extra + info.comment
    )  # fmt: skip


def _without_zip64(extra: bytes) -> bytes:
    kept, at = [], 0
    while at + 4 <= len(extra):
        tag, length = struct.unpack_from("<HH", extra, at)
        if tag != _ZIP64_EXTRA:
            kept.append(extra[at : at + 4 + length])
        at += 4 + length
    return b"".join(kept)


def _ole_message(path: Path, file: IO[bytes]) -> str:
    marker = "EncryptedPackage".encode("utf-16-le")
    tail = b""
    while chunk := file.read(CHUNK):
        if marker in tail + chunk:
            return f"{path} is protected by a password; save it without one first"
        tail = chunk[-len(marker) :]
    return f"{path} is an old .xls workbook; open it in the spreadsheet program and save it as .xlsx"
