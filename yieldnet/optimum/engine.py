"""Engines by name."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.optimum.basis import Engine

__all__ = ["engine_named"]


def engine_named(name: str) -> Engine:
    """Engine by name.

    Parameters
    ----------
    name : {"glpk", "optlang"}
        ``glpk`` drives GLPK's own interface; ``optlang`` goes through whatever solver optlang
        finds first.

    Returns
    -------
    Engine
        The engine.

    Raises
    ------
    ValueError
        If there is no such engine.
    """
    if name == "glpk":
        from yieldnet.optimum.glpk import GlpkEngine

        return GlpkEngine()
    if name == "optlang":
        from yieldnet.optimum.optlang_engine import OptlangEngine

        return OptlangEngine()
    raise ValueError(f"engine {name!r} is not known; known: glpk, optlang")
