"""Frozen dataclasses that cost a fraction to make when the command starts.

`dataclass` here gives what `dataclasses.dataclass(frozen=True)` gives, except that its methods are functions shared by
all records in place of ones compiled anew for every class: there are hundreds of them.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from dataclasses import dataclass
else:
    import dataclasses

    def dataclass(made: type | None = None, /, *, frozen: bool = False) -> Any:
        """`dataclasses.dataclass`, with shared methods where `frozen`."""
        if made is None:
            return lambda later: dataclass(later, frozen=frozen)
        if not frozen:
            return dataclasses.dataclass(made)
        for name, shared in _SHARED.items():
            if name not in made.__dict__:
                setattr(made, name, shared)
        made = dataclasses.dataclass(init=False, eq=False, repr=False)(made)
        fields = dataclasses.fields(made)
        made.__record_names__ = tuple(field.name for field in fields)
        made.__record_defaults__ = {f.name: f.default for f in fields if f.default is not dataclasses.MISSING}
        made.__record_factories__ = {
            f.name: f.default_factory for f in fields if f.default_factory is not dataclasses.MISSING
        }
        return made


def _init(self: Any, *args: Any, **kwargs: Any) -> None:
    """Set every field by place or name, or by its default. Raises TypeError for one missing, unknown or given twice."""
    names = self.__record_names__
    if not kwargs and len(args) == len(names):
        self.__dict__.update(zip(names, args, strict=True))
        return
    values = {**self.__record_defaults__, **dict(zip(names, args, strict=False)), **kwargs}
    for name, factory in self.__record_factories__.items():
        if name not in values:
            values[name] = factory()
    if (
        values.keys() != self.__dataclass_fields__.keys()
        or len(args) > len(names)
        or kwargs.keys() & names[: len(args)]
    ):
        raise TypeError(
            f"{type(self).__name__} takes {', '.join(names)}, each once; given {len(args)} and {list(kwargs)}"
        )
    self.__dict__.update(values)


def _set(self: Any, name: str, value: object) -> None:  # noqa: ARG001
    import dataclasses

    raise dataclasses.FrozenInstanceError(f"cannot assign to field {name!r}")


def _delete(self: Any, name: str) -> None:  # noqa: ARG001
    import dataclasses

    raise dataclasses.FrozenInstanceError(f"cannot delete field {name!r}")


def _values(record: Any) -> tuple[Any, ...]:
    return tuple(getattr(record, name) for name in record.__record_names__)


def _equal(self: Any, other: object) -> bool:
    """Of one class, and all fields equal."""
    return bool(_values(self) == _values(other)) if other.__class__ is self.__class__ else NotImplemented


def _hash(self: Any) -> int:
    return hash(_values(self))


def _text(self: Any) -> str:
    shown = ", ".join(f"{name}={getattr(self, name)!r}" for name in self.__record_names__)
    return f"{type(self).__qualname__}({shown})"


_SHARED = {
    "__init__": _init,
    "__setattr__": _set,
    "__delattr__": _delete,
    "__eq__": _equal,
    "__hash__": _hash,
    "__repr__": _text,
}

__all__ = ["dataclass"]
