"""Three hundred spoilt train files: each is refused in words, or screened to a sound result; nothing in between."""

from __future__ import annotations

import contextlib
import io
import json
import math
import random
import subprocess
import sys
import tomllib
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

from quillshaft.cli.main import run
from quillshaft.train.starters import KINDS, starter_text
from train_files import MORE, TEXT, as_toml

BASES = [TEXT + MORE, *(starter_text(kind) for kind in KINDS)]
SPOILT_VALUES: list[Any] = [
    "", "x", "-5 kg m^2", "1,5 N m", "5 furlong", "nan", "1e999 mm", "1e400", [], [[]], ["a", "b"], {}, {"a": {}},
    True, -1, 10**400, float("nan"), float("inf"), -1e308, 1e308, "\u202e", "\x1b[2J", "9" * 500, "a" * 3000, [{}], "½",
]  # fmt: skip


@dataclass(frozen=True)
class Spoilt:
    """One file to try: its bytes, and whether it must be refused (None: either, if the result is sound)."""

    name: str
    content: bytes
    refused: bool | None


def _places(node: Any, path: tuple[Any, ...] = ()) -> Iterator[tuple[Any, ...]]:
    """Every key and list place below a table, tables first."""
    members = node.items() if isinstance(node, dict) else enumerate(node) if isinstance(node, list) else ()
    for key, value in members:
        yield (*path, key)
        yield from _places(value, (*path, key))


def _parent(data: Any, path: tuple[Any, ...]) -> Any:
    for key in path[:-1]:
        data = data[key]
    return data


def _changed(base: str, path: tuple[Any, ...], change: Callable[[Any, Any], None]) -> bytes:
    data = tomllib.loads(base)
    change(_parent(data, path), path[-1])
    return as_toml(data).encode()


def _values(draw: random.Random, count: int) -> Iterator[Spoilt]:
    """A wrong value somewhere."""
    for number in range(count):
        base = draw.choice(BASES)
        path = draw.choice(list(_places(tomllib.loads(base))))
        value = draw.choice(SPOILT_VALUES)
        content = _changed(base, path, lambda parent, key, value=value: parent.__setitem__(key, value))
        yield Spoilt(f"value {number} at {path}", content, None)


def _keys(draw: random.Random, count: int) -> Iterator[Spoilt]:
    """A misspelt key: of a table with fixed keys it is certainly wrong."""
    for number in range(count):
        base = draw.choice(BASES)
        fixed = ("train", "operation", "criteria", "sign-off")
        places = [p for p in _places(tomllib.loads(base)) if len(p) == 2 and p[0] in fixed and isinstance(p[1], str)]
        path = draw.choice(places)
        letter = draw.choice("qxzj")
        yield Spoilt(
            f"key {number} at {path}", _changed(base, path, lambda p, k, c=letter: p.update({k + c: p.pop(k)})), True
        )


def _dropped(draw: random.Random, count: int) -> Iterator[Spoilt]:
    """Something left out."""
    for number in range(count):
        base = draw.choice(BASES)
        path = draw.choice(list(_places(tomllib.loads(base))))
        yield Spoilt(f"dropped {number} at {path}", _changed(base, path, lambda parent, key: parent.pop(key)), None)


def _bytes(draw: random.Random, count: int) -> Iterator[Spoilt]:
    """Truncation in mid-file, binary garbage, a table given twice, brackets nested deeply."""
    for number in range(count):
        text = draw.choice(BASES)
        cut = draw.randrange(20, len(text) - 20)
        garbage = bytes(draw.choice([0, 0x80, 0xFF, 0xC3]) for _ in range(3)) + b"\xff"
        yield Spoilt(f"truncated {number}", f'{text[:cut]}\nx = "'.encode(), True)
        yield Spoilt(f"garbage {number}", text.encode()[:cut] + garbage + text.encode()[cut:], True)
        table = draw.choice([line for line in text.split("\n") if line.startswith("[") and "." not in line])
        yield Spoilt(f"table twice {number}", f"{text}\n{table.split(']')[0]}]\n".encode(), True)
        quote = draw.choice(
            [i for i, letter in enumerate(text) if letter == '"' and "#" not in text[text.rfind("\n", 0, i) : i]]
        )
        yield Spoilt(f"lost quote {number}", (text[:quote] + text[quote + 1 :]).encode(), True)


