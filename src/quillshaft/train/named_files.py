"""Files that a train file names: indicator cards and tables of harmonics, read once with the train file."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from quillshaft.records import dataclass

FILE_KEYS = frozenset(("indicator", "dead-indicator", "harmonics"))
WITHIN = frozenset(("gas", "head-end", "crank-end"))
"""Keys that name files, and the tables that these keys stand in."""
MOST_BYTES = 4_000_000


@dataclass(frozen=True)
class NamedFile:
    """A file as the train file names it: its text, or why there is none, and the SHA-256 of its bytes."""

    name: str
    text: str | None
    why: str | None
    sha256: str | None


def names_in(data: dict[str, Any]) -> tuple[str, ...]:
    """Names of files that [machines] and the cases' machines give, each once, in file order."""
    cases = data.get("cases")
    tables = [data, *(cases.values() if isinstance(cases, dict) else ())]
    machines = [table.get("machines") for table in tables if isinstance(table, dict)]
    return tuple(dict.fromkeys(name for node in machines for name in _names(node)))


def _names(node: Any, table: str = "") -> Iterator[str]:
    if isinstance(node, list):
        for item in node:
            yield from _names(item)
    elif isinstance(node, dict):
        for key, value in node.items():
            if table in WITHIN and key in FILE_KEYS and isinstance(value, str):
                yield value
            yield from _names(value, key)


def read_named(data: dict[str, Any], folder: Path | None) -> tuple[NamedFile, ...]:
    """Every file that the data name, from `folder`; None: the train came as a text and has no folder."""
    return tuple(_read(name, folder) for name in names_in(data))


def _read(name: str, folder: Path | None) -> NamedFile:
    path = Path(name)
    if path.is_absolute() or name.startswith("~") or "\0" in name or not name.strip():
        return NamedFile(name, None, "is not a file name relative to the train file", None)
    if folder is None:
        return NamedFile(name, None, "cannot be found: the train was given as a text, not as a file", None)
    try:
        with (folder / path).open("rb") as stream:
            raw = stream.read(MOST_BYTES + 1)
    except FileNotFoundError:
        return NamedFile(name, None, "there is no such file beside the train file", None)
    except (OSError, ValueError) as error:
        why = getattr(error, "strerror", None) or type(error).__name__
        return NamedFile(name, None, f"the file cannot be read ({why})", None)
    digest = hashlib.sha256(raw).hexdigest()
    if len(raw) > MOST_BYTES:
        return NamedFile(name, None, f"the file is larger than {MOST_BYTES // 1_000_000} MB", digest)
    try:
        return NamedFile(name, raw.decode("utf-8-sig"), None, digest)
    except UnicodeDecodeError:
        return NamedFile(name, None, "the file is not text in UTF-8", digest)


def digest_with(text_digest: str, files: tuple[NamedFile, ...]) -> str:
    """SHA-256 over a train file and the files it names; that of the train file alone where it names none.

    Of the lines "digest" and "digest  name" of each file in order of name, missing files as "-".
    """
    if not files:
        return text_digest
    lines = [text_digest, *(f"{item.sha256 or '-'}  {item.name}" for item in sorted(files, key=lambda f: f.name))]
    return hashlib.sha256("".join(f"{line}\n" for line in lines).encode("utf-8", "surrogatepass")).hexdigest()
