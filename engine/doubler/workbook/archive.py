"""A zip file put together again from the bytes of another: what is not replaced is copied as it stands.

Copied entries keep their compressed bytes, names, times and extra fields, and their place; a replaced entry
keeps all but its content. The layout is that of the published ZIP application note (APPNOTE 6.3, 4.3 and 4.4).
"""

from __future__ import annotations

import struct
import zlib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from itertools import pairwise

from doubler.errors import InputError
from doubler.workbook.package import Package, part_name

_LOCAL = struct.Struct("<4sHHHHHIIIHH")
_CENTRAL = struct.Struct("<4sHHHHHHIIIHHHHHII")
_END = struct.Struct("<4sHHHHIIH")
_EXTRA = struct.Struct("<HH")
_STORED, _DEFLATED = 0, 8
_HAS_DESCRIPTOR = 0x0008
_UTF8_NAME = 0x0800
_ZIP64 = 0x0001
_NO_TIME, _FIRST_DAY = 0, 0x0021
"""Midnight of 1 January 1980, the earliest moment a zip entry can hold: added parts do not tell when."""


@dataclass(frozen=True, slots=True)
class _Entry:
    """One entry of the source: where its bytes lie, and its two headers taken apart."""

    key: str
    start: int
    end: int
    method: int
    local: bytes
    """Local header with name and extra fields, ready to be patched."""
    central: bytes
    """Central record with name, extra fields and comment."""
    offset_at: int
    """Where the central record holds the entry's offset."""
    wide: bool


class Archive:
    """The entries of a package, ready to be copied again and again.

    Parameters
    ----------
    package : Package
        The opened package.
    """

    def __init__(self, package: Package) -> None:
        self._data = memoryview(package.data)
        self._comment = package.zip_comment
        infos = package.zip.infolist()
        where = f"{package.path} is damaged: its zip directory"
        bounds = sorted({info.header_offset for info in infos} | {package.zip.start_dir})
        following = dict(pairwise(bounds))
        self._prefix = self._data[: bounds[0]]
        self._entries: list[_Entry] = []
        position = package.zip.start_dir
        for info in infos:
            central = self._central_record(position, where)
            position += len(central)
            end = following.get(info.header_offset)
            if end is None:
                raise InputError(f"{where} points behind its own end; copy or save it again")
            offset_at, wide = _offset_place(central)
            local = self._local_header(info.header_offset, where)
            key = part_name(info).lower()
            self._entries.append(
                _Entry(key, info.header_offset, end, info.compress_type, local, central, offset_at, wide)
            )
        self._physical = sorted(range(len(self._entries)), key=lambda number: self._entries[number].start)

    def assemble(
        self, replaced: Mapping[str, bytes], added: Iterable[tuple[str, bytes]] = ()
    ) -> list[bytes | memoryview]:
        """Return the bytes of a new zip file, in pieces.

        Parameters
        ----------
        replaced : mapping of str to bytes
            New content by part name in small letters.
        added : iterable of (str, bytes)
            New parts; they come last.

        Returns
        -------
        list of bytes
            Pieces to be written one behind the other.
        """
        pieces: list[bytes | memoryview] = [self._prefix]
        position = len(self._prefix)
        central: list[bytes] = [b""] * len(self._entries)
        for number in self._physical:
            entry = self._entries[number]
            content = replaced.get(entry.key)
            if content is None:
                pieces.append(self._data[entry.start : entry.end])
                central[number] = _moved(entry, position)
                position += entry.end - entry.start
            else:
                local, packed, central[number] = _replaced(entry, content, position)
                pieces += (local, packed)
                position += len(local) + len(packed)
        for name, content in added:
            local, packed, record = _added(name, content, position)
            pieces += (local, packed)
            central.append(record)
            position += len(local) + len(packed)
        directory = b"".join(central)
        pieces.append(directory)
        pieces.append(
            _END.pack(b"PK\x05\x06", 0, 0, len(central), len(central), len(directory), position, len(self._comment))
        )
        pieces.append(self._comment)
        return pieces

    def _central_record(self, position: int, where: str) -> bytes:
        try:
            fields = _CENTRAL.unpack_from(self._data, position)
        except struct.error:
            raise InputError(f"{where} is cut short; copy or save it again") from None
        size = _CENTRAL.size + fields[10] + fields[11] + fields[12]
        return bytes(self._data[position : position + size])

    def _local_header(self, position: int, where: str) -> bytes:
        try:
            fields = _LOCAL.unpack_from(self._data, position)
        except struct.error:
            raise InputError(f"{where} points behind its own end; copy or save it again") from None
        if fields[0] != b"PK\x03\x04":
            raise InputError(f"{where} points at a place that holds no entry; copy or save it again")
        return bytes(self._data[position : position + _LOCAL.size + fields[9] + fields[10]])


