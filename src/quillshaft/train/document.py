"""A train file as a document: read and parsed once, with the line of every key for the error messages."""

from __future__ import annotations

import hashlib
import re
import tomllib
from collections.abc import Iterator
from dataclasses import replace
from functools import lru_cache
from pathlib import Path
from typing import Any

from quillshaft.records import dataclass
from quillshaft.train.named_files import NamedFile, digest_with, read_named
from quillshaft.train.problems import Problem, TrainFileError
from quillshaft.train.toml_slips import TOKEN, left_open, syntax_problem

MOST_LEVELS = 20
KeyPath = tuple[str | int, ...]
"""The way through the tables: keys, and list positions counted from 0."""


@dataclass(frozen=True)
class Document:
    """One parsed file: base name, text without a byte order mark, tables, SHA-256, and the files it names.

    The digest is that of the text as UTF-8, the same whether the document came from a file or from a text; it
    covers the files that the text names as well, where there are any.
    """

    name: str
    text: str
    data: dict[str, Any]
    sha256: str
    files: tuple[NamedFile, ...] = ()


def read_document(path: str | Path) -> Document:
    """Read and parse a TOML file in UTF-8, with or without a byte order mark.

    Raises TrainFileError when the file cannot be opened, is not text in UTF-8, is empty, or is not TOML.
    """
    name = "".join(c for c in Path(path).name if c.isprintable()) or str(path)
    try:
        raw = Path(path).read_bytes()
    except (OSError, ValueError) as error:
        raise _failure(name, None, _why_unreadable(error), None) from None
    if raw.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise _failure(name, None, "the file is saved as UTF-16", "UTF-8 text")
    if b"\0" in raw:
        line = raw.count(b"\n", 0, raw.index(b"\0")) + 1
        raise _failure(name, line, "a NUL byte: the file is binary, or not saved as UTF-8", "UTF-8 text")
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = raw.count(b"\n", 0, error.start) + 1
        message = f"byte 0x{raw[error.start]:02x} is not UTF-8: the file is binary, or saved in another encoding"
        raise _failure(name, line, message, "UTF-8 text") from None
    return parse_document(text, name, Path(path).parent)


def parse_document(text: str, name: str, folder: Path | None = None) -> Document:
    """Parse the text of a TOML file; `name` is what messages call it, `folder` holds the files that it names.

    Raises TrainFileError when the text is empty or not TOML, with the line and plain advice.
    """
    text = text.removeprefix("\ufeff")
    if "\0" in text:
        raise _failure(name, text.count("\n", 0, text.index("\0")) + 1, "a NUL character", "UTF-8 text")
    try:
        data = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise TrainFileError([syntax_problem(name, text, str(error))]) from None
    except RecursionError:
        raise _failure(name, None, "brackets nested too deeply", None) from None
    except ValueError:
        long = re.search(r"[0-9_]{4000}", text)
        line = text.count("\n", 0, long.start()) + 1 if long else None
        raise _failure(name, line, "a number that cannot be read: too many digits", None) from None
    if not data:
        raise _failure(name, None, "the file is empty", "a train file, as `quillshaft new` writes one")
    digest = hashlib.sha256(text.encode("utf-8", "surrogatepass")).hexdigest()
    document = Document(name, text, data, digest)
    deep = _deepest(data)
    if len(deep) > MOST_LEVELS:
        message = "tables nested too deeply"
        raise _failure(name, line_of(document, deep[:MOST_LEVELS]), message, f"at most {MOST_LEVELS} levels")
    files = read_named(data, folder)
    return replace(document, sha256=digest_with(digest, files), files=files) if files else document


def _deepest(data: dict[str, Any]) -> KeyPath:
    """The way to a place deeper than MOST_LEVELS where there is one, else to some place that is not."""
    paths: list[tuple[KeyPath, Any]] = [((), data)]
    path: KeyPath = ()
    while paths and len(path) <= MOST_LEVELS:
        path, value = paths.pop()
        members = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
        paths += [((*path, key), member) for key, member in members]
    return path


def line_of(document: Document, path: KeyPath) -> int | None:
    """The line, from 1, on which the path first stands: the shortest run of lines that already holds it.

    A path that does not stand in the file gives the line of the longest part of it that does; None where not
    even its first key stands. Never raises.
    """
    known = _index(document.text)
    for length in range(len(path), 0, -1):
        place = known.get(path[:length])
        if place is not None:
            return place.line + _line_within(place.chunk, path[place.depth : length])
    return None


