"""A value that is worked out once for each object, by whichever thread asks first."""

from __future__ import annotations

from typing import TYPE_CHECKING, Generic, Self, TypeVar, overload

if TYPE_CHECKING:
    from collections.abc import Callable

_Owner = TypeVar("_Owner")
_Value = TypeVar("_Value")


class Once(Generic[_Owner, _Value]):
    """A property whose value stays with the object.

    Unlike `functools.cached_property` of Python 3.11 it locks nothing: a long evaluation in one thread holds up no
    other object of the class. Two threads that ask the same object at once both work it out; one of the two values
    stays.

    >>> class Square:
    ...     def __init__(self, side):
    ...         self.side = side
    ...
    ...     @Once
    ...     def area(self):
    ...         return self.side**2
    >>> Square(3).area
    9
    """

    def __init__(self, evaluate: Callable[[_Owner], _Value]) -> None:
        self._evaluate = evaluate
        self._name = ""
        self.__doc__ = evaluate.__doc__

    def __set_name__(self, owner: type[_Owner], name: str) -> None:
        """Take the name under which the value stays."""
        self._name = name

    @overload
    def __get__(self, owned: None, owner: type[_Owner]) -> Self: ...

    @overload
    def __get__(self, owned: _Owner, owner: type[_Owner]) -> _Value: ...

    def __get__(self, owned: _Owner | None, owner: type[_Owner]) -> Self | _Value:
        """Work the value out; from then on it is found in the object before this is asked."""
        if owned is None:
            return self
        value = self._evaluate(owned)
        owned.__dict__[self._name] = value
        return value
