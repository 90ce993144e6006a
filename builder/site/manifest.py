"""Which paths a site may have, and the list of its files with their SHA-256.

The list is `MANIFEST.sha256`, one line a file, `<64 hex digits>  <path>`, sorted by path: the
common checksum-list form, so `sha256sum -c MANIFEST.sha256` checks a site without this program.
"""

from __future__ import annotations

import hashlib
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import PurePosixPath

MANIFEST = "MANIFEST.sha256"
LONGEST_PATH = 120

_SEGMENT = re.compile(r"[A-Za-z0-9](?:[A-Za-z0-9._-]*[A-Za-z0-9_-])?")
_LINE = re.compile(r"([0-9a-f]{64})  (\S+)")
# Some systems keep these names for devices, whatever the suffix; a site may be copied there.
_DEVICE = re.compile(r"(?:con|prn|aux|nul|com[1-9]|lpt[1-9])(?:\..*)?", re.IGNORECASE)


@dataclass(frozen=True)
class Site:
    """A whole site: content and SHA-256 (hex) of every file by path, the manifest included."""

    files: Mapping[str, bytes]
    digests: Mapping[str, str]


def site_of(pages: Mapping[str, bytes]) -> Site:
    """Add the manifest to the pages. ValueError for paths that a site cannot have."""
    if not pages:
        raise ValueError("a site needs at least one page")
    check_paths(pages)
    digests = {path: sha256_hex(pages[path]) for path in sorted(pages)}
    manifest = "".join(f"{digest}  {path}\n" for path, digest in digests.items()).encode("ascii")
    return Site(
        files={**pages, MANIFEST: manifest},
        digests={**digests, MANIFEST: sha256_hex(manifest)},
    )


def paths_listed(manifest: bytes) -> frozenset[str]:
    """Paths named by a manifest. ValueError when it is not one that `site_of` could have made."""
    matches = [_LINE.fullmatch(line) for line in manifest.decode("ascii").splitlines()]
    if not matches or None in matches:
        raise ValueError("a line is not a digest, two spaces and a path")
    paths = [match[2] for match in matches if match]
    check_paths(paths)
    return frozenset(paths)


def check_paths(paths: Iterable[str]) -> None:
    """ValueError unless every path is a plain slug and none hides another.

    Files and folders that differ only in case would be one on some systems, and a path cannot be
    a file and a folder at once.
    """
    folders: dict[str, str] = {}
    seen: dict[str, str] = {MANIFEST.lower(): MANIFEST}
    for path in paths:
        _check_path(path)
        if other := seen.get(path.lower()):
            raise ValueError(f"page path {path!r} collides with {other!r}")
        seen[path.lower()] = path
        for folder in map(str, list(PurePosixPath(path).parents)[:-1]):
            if folders.setdefault(folder.lower(), folder) != folder:
                raise ValueError(f"folder {folder!r} differs only in case from another")
    if both := sorted(seen.keys() & folders.keys()):
        raise ValueError(f"{both[0]!r} would be a page and a folder at once")


def _check_path(path: str) -> None:
    if len(path) > LONGEST_PATH:
        raise ValueError(f"page path {path!r} is longer than {LONGEST_PATH} characters")
    for segment in path.split("/"):
        if not _SEGMENT.fullmatch(segment) or _DEVICE.fullmatch(segment):
            raise ValueError(f"page path {path!r} is not made of plain ASCII words")


def sha256_hex(content: bytes) -> str:
    """SHA-256 (FIPS 180-4) in 64 lower-case hexadecimal digits."""
    return hashlib.sha256(content).hexdigest()
