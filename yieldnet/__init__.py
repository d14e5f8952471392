"""yieldnet: what a mole of substrate becomes, from elements and from a network.

The public functions are loaded when they are first used, so that importing the package is cheap.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.errors import InputError, ReportError, SolveError, YieldnetError
    from yieldnet.verbs import audit, balance, predict, read_case, read_network

__all__ = [
    "InputError",
    "ReportError",
    "SolveError",
    "YieldnetError",
    "audit",
    "balance",
    "predict",
    "read_case",
    "read_network",
]
__version__ = "0.1.0"

_ERRORS = frozenset({"InputError", "ReportError", "SolveError", "YieldnetError"})


def __getattr__(name: str) -> object:
    if name not in __all__:
        raise AttributeError(f"module 'yieldnet' has no attribute {name!r}")
    from importlib import import_module

    home = "yieldnet.foundation.errors" if name in _ERRORS else "yieldnet.verbs"
    return getattr(import_module(home), name)


def __dir__() -> list[str]:
    return sorted((*__all__, "__version__"))