def _failure(name: str, line: int | None, message: str, allowed: str | None) -> TrainFileError:
    return TrainFileError([Problem(name, line, (), None, message, allowed)])


def _why_unreadable(error: Exception) -> str:
    reasons: tuple[tuple[type[Exception], str], ...] = (
        (FileNotFoundError, "there is no such file"),
        (IsADirectoryError, "this is a directory, not a file"),
        (PermissionError, "no permission to read the file"),
        (ValueError, "not a name a file can have"),
    )
    for kind, reason in reasons:
        if isinstance(error, kind):
            return reason
    return f"the file cannot be read ({getattr(error, 'strerror', None) or type(error).__name__})"


# Where every key stands. A statement (a header, or a key with its value) ends at a line end outside all
# brackets and texts, so tomllib can read each alone; one over several lines is searched by its leading
# lines, closed with the brackets and quotes they leave open.


@dataclass(frozen=True)
class _Place:
    """The first line of a statement, its text where it runs over several lines, the depth of its table."""

    line: int
    chunk: str
    depth: int


@lru_cache(maxsize=16)
def _index(text: str) -> dict[KeyPath, _Place]:
    """Every path of the text with the statement in which it first stands; what cannot be read is left out."""
    known: dict[KeyPath, _Place] = {}
    counts: dict[KeyPath, int] = {}
    table: KeyPath = ()
    for line, chunk in _statements(text):
        try:
            data = tomllib.loads(chunk)
            if chunk.lstrip().startswith("["):
                table = _table_path(data, counts)
                paths = [table[:length] for length in range(1, len(table) + 1)]
            else:
                paths = list(_paths(data, table))
        except (ValueError, RecursionError):
            continue
        place = _Place(line, chunk if "\n" in chunk.rstrip("\n") else "", len(table))
        for path in paths:
            known.setdefault(path, place)
    return known


def _statements(text: str) -> Iterator[tuple[int, str]]:
    """First line, from 1, and text of each statement, its line end with it."""
    line, start, depth = 1, 0, 0
    for match in TOKEN.finditer(text + "\n"):
        token = match[0]
        depth = max(depth + (token in ("[", "{")) - (token in ("]", "}")), 0)
        if token == "\n" and depth == 0:
            chunk = text[start : match.end()]
            if chunk.strip():
                yield line, chunk
            line, start = line + chunk.count("\n"), match.end()


def _table_path(header: dict[str, Any], counts: dict[KeyPath, int]) -> KeyPath:
    """The path a header opens; below an array of tables it leads through the array's latest member."""
    path: KeyPath = ()
    inner: Any = header
    while isinstance(inner, dict) and inner:
        if path in counts:
            path += (counts[path] - 1,)
        key, inner = next(iter(inner.items()))
        path += (key,)
    if isinstance(inner, list):
        counts[path] = counts.get(path, 0) + 1
        path += (counts[path] - 1,)
    return path


def _paths(value: Any, start: KeyPath) -> Iterator[KeyPath]:
    """Every path within a value, itself left out."""
    members = value.items() if isinstance(value, dict) else enumerate(value)
    for key, member in members:
        yield (*start, key)
        if isinstance(member, dict | list):
            yield from _paths(member, (*start, key))


def _line_within(chunk: str, path: KeyPath) -> int:
    """Lines of the statement before the one on which the path is first known."""
    low, high = 0, chunk.count("\n")
    while low < high:
        middle = (low + high) // 2
        if _holds(_leading_lines(chunk, middle + 1), path):
            high = middle
        else:
            low = middle + 1
    return low


@lru_cache(maxsize=1024)
def _leading_lines(chunk: str, count: int) -> dict[str, Any]:
    """What tomllib reads from the first lines of a statement."""
    text = "\n".join(chunk.split("\n")[:count]) + "\n"
    closing = {"[": "]", "{": "}"}
    text += "".join(closing.get(opened, opened) for opened, _ in reversed(left_open(text)))
    try:
        return tomllib.loads(text)
    except (ValueError, RecursionError):
        return {}


def _holds(value: Any, path: KeyPath) -> bool:
    for key in path:
        keys = range(len(value)) if isinstance(value, list) else value if isinstance(value, dict) else ()
        if key not in keys:
            return False
        value = value[key]
    return True
