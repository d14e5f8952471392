"""Networks that ship with yieldnet, found by name."""

from __future__ import annotations

from pathlib import Path

__all__ = ["CANDIDATES", "find_shipped", "models_folder", "shipped_candidates", "shipped_names"]

CANDIDATES = "candidates"
"""Name of the shipped file of candidate reactions, which is no network of a cell."""


def models_folder() -> Path:
    """Folder of the shipped networks: inside the installed package, or beside it in a checkout."""
    package = Path(__file__).resolve().parent.parent
    installed = package / "models"
    return installed if installed.is_dir() else package.parent / "models"


def shipped_names() -> tuple[str, ...]:
    """Names of the shipped networks, sorted."""
    stems = {item.stem for item in models_folder().glob("*.yaml")}
    return tuple(sorted(stems - {CANDIDATES}))


def shipped_candidates() -> Path:
    """Path of the shipped candidate reactions."""
    return models_folder() / f"{CANDIDATES}.yaml"


def find_shipped(name: str) -> Path | None:
    """Path of a shipped network, or ``None``."""
    return models_folder() / f"{name}.yaml" if name in shipped_names() else None
