"""A package that can be called, where a room and its main function share a name.

`aero.regime(kn)` tags Knudsen numbers and `aero.regime.tags` is a module: the import system binds the
package to the name, so the package itself answers the call.
"""

from __future__ import annotations

import sys
import types


class CallableModule(types.ModuleType):
    """A module whose call goes to the function of its own last name."""

    def __call__(self, *arguments: object, **keywords: object) -> object:
        """Call the function named like the module."""
        function = getattr(self, self.__name__.rpartition(".")[2])
        return function(*arguments, **keywords)


def make_callable(name: str) -> None:
    """Make the module of this name callable."""
    sys.modules[name].__class__ = CallableModule
