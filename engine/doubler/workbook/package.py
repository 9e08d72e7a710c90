"""A workbook's package: opening the zip file safely, its parts, and how they refer to each other.

Everything that comes from outside is limited here, before any part is unpacked.
"""

from __future__ import annotations

import hashlib
import io
import posixpath
import zipfile
import zlib
from dataclasses import dataclass
from pathlib import Path
from typing import IO, TYPE_CHECKING, cast
from urllib.parse import unquote

from doubler.errors import InputError

if TYPE_CHECKING:
    from lxml.etree import _Element

MAX_FILE = 2 * 1024**3
MAX_PART = 512 * 1024**2
MAX_TOTAL = 2 * 1024**3
MAX_PARTS = 20_000
MAX_RATIO = 250
RATIO_FREE = 4 * 1024**2
"""Below this unpacked size a part's compression ratio is not looked at."""

_OLE = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"
_ENCRYPTED_STREAM = "EncryptedPackage".encode("utf-16-le")
_SAVE_AS = "save it as an .xlsx workbook and give that file"


@dataclass(frozen=True, slots=True)
class Relationship:
    """How one part refers to another, or to something outside of the package.

    Attributes
    ----------
    kind
        Last segment of the relationship's type, which both forms of the standard share: ``"worksheet"``.
    target
        Name of the part, without a leading slash; for an external target its text as the file holds it.
    """

    identity: str
    kind: str
    target: str
    external: bool = False


class Package:
    """An opened workbook file, checked against damage and hostile content, kept in memory as it is.

    Parameters
    ----------
    path : Path
        The workbook's file.

    Raises
    ------
    InputError
        Where the file cannot be read, is no ``.xlsx`` or ``.xlsm`` workbook, is damaged or encrypted, or
        unpacks to more than the limits of this module.
    """

    def __init__(self, path: Path | str) -> None:
        self.path = Path(path)
        self.data = _read_file(self.path)
        _refuse_other_kinds(self.path, self.data)
        try:
            self.zip = zipfile.ZipFile(io.BytesIO(self.data))
        except (zipfile.BadZipFile, ValueError, NotImplementedError, OverflowError) as error:
            raise InputError(
                f"{self.path} is damaged: its zip file can't be opened ({error}); copy or save it again"
            ) from None
        self._members = self._index()
        self._relationships: dict[str, dict[str, Relationship]] = {}

    @property
    def sha256(self) -> str:
        """Hash of the file's bytes, in hexadecimal digits."""
        return hashlib.sha256(self.data).hexdigest()

    @property
    def parts(self) -> list[str]:
        """Names of all parts in the order of the file, without leading slashes."""
        return [part_name(info) for info in self.zip.infolist() if not info.is_dir()]

    def has(self, part: str) -> bool:
        """Say whether the package holds a part of that name; capitals do not count."""
        return part.lower() in self._members

    def member(self, part: str) -> zipfile.ZipInfo:
        """Return the zip entry of a part.

        Parameters
        ----------
        part : str
            Its name, without a leading slash; capitals do not count.

        Raises
        ------
        InputError
            Where the package lacks it.
        """
        try:
            return self._members[part.lower()]
        except KeyError:
            raise InputError(
                f"{self.path} is damaged: its part {part} is missing; open it in a spreadsheet "
                "program and save it again"
            ) from None

    def read(self, part: str) -> bytes:
        """Return the unpacked bytes of a part."""
        with self.open(part) as stream:
            return stream.read()

    def open(self, part: str) -> IO[bytes]:
        """Open a part for reading as a stream; damage found on the way raises `InputError`."""
        info = self.member(part)
        try:
            return cast(IO[bytes], _Checked(self.zip.open(info), f"{self.path}, part {part}"))
        except (zipfile.BadZipFile, NotImplementedError, RuntimeError, OSError, ValueError) as error:
            raise InputError(
                f"{self.path} is damaged: its part {part} can't be unpacked ({error}); copy or save it again"
            ) from None

    @property
    def zip_comment(self) -> bytes:
        """The comment at the end of the zip file."""
        return self.zip.comment

    def root(self, part: str) -> _Element:
        """Return the root element of a small XML part."""
        from doubler.workbook.xml_guard import parse_part

        return parse_part(self.read(part), f"{self.path}, part {part}")

    def relationships(self, part: str = "") -> dict[str, Relationship]:
        """Return what a part refers to, by identity; the empty name stands for the package itself."""
        known = self._relationships.get(part)
        if known is None:
            folder, name = posixpath.split(part)
            rels = posixpath.join(folder, "_rels", f"{name}.rels")
            known = self._relationships[part] = self._read_relationships(rels, folder) if self.has(rels) else {}
        return known

    def related(self, part: str, kind: str) -> list[str]:
        """Return the names of the parts inside the package to which a part refers by one kind."""
        return [
            found.target for found in self.relationships(part).values() if found.kind == kind and not found.external
        ]

    def workbook_part(self) -> str:
        """Return the name of the part that lists the sheets.

        Raises
        ------
        InputError
            Where the package is of another kind of document.
        """
        for part in [*self.related("", "officeDocument"), "xl/workbook.xml"]:
            if part.lower().endswith(".bin"):
                raise InputError(f"{self.path} is a binary workbook (.xlsb); {_SAVE_AS}")
            if self.has(part):
                if posixpath.basename(part).lower() in {"document.xml", "presentation.xml"}:
                    raise InputError(
                        f"{self.path} is a text document or a presentation, not a workbook; give an .xlsx or .xlsm file"
                    )
                return part
        if self.has("xl/workbook.bin"):
            raise InputError(f"{self.path} is a binary workbook (.xlsb); {_SAVE_AS}")
        raise InputError(
            f"{self.path} is a zip file but not a workbook (it has no workbook part); give an .xlsx or .xlsm file"
        )

    def _index(self) -> dict[str, zipfile.ZipInfo]:
        infos = self.zip.infolist()
        if len(infos) > MAX_PARTS:
            raise InputError(f"{self.path} holds {len(infos)} parts; the limit is {MAX_PARTS}")
        members: dict[str, zipfile.ZipInfo] = {}
        total = 0
        for info in infos:
            if info.is_dir():
                continue
            name = part_name(info)
            total += info.file_size
            self._check_size(info, name, total)
            if info.flag_bits & 0x1:
                raise InputError(f"{self.path} is protected by a zip password (part {name}); save it without one")
            if name.lower() in members:
                raise InputError(
                    f"{self.path} is damaged: it holds the part {name} twice; save it again in a spreadsheet program"
                )
            members[name.lower()] = info
        if "mimetype" in members and not any(name.startswith("xl/") for name in members):
            raise InputError(f"{self.path} is an OpenDocument file (such as .ods); {_SAVE_AS}")
        return members

    def _check_size(self, info: zipfile.ZipInfo, name: str, total: int) -> None:
        mib = 1024**2
        if info.file_size > MAX_PART:
            raise InputError(
                f"{self.path}: part {name} unpacks to {info.file_size // mib} MiB; the limit is "
                f"{MAX_PART // mib} MiB a part"
            )
        if total > MAX_TOTAL:
            raise InputError(
                f"{self.path} unpacks to more than {MAX_TOTAL // mib} MiB, which is the limit for all parts together"
            )
        if info.file_size > RATIO_FREE and info.file_size > MAX_RATIO * max(info.compress_size, 1):
            raise InputError(
                f"{self.path}: part {name} unpacks to more than {MAX_RATIO} times its packed size, "
                "which is the limit; no real workbook is packed so densely"
            )

    def _read_relationships(self, rels: str, folder: str) -> dict[str, Relationship]:
        found: dict[str, Relationship] = {}
        for element in self.root(rels):
            identity, target = element.get("Id"), element.get("Target")
            if identity is None or target is None:
                continue
            kind = element.get("Type", "").rstrip("/").rsplit("/", 1)[-1]
            external = element.get("TargetMode", "").lower() == "external"
            found[identity] = Relationship(
                identity, kind, target if external else self._resolve(target, folder), external
            )
        return found

    def _resolve(self, target: str, folder: str) -> str:
        """Turn a target, relative to its part's folder or absolute, into a part's name."""
        target = target.replace("\\", "/").split("#", 1)[0]
        joined = posixpath.normpath(target if target.startswith("/") else posixpath.join("/", folder, target)).lstrip(
            "/"
        )
        for candidate in (joined, unquote(joined), posixpath.normpath(target).lstrip("./")):
            if self.has(candidate):
                return candidate
        return joined


