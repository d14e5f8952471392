"""Pictures as files: one style, SVG or PNG, written whole or not at all."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.report.whole_file import whole_file

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from matplotlib.figure import Figure

__all__ = ["COLOURS", "INK", "PICTURES", "picture_text", "save_picture"]

PICTURES = (".svg", ".png")
"""Endings of the files that can be written."""
# Okabe and Ito's colours for every kind of colour vision, the blues darkened so that labels can be
# read, in an order in which neighbours differ in grey print, too.
COLOURS = ("#004c7f", "#d55e00", "#3d9bd1", "#000000", "#cc79a7", "#009e73")
"""Colours in the order of use."""
INK = "#333333"
"""Colour of axes and words."""
_DOTS_PER_INCH = 200
_STYLE: dict[Any, Any] = {
    "font.family": "DejaVu Sans",
    "font.size": 9,
    "text.parse_math": False,  # a name with a dollar sign is a name
    "svg.hashsalt": "yieldnet",  # the same picture gives the same file
    "axes.edgecolor": INK,
    "axes.labelcolor": INK,
    "xtick.color": INK,
    "ytick.color": INK,
}


def save_picture(draw: Callable[[], Figure], path: Path, replace: bool = False) -> None:
    """Draw a picture into a file, whole or not at all.

    Parameters
    ----------
    draw : callable
        Makes the picture; called in the style of all pictures.
    path : Path
        File that ends in one of :data:`PICTURES`.
    replace : bool
        Whether a file of that name may be replaced.

    Raises
    ------
    ValueError
        If the name ends otherwise.
    FileExistsError
        If there is such a file and it may not be replaced.
    """
    from matplotlib import rc_context

    if path.suffix not in PICTURES:
        raise ValueError(f"{path.name!r} does not end in {' or '.join(PICTURES)}")
    kind = path.suffix.removeprefix(".")
    with whole_file(path, replace) as half, rc_context(_STYLE):
        draw().savefig(
            half,
            format=kind,
            dpi=_DOTS_PER_INCH,
            bbox_inches="tight",
            # No date and no version, so that the same answer is the same file.
            metadata={"Date": None} if kind == "svg" else {"Software": None},
        )


def picture_text(draw: Callable[[], Figure]) -> str:
    """SVG of a picture, in the style of all pictures.

    Parameters
    ----------
    draw : callable
        Makes the picture.

    Returns
    -------
    str
        The file as a text; the same picture gives the same text.
    """
    from io import StringIO

    from matplotlib import rc_context

    text = StringIO()
    with rc_context(_STYLE):
        draw().savefig(text, format="svg", bbox_inches="tight", metadata={"Date": None})
    return text.getvalue()
