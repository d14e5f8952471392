"""yieldnet: what a mole of substrate becomes, from elements and from a network.

The public functions are loaded when they are first used, so that importing the package is cheap.
"""

from __future__ import annotations

import sys
from types import ModuleType
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.errors import InputError, SolveError, YieldnetError
    from yieldnet.verbs import (
        additions,
        audit,
        balance,
        biomass_from,
        couple,
        energetics,
        explain,
        growth,
        knockout,
        new,
        plant,
        predict,
        rates,
        read_case,
        read_network,
        read_run,
        reconcile,
        report,
        reproduce,
        schema,
        screen,
        tradeoff,
        verify,
    )

__all__ = [
    "InputError",
    "SolveError",
    "YieldnetError",
    "additions",
    "audit",
    "balance",
    "biomass_from",
    "couple",
    "energetics",
    "explain",
    "growth",
    "knockout",
    "new",
    "plant",
    "predict",
    "rates",
    "read_case",
    "read_network",
    "read_run",
    "reconcile",
    "report",
    "reproduce",
    "schema",
    "screen",
    "tradeoff",
    "verify",
]
__version__ = "0.1.0"

_ERRORS = frozenset({"InputError", "SolveError", "YieldnetError"})


def __getattr__(name: str) -> object:
    if name not in __all__:
        raise AttributeError(f"module 'yieldnet' has no attribute {name!r}")
    from importlib import import_module

    home = "yieldnet.foundation.errors" if name in _ERRORS else "yieldnet.verbs"
    return getattr(import_module(home), name)


class _Package(ModuleType):
    """Package in which a verb keeps its name though a folder has the same.

    Importing ``yieldnet.balance.statements`` makes the import system bind the folder ``balance`` as
    an attribute here, which would hide the function ``balance``.
    """

    def __setattr__(self, name: str, value: object) -> None:
        if not (isinstance(value, ModuleType) and name in __all__):
            super().__setattr__(name, value)


sys.modules[__name__].__class__ = _Package


def __dir__() -> list[str]:
    return sorted((*__all__, "__version__"))
