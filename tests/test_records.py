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


@pytest.mark.parametrize(
    ("args", "named"), [((), {}), ((1, (), 3), {}), ((1,), {"first": 2}), ((1,), {"third": 2}), ((), {"second": ()})]
)
def test_a_field_missing_unknown_or_given_twice_is_refused_as_by_the_standard_library(args, named) -> None:
    for made in (Pair, Plain):
        with pytest.raises(TypeError):
            made(*args, **named)


def test_defaults_and_factories_are_those_of_the_standard_library() -> None:
    @dataclass(frozen=True)
    class Listed:
        """With a list of its own in every record."""

        first: int
        rest: list[int] = dataclasses.field(default_factory=list)

    one, other = Listed(1), Listed(first=2)
    assert (one.rest, other.rest, Listed(3, [4]).rest) == ([], [], [4])
    assert one.rest is not other.rest
    with pytest.raises(dataclasses.FrozenInstanceError):
        del one.first
    assert Pair(2).second == Pair(first=2, second=()).second == ()
