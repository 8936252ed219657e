"""A mapping that cannot be changed and can be sent to another process."""

from __future__ import annotations

from typing import Any, NoReturn, TypeVar

K = TypeVar("K")
V = TypeVar("V")


class FrozenDict(dict[K, V]):
    """A dict that refuses every change. (types.MappingProxyType would do, but cannot be pickled.)"""

    def _refuse(self, *_: Any, **__: Any) -> NoReturn:
        raise TypeError("the catalogue cannot be changed")

    __setitem__ = __delitem__ = _refuse
    clear = pop = popitem = setdefault = update = _refuse
    __ior__ = _refuse

    def __reduce__(self) -> tuple[Any, ...]:
        return type(self), (dict(self),)