def _special() -> Iterator[Spoilt]:
    """Shapes of a whole file."""
    deep = "[" * 5000 + "]" * 5000
    dotted = ".".join(["a"] * 5000)
    yield Spoilt("deep brackets", f"{TEXT}x = {deep}\n".encode(), True)
    yield Spoilt("deep dots", f"{TEXT}[{dotted}]\n".encode(), True)
    yield Spoilt("deep inline tables", f"{TEXT}x = {'{ a = ' * 3000}1{' }' * 3000}\n".encode(), True)
    yield Spoilt("deep case", f"{TEXT}[cases.deep.stations.{dotted}]\n".encode(), True)
    yield Spoilt("UTF-16", TEXT.encode("utf-16"), True)
    yield Spoilt("Latin-1", TEXT.replace("booster", "Förderer").encode("latin-1", "replace"), True)
    yield Spoilt("empty", b"", True)
    yield Spoilt("spaces", b" \r\n\t\n", True)
    yield Spoilt("NUL", TEXT.encode() + b"\0", True)
    yield Spoilt("not TOML", b'{ "schema": 1 }', True)
    yield Spoilt("byte order mark", b"\xef\xbb\xbf" + TEXT.encode(), False)
    yield Spoilt("CRLF", TEXT.replace("\n", "\r\n").encode(), False)
    yield Spoilt("lone CR", TEXT.replace("\n", "\r").encode(), True)
    yield Spoilt("a million digits", TEXT.replace('"0.74 kg m^2"', "1" * 1_000_000).encode(), True)


HEAD = 'schema = 1\n[train]\ntitle = "t"\nunits = "SI"\n[operation]\nspeed-at = "s0"\nrated = 1500\n'


def _chain(inertias: list[str], stiffnesses: list[str], more: str = "") -> bytes:
    rows = "".join(f"s{i} = {{ {text} }}\n" for i, text in enumerate(inertias))
    links = "".join(f'l{i} = {{ between = ["s{i}", "s{i + 1}"], {text} }}\n' for i, text in enumerate(stiffnesses))
    return f"{HEAD}[stations]\n{rows}[shafts]\n{links}{more}".encode()


def _odd() -> Iterator[Spoilt]:
    """Physically odd files, most of them sound."""
    one, k = "inertia = 1", "stiffness = 1e6"
    yield Spoilt("one station", _chain([one], []), False)
    yield Spoilt("one massless station", _chain(["inertia = 0"], []), True)
    yield Spoilt("two stations, no link", _chain([one, one], []), True)
    yield Spoilt("all massless", _chain(["inertia = 0"] * 4, [k] * 3), True)
    yield Spoilt("one inertia among massless stations", _chain(["inertia = 0", one, "inertia = 0"], [k] * 2), False)
    for low, high in (("0 %", "0 %"), ("-99 %", "1000 %"), ("-99.9999 %", "0 %"), ("0 %", "100 %")):
        tolerance = f'tolerance = ["{low}", "{high}"]'
        yield Spoilt(f"tolerance {low} {high}", _chain([f"{one}, {tolerance}"] * 3, [f"{k}, {tolerance}"] * 2), False)
    yield Spoilt("tolerance 100 %", _chain([f'{one}, tolerance = "100 %"', one], [k]), True)
    spread = [f"stiffness = 1e{power}" for power in (4, 16, 4, 16, 10, 7)]
    yield Spoilt("stiffness spread 1e12", _chain([one] * 7, spread), False)
    yield Spoilt("inertia spread 1e18", _chain([f"inertia = 1e{power}" for power in (-9, 9, -9, 9, 0)], [k] * 4), False)
    yield Spoilt("200 stations", _chain([one] * 200, [k] * 199), False)
    yield Spoilt("ring of stations", _chain([one] * 3, [k] * 2, f'back = {{ between = ["s2", "s0"], {k} }}\n'), False)
    yield Spoilt("parallel shafts", _chain([one] * 2, [k], f'other = {{ between = ["s1", "s0"], {k} }}\n'), False)
    same = _chain([one] * 3, [k] * 2).decode().replace("l0 =", "s0 =").replace("l1 =", "s2 =")
    yield Spoilt("stations named as links", same.encode(), False)
    for name in ("a b", "a.b", 'the "hub"', "ø 95 µm", "電動機", "-", "1", "schema", "omit", "stations"):
        quoted = json.dumps(name, ensure_ascii=False)
        text = _chain([one] * 3, [k] * 2).decode().replace("s1 =", f"{quoted} =").replace('"s1"', quoted)
        yield Spoilt(f"station {name}", text.encode(), False)


