"""A workbook in which an engineer can go on working: live formulas from the yields on.

In: a prediction, with the plant sheet that was made of it. Out: a file of sheets named by the words
of the project: ``inputs``, ``coefficients``, ``compounds``, ``streams``, ``oxygen and heat``,
``cost``, ``ladder``, ``sources``; a sheet without its data is left out. What only the linear
problem can tell is a value, and says so. No macro, and no link to another file.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.report.whole_file import whole_file
from yieldnet.report.workbook_base import add_protons, add_scale
from yieldnet.report.workbook_coefficients import add_coefficients, add_compounds
from yieldnet.report.workbook_cost import add_cost
from yieldnet.report.workbook_file import write_book
from yieldnet.report.workbook_heat import add_heat, add_oxygen
from yieldnet.report.workbook_inputs import Check, add_checks, add_inputs, setting_of
from yieldnet.report.workbook_ladder import add_ladder, add_sources
from yieldnet.report.workbook_live import live
from yieldnet.report.workbook_page import Book
from yieldnet.report.workbook_streams import add_streams, passing_air
from yieldnet.report.workbook_vessels import add_vessels

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.plant.sheet import PlantSheet
    from yieldnet.prediction.result import Prediction
    from yieldnet.report.study import Study
    from yieldnet.report.workbook_coefficients import Amounts, Compounds
    from yieldnet.report.workbook_inputs import Setting
    from yieldnet.report.workbook_page import Page

__all__ = ["save_workbook", "workbook_of"]

_ORDER = (
    "inputs",
    "coefficients",
    "streams",
    "oxygen and heat",
    "cost",
    "ladder",
    "compounds",
    "sources",
)


def save_workbook(study: Study, path: Path, replace: bool = False) -> None:
    """Write the workbook of a study, whole or not at all.

    Parameters
    ----------
    study : Study
        The study; without a plant, all sheets of it are left out.
    path : Path
        File that ends in ``.xlsx``.
    replace : bool
        Whether a file of that name may be replaced.

    Raises
    ------
    ValueError
        If the name ends otherwise.
    FileExistsError
        If there is such a file and it may not be replaced.
    """
    if path.suffix.lower() != ".xlsx":
        raise ValueError(f"{path.name!r} does not end in .xlsx")
    book = workbook_of(study.prediction, study.plant, _origin(study))
    with whole_file(path, replace) as half:
        write_book(book, half)


def _origin(study: Study) -> tuple[tuple[str, str], ...]:
    """Versions, files with their SHA-256, and what could not be told."""
    files = [item for item in (study.inputs.case, study.inputs.network) if item is not None]
    return (
        *study.versions,
        *((f"{item.role} file {item.name}, SHA-256", item.digest) for item in files),
        *((f"{name}: not told", reason) for name, reason in study.left_out),
    )


def workbook_of(
    prediction: Prediction,
    plant: PlantSheet | None,
    origin: tuple[tuple[str, str], ...] = (),
) -> Book:
    """The workbook of a prediction, with the plant that was made of it.

    Parameters
    ----------
    prediction : Prediction
        The answer.
    plant : PlantSheet or None
        Its plant.
    origin : tuple of (str, str)
        What the sheet ``sources`` says of versions and files.

    Returns
    -------
    Book
        The workbook, finished, with what every formula comes to.
    """
    setting = setting_of(prediction, plant)
    book = Book(setting.case.title)
    inputs = add_inputs(book, setting)
    compounds = add_compounds(book, setting)
    amounts = add_coefficients(book, setting, compounds)
    checks = list(amounts.checks)
    if plant is not None:
        _plant(book, setting, compounds, amounts, checks)
    add_ladder(book, setting)
    add_sources(book, setting, origin)
    book.finish(add_checks(inputs, checks) if checks else live(""))
    book.sort(_ORDER)
    return book


def _plant(
    book: Book, setting: Setting, compounds: Compounds, amounts: Amounts, checks: list[Check]
) -> None:
    """The sheets of a plant, in the order in which their numbers follow from each other."""
    streams = book.page(
        "streams",
        (46, 11, 11, 12, 11, 15, *(7,) * len(compounds.elements), 46),
        "While on stream. Water of the feed and of evaporation, and what the downstream steps add,"
        " are left out.",
    )
    heat: Page = book.page(
        "oxygen and heat",
        (40, 11, 12, 12, 56, 44),
        "Means over the time on stream; the gas is taken as mixed. Heat of dilution, of the feed,"
        " through the wall and of condensing the vapour is left out.",
    )
    add_scale(streams, setting, amounts)
    protons = add_protons(streams, setting, amounts, checks)
    add_vessels(heat, setting, checks)
    air = passing_air(heat, setting)
    bought = add_streams(streams, setting, compounds, amounts, protons, air, checks)
    add_oxygen(heat, setting, amounts, checks)
    add_heat(heat, setting, amounts, protons, air, checks)
    add_cost(book, setting, amounts, protons, bought, checks)