def part_name(info: zipfile.ZipInfo) -> str:
    """Return a zip entry's name as a part's name: forward slashes, none in front."""
    return info.filename.replace("\\", "/").lstrip("/")


class _Checked(io.RawIOBase):
    """A part's stream that tells damage in our words, wherever it shows."""

    def __init__(self, stream: IO[bytes], where: str) -> None:
        self._stream = stream
        self._where = where

    def readable(self) -> bool:
        return True

    def read(self, size: int = -1, /) -> bytes:
        try:
            return self._stream.read(size)
        except (zipfile.BadZipFile, zlib.error, EOFError, OSError, ValueError) as error:
            raise InputError(
                f"{self._where} is damaged and can't be unpacked ({error}); copy or save the workbook again"
            ) from None

    def close(self) -> None:
        self._stream.close()
        super().close()


def _read_file(path: Path) -> bytes:
    try:
        if path.is_dir():
            raise InputError(f"{path} is a folder; give a workbook file (.xlsx or .xlsm)")
        if path.exists() and not path.is_file():
            raise InputError(f"{path} is a pipe or a device; give a workbook file (.xlsx or .xlsm)")
        if (size := path.stat().st_size) > MAX_FILE:
            raise InputError(f"{path} is {size // 1024**2} MiB large; the limit is {MAX_FILE // 1024**2} MiB")
        return path.read_bytes()
    except FileNotFoundError:
        raise InputError(f"{path} does not exist; check the name and the folder") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or error
        raise InputError(f"{path} can't be read ({reason}); check that it is a file you may read") from None


def _refuse_other_kinds(path: Path, data: bytes) -> None:
    if data.startswith(_OLE):
        if _ENCRYPTED_STREAM in data:
            raise InputError(f"{path} is password protected; save it without a password and give that file")
        raise InputError(f"{path} is in the old .xls format; {_SAVE_AS}")
    if not data:
        raise InputError(f"{path} is empty; give a workbook file (.xlsx or .xlsm)")
    if data.startswith(b"PK"):
        return
    suffix = path.suffix.lower()
    if suffix == ".xls":
        raise InputError(f"{path} is not an .xlsx or .xlsm workbook; {_SAVE_AS}")
    raise InputError(f"{path} is not a workbook: it is no zip package; give an .xlsx or .xlsm file")