def _offset_place(central: bytes) -> tuple[int, bool]:
    """Find where a central record keeps the entry's offset: in its own field, or in the wide extra field."""
    fields = _CENTRAL.unpack_from(central)
    if fields[16] != 0xFFFFFFFF:
        return 42, False
    position = _CENTRAL.size + fields[10]
    end = position + fields[11]
    while position + _EXTRA.size <= end:
        kind, size = _EXTRA.unpack_from(central, position)
        if kind == _ZIP64:
            before = 8 * ((fields[9] == 0xFFFFFFFF) + (fields[8] == 0xFFFFFFFF))
            return position + _EXTRA.size + before, True
        position += _EXTRA.size + size
    return 42, False


def _moved(entry: _Entry, position: int) -> bytes:
    record = bytearray(entry.central)
    struct.pack_into("<Q" if entry.wide else "<I", record, entry.offset_at, position)
    return bytes(record)


def _pack(content: bytes, method: int) -> tuple[int, bytes]:
    if method == _STORED:
        return _STORED, content
    deflate = zlib.compressobj(6, zlib.DEFLATED, -15)
    return _DEFLATED, deflate.compress(content) + deflate.flush()


def _replaced(entry: _Entry, content: bytes, position: int) -> tuple[bytes, bytes, bytes]:
    method, packed = _pack(content, entry.method)
    crc = zlib.crc32(content)
    sign, version, flags, _, time, day, *_, name_size, _ = _LOCAL.unpack_from(entry.local)
    flags &= ~_HAS_DESCRIPTOR
    name_end = _LOCAL.size + name_size
    extra = _without_zip64(entry.local[name_end:])
    local = _LOCAL.pack(sign, version, flags, method, time, day, crc, len(packed), len(content), name_size, len(extra))
    fields = list(_CENTRAL.unpack_from(entry.central))
    rest = entry.central[_CENTRAL.size :]
    name, extra_c, comment = (
        rest[: fields[10]],
        _without_zip64(rest[fields[10] : fields[10] + fields[11]]),
        rest[fields[10] + fields[11] :],
    )
    fields[3] &= ~_HAS_DESCRIPTOR
    fields[4] = method
    fields[7:10] = [crc, len(packed), len(content)]
    fields[11] = len(extra_c)
    fields[16] = position
    central = _CENTRAL.pack(*fields) + name + extra_c + comment
    return local + entry.local[_LOCAL.size : name_end] + extra, packed, central


def _added(name: str, content: bytes, position: int) -> tuple[bytes, bytes, bytes]:
    method, packed = _pack(content, _DEFLATED)
    encoded = name.encode()
    flags = 0 if name.isascii() else _UTF8_NAME
    shared = (
        20,
        flags,
        method,
        _NO_TIME,
        _FIRST_DAY,
        zlib.crc32(content),
        len(packed),
        len(content),
        len(encoded),
    )
    local = _LOCAL.pack(b"PK\x03\x04", *shared, 0) + encoded
    central = _CENTRAL.pack(b"PK\x01\x02", 20, *shared, 0, 0, 0, 0, 0, position) + encoded
    return local, packed, central


def _without_zip64(extra: bytes) -> bytes:
    """Drop the extra field for sizes beyond 4 GiB, which a replaced part does not need; keep the others."""
    kept, position = b"", 0
    while position + _EXTRA.size <= len(extra):
        kind, size = _EXTRA.unpack_from(extra, position)
        end = position + _EXTRA.size + size
        if kind != _ZIP64:
            kept += extra[position:end]
        position = end
    return kept + extra[position:]
