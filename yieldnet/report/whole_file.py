"""Files that are written whole or not at all, and never over another one unasked."""

from __future__ import annotations

import os
from contextlib import contextmanager
from pathlib import Path
from tempfile import NamedTemporaryFile
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["whole_file"]


@contextmanager
def whole_file(path: Path, replace: bool = False) -> Iterator[Path]:
    """A file beside the one that is meant, which takes its place once all went well.

    Parameters
    ----------
    path : Path
        The file that is meant.
    replace : bool
        Whether a file of that name may be replaced.

    Returns
    -------
    context manager
        Gives the path to write to; it has the same folder and ending.

    Raises
    ------
    FileExistsError
        If there is such a file and it may not be replaced.
    """
    if path.exists() and not replace:
        raise FileExistsError(17, "it is there already", os.fspath(path))
    with NamedTemporaryFile(dir=path.parent, suffix=path.suffix, delete=False) as file:
        half = Path(file.name)
    try:
        yield half
        half.chmod(0o666 & ~_mask())
        if replace:
            half.replace(path)
        else:
            # A link fails where a file is already, even if it came a moment ago.
            os.link(half, path)
    finally:
        half.unlink(missing_ok=True)


def _mask() -> int:
    """What the user withholds from new files; it can only be read by setting it."""
    mask = os.umask(0)
    os.umask(mask)
    return mask
