"""The shared methods of frozen records give what `dataclasses` gives."""

from __future__ import annotations

import dataclasses

import pytest

from quillshaft.records import dataclass


@dataclass(frozen=True)
class Pair:
    """Ours."""

    first: int
    second: tuple[str, ...] = ()


@dataclasses.dataclass(frozen=True)
class Plain:
    """The same by the standard library."""

    first: int
    second: tuple[str, ...] = ()


def test_equality_and_hash_follow_the_fields_and_the_class() -> None:
    assert Pair(1, ("a",)) == Pair(1, ("a",))
    assert Pair(1, ("a",)) != Pair(1, ("b",))
    assert Pair(1) != Plain(1)
    assert hash(Pair(1, ("a",))) == hash(Plain(1, ("a",)))


def test_text_is_that_of_the_standard_library() -> None:
    assert repr(Pair(1, ("a",))) == repr(Plain(1, ("a",))).replace("Plain", "Pair")


def test_records_are_frozen_and_are_dataclasses() -> None:
    with pytest.raises(dataclasses.FrozenInstanceError):
        Pair(1).first = 2  # type: ignore[misc]
    assert dataclasses.replace(Pair(1), first=3) == Pair(3)
    assert [field.name for field in dataclasses.fields(Pair)] == ["first", "second"]