def _all_spoilt() -> list[Spoilt]:
    draw = random.Random(1487)
    made = [*_special(), *_odd(), *_values(draw, 60), *_dropped(draw, 40), *_keys(draw, 40)]
    return [*made, *_bytes(draw, 32)]


FILES = _all_spoilt()


def _sound(result: Any) -> bool:
    """Whether a result holds finite numbers only, and every mode proven."""
    proven = all(mode["proof"]["proven"] and mode["frequency_hz"] > 0 for mode in result["modes"])
    return proven and result["self_check"]["all_proven"] and _finite(result)


def _finite(node: Any) -> bool:
    if isinstance(node, dict | list):
        return all(map(_finite, node.values() if isinstance(node, dict) else node))
    return not isinstance(node, float) or math.isfinite(node)


def command(*arguments: str) -> tuple[int, str, str]:
    """Exit code, standard output and standard error of the command, run in this process."""
    out, err = io.StringIO(), io.StringIO()
    before = sys.argv
    sys.argv = ["quillshaft", *arguments]
    try:
        with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err), pytest.raises(SystemExit) as ended:
            run()
    finally:
        sys.argv = before
    return int(ended.value.code or 0), out.getvalue(), err.getvalue()


def test_there_are_three_hundred_files_and_more_than_half_are_certainly_invalid():
    assert len(FILES) >= 300
    assert len({item.content for item in FILES}) >= 280
    assert sum(item.refused is True for item in FILES) > len(FILES) / 2


@pytest.mark.parametrize("item", FILES, ids=lambda item: item.name)
def test_a_spoilt_file_is_refused_in_words_or_screened_soundly(item, tmp_path):
    train, out = tmp_path / "train.toml", tmp_path / "out.json"
    train.write_bytes(item.content)
    out.write_bytes(b"the result of yesterday")
    code, printed, said = command("screen", str(train), "--json", str(out))
    assert code in (0, 2)
    assert "Traceback" not in printed + said
    assert "\x1b" not in printed + said
    if item.refused is not None:
        assert (code == 2) is item.refused, said
    if code == 2:
        assert said.startswith("train.toml")
        assert printed == ""
        assert out.read_bytes() == b"the result of yesterday"
    else:
        assert said == ""
        assert _sound(json.loads(out.read_text("utf-8"), parse_constant=pytest.fail))
    assert sorted(path.name for path in tmp_path.iterdir()) == ["out.json", "train.toml"]


@pytest.mark.parametrize("item", FILES[::12], ids=lambda item: item.name)
def test_check_and_screen_agree_on_what_can_be_used(item, tmp_path):
    train = tmp_path / "train.toml"
    train.write_bytes(item.content)
    code, printed, said = command("check", str(train))
    assert code in (0, 2)
    assert (code == 2) == bool(said) == (not printed)
    if item.refused is not None and "[cases" not in item.content.decode("utf-8", "replace"):
        assert (code == 2) is item.refused


@pytest.mark.parametrize("name", ["deep dots", "garbage 3", "CRLF"])
def test_a_real_process_does_the_same(name, tmp_path):
    item = next(item for item in FILES if item.name == name)
    (tmp_path / "train.toml").write_bytes(item.content)
    words = [sys.executable, "-m", "quillshaft.cli.main", "screen", "train.toml", "--json", "-"]
    done = subprocess.run(words, cwd=tmp_path, capture_output=True, check=False, timeout=60)
    assert done.returncode == (2 if item.refused else 0)
    assert b"Traceback" not in done.stderr
    if item.refused:
        assert done.stdout == b""
    else:
        assert _sound(json.loads(done.stdout))
    assert [path.name for path in Path(tmp_path).iterdir()] == ["train.toml"]
