"""The zip package of a workbook: read once into memory, within limits, refused when anything is odd."""

from __future__ import annotations

import io
import zipfile
from dataclasses import dataclass
from typing import Final

from ..errors import FileRefused

MEMBERS: Final = 10_000  # parts in a package; large workbooks have some hundreds
TOTAL: Final = 600_000_000  # unpacked bytes of all parts together
LARGE: Final = 5_000_000  # only parts above this size are judged by how far they unpack
RATIO: Final = 250  # unpacked over packed bytes; sheet parts reach 10 to 60

OLE: Final = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"


@dataclass(frozen=True)
class Package:
    """Every member of a workbook file, in order, with its content."""

    source: bytes
    members: tuple[zipfile.ZipInfo, ...]
    parts: dict[str, bytes]
    comment: bytes

    @property
    def signed(self) -> bool:
        """Whether the package carries a digital signature."""
        return any(name.lower().startswith("_xmlsignatures/") for name in self.parts)


def read(source: bytes) -> Package:
    """Return the members of a package, or refuse it with the reason."""
    _not_another_format(source)
    try:
        with zipfile.ZipFile(io.BytesIO(source)) as archive:
            members = tuple(archive.infolist())
            _within_limits(members, len(source))
            _sound_names(members)
            parts = {member.filename: archive.read(member) for member in members}
            _no_doctype(parts)
            return Package(source, members, parts, archive.comment)
    except FileRefused:
        raise
    except Exception as error:  # zipfile, zlib and struct errors alike: the file is not whole
        raise FileRefused(f"the file is damaged: {error}", remedy="Open a backup copy") from None


def write(package: Package, changed: dict[str, bytes]) -> bytes:
    """Return the package with some parts replaced; order, dates and attributes of all members stay."""
    if all(package.parts[name] == data for name, data in changed.items()):
        return package.source
    target = io.BytesIO()
    with zipfile.ZipFile(target, "w") as archive:
        archive.comment = package.comment
        for member in package.members:
            data = changed.get(member.filename, package.parts[member.filename])
            archive.writestr(_fresh(member), data, compress_type=member.compress_type)
    return target.getvalue()


def _fresh(member: zipfile.ZipInfo) -> zipfile.ZipInfo:
    """Return a copy of a member's description, so that the one that was read stays as it was."""
    copy = zipfile.ZipInfo(member.filename, member.date_time)
    copy.compress_type = member.compress_type
    copy.comment = member.comment
    copy.extra = member.extra
    copy.create_system = member.create_system
    copy.external_attr = member.external_attr
    copy.internal_attr = member.internal_attr
    return copy


def _not_another_format(source: bytes) -> None:
    """Refuse what is not a zip file, naming what it is."""
    if source.startswith(OLE):
        if "EncryptedPackage".encode("utf-16-le") in source:
            raise FileRefused(
                "the workbook is protected by a password for opening",
                remedy="Save a copy without the password",
            )
        raise FileRefused("the file is an old .xls workbook", remedy="Save it as .xlsx")
    if not source:
        raise FileRefused("the file is empty")
    if not source.startswith(b"PK"):
        raise FileRefused("the file is not an .xlsx workbook", remedy="Save it as .xlsx")


def _within_limits(members: tuple[zipfile.ZipInfo, ...], size: int) -> None:
    """Refuse a package that would unpack without bound."""
    if len(members) > MEMBERS:
        raise FileRefused(f"the file holds {len(members)} parts, more than the {MEMBERS} allowed")
    total = sum(member.file_size for member in members)
    if total > TOTAL:
        raise FileRefused(f"the file unpacks to {total // 1_000_000} MB, more than {TOTAL // 1_000_000} MB")
    for member in members:
        if member.file_size > LARGE and member.file_size > RATIO * max(member.compress_size, 1):
            raise FileRefused(
                f"the part {member.filename[:80]} unpacks to more than {RATIO} times its packed size"
            )
    if sum(member.compress_size for member in members) > size:
        raise FileRefused("the parts of the file overlap")


def _no_doctype(parts: dict[str, bytes]) -> None:
    """Refuse document type declarations in any part, also in those that are only copied."""
    for name, data in parts.items():
        if name.lower().endswith((".xml", ".rels")) and b"<!DOCTYPE" in data:
            raise FileRefused(
                f"the part {name[:80]} has a document type declaration, which no workbook needs"
            )


def _sound_names(members: tuple[zipfile.ZipInfo, ...]) -> None:
    """Refuse encrypted parts, other compressions, odd paths and names that occur twice."""
    seen: set[str] = set()
    for member in members:
        name = member.filename
        shown = name[:80]
        if member.flag_bits & 0x1:
            raise FileRefused(f"the part {shown} is encrypted", remedy="Save a copy without a password")
        if member.compress_type not in (zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED):
            raise FileRefused(f"the part {shown} is packed in a way that workbooks do not use")
        original = getattr(member, "orig_filename", name)
        segments = name.rstrip("/").split("/")
        odd = "\\" in original or "\0" in original or ":" in name or name.startswith("/")
        if odd or any(part in ("", ".", "..") for part in segments):
            raise FileRefused(f"the file holds a part with an odd path: {shown!r}")
        if name.lower() in seen:
            raise FileRefused(f"the part {shown} occurs twice in the file")
        seen.add(name.lower())
