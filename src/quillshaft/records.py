"""Frozen dataclasses that cost half as much to make when the command starts.

`dataclass` here is `dataclasses.dataclass`, except that equality, hash and text are three shared functions in
place of three compiled anew for every class; what they give is the same.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from dataclasses import dataclass
else:
    import dataclasses

    def dataclass(made: type | None = None, /, *, frozen: bool = False) -> Any:
        """`dataclasses.dataclass`, with shared equality, hash and text where `frozen`."""
        if made is None:
            return lambda later: dataclass(later, frozen=frozen)
        if not frozen:
            return dataclasses.dataclass(made)
        for name, shared in (("__eq__", _equal), ("__hash__", _hash), ("__repr__", _text)):
            if name not in made.__dict__:
                setattr(made, name, shared)
        return dataclasses.dataclass(frozen=True, eq=False, repr=False)(made)


def _values(record: Any) -> tuple[Any, ...]:
    return tuple(getattr(record, name) for name in record.__dataclass_fields__)


def _equal(self: Any, other: object) -> bool:
    """Of one class, and all fields equal."""
    return bool(_values(self) == _values(other)) if other.__class__ is self.__class__ else NotImplemented


def _hash(self: Any) -> int:
    return hash(_values(self))


def _text(self: Any) -> str:
    shown = ", ".join(f"{name}={getattr(self, name)!r}" for name in self.__dataclass_fields__)
    return f"{type(self).__qualname__}({shown})"


__all__ = ["dataclass"]
