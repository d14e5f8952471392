"""A first study as files in a folder: all of them or none, and never over other files unasked.

In: a :class:`~yieldnet.studies.starting_case.StartingCase` and what is wanted beside the case. The
files are written into a folder beside the one that is meant, read back and answered there, and
only then put in their place.
"""

from __future__ import annotations

import os
import shutil
from dataclasses import dataclass, replace
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings
from yieldnet.model.network import BIOMASS
from yieldnet.plant.plant import plant_case
from yieldnet.prediction.predict import predict_case
from yieldnet.prediction.result import Outcome
from yieldnet.rates.rates import find_rates
from yieldnet.reading.case_file import load_case
from yieldnet.reading.run_file import load_run
from yieldnet.report.new_case import case_lines
from yieldnet.report.new_plant import plant_lines
from yieldnet.report.new_run import SHEET, plan_run, run_lines, sheet_text
from yieldnet.studies.starting_case import best_yields

if TYPE_CHECKING:
    from fractions import Fraction

    from yieldnet.foundation.findings import Finding
    from yieldnet.prediction.result import Prediction
    from yieldnet.report.new_run import RunPlan
    from yieldnet.studies.starting_case import StartingCase

__all__ = ["CASE", "RUN", "NewStudy", "write_study"]

CASE = "case.yaml"
"""Name of the case file."""
RUN = "run.yaml"
"""Name of the run file."""


@dataclass(frozen=True, slots=True, kw_only=True)
class NewStudy:
    """What was written.

    Parameters
    ----------
    folder : str
        The folder, as it was given.
    files : tuple of str
        Names of the files in it.
    network, substrate, product : str
        What the case asks about.
    best : Fraction
        Best value of the product [mol/mol basis].
    plant : bool
        Whether the case has a plant.
    chosen : tuple of str
        What was not asked for and how it was chosen, in words.
    findings : tuple of Finding
        Doubts of the first answer.
    """

    folder: str
    files: tuple[str, ...]
    network: str
    substrate: str
    product: str
    best: Fraction
    plant: bool
    chosen: tuple[str, ...] = ()
    findings: tuple[Finding, ...] = ()


def write_study(
    start: StartingCase,
    folder: Path,
    *,
    plant: bool = True,
    own_network: bool = False,
    run: str = "",
    force: bool = False,
) -> NewStudy:
    """Write a case, and what is wanted beside it, into a folder.

    Parameters
    ----------
    start : StartingCase
        What the case is made of.
    folder : Path
        The folder; it is made if it is not there, its parent must be.
    plant : bool
        Whether the case has a plant.
    own_network : bool
        Whether a copy of the network file is put beside the case.
    run : {"", "batch", "fed-batch", "chemostat"}
        Kind of the run file that is wanted; empty for none.
    force : bool
        Whether files that are there may be replaced.

    Returns
    -------
    NewStudy
        What was written.

    Raises
    ------
    InputError
        If a file is there already, no run can be written, or the first answer is none.
    OSError
        If the folder cannot be written to.
    """
    plan = plan_run(start, run, _most_biomass(start)) if run else None
    meant, folder = folder, folder.resolve()
    source = Path(start.network.file)
    copy = source.name if own_network else ""
    names = (CASE, *([RUN, SHEET] if plan else ()), *([copy] if copy else ()))
    _must_be_free(meant, names, force)
    with TemporaryDirectory(dir=folder.parent, prefix=".", suffix=".half") as name:
        half = Path(name)
        if copy:
            shutil.copyfile(source, half / copy)
        lines = case_lines(start, copy or _network_text(start, folder), bool(copy))
        lines += plant_lines(start) if plant else []
        _write(half / CASE, "\n".join(lines) + "\n")
        if plan:
            _write(half / RUN, "\n".join(run_lines(plan)) + "\n")
            _write(half / SHEET, sheet_text(plan))
        answer = _answered(half, meant, plan)
        assert answer.aim is not None
        assert answer.aim.value is not None
        _put_in_place(half, folder, names, force)
    return NewStudy(
        folder=os.fspath(meant),
        files=names,
        network=start.name,
        substrate=start.substrate,
        product=start.product,
        best=answer.aim.value,
        plant=plant,
        chosen=start.chosen,
        findings=tuple(_at_folder(item, half, meant) for item in answer.findings),
    )


def _most_biomass(start: StartingCase) -> Fraction | None:
    return best_yields(start.network, start.substrate, (BIOMASS,)).get(BIOMASS)


def _must_be_free(folder: Path, names: tuple[str, ...], force: bool) -> None:
    """All that stands in the way, at once."""
    findings = Findings()
    if folder.exists() and not folder.is_dir():
        findings.add(
            "YN933", f"{os.fspath(folder)!r} is a file", hint="Name a folder, or a new name."
        )
    elif not folder.parent.is_dir():
        findings.add(
            "YN101",
            f"folder {os.fspath(folder.parent)!r} does not exist",
            hint="Make it first: only the last folder of the path is made.",
        )
    for name in names if folder.is_dir() else ():
        path = folder / name
        if path.is_dir():
            findings.add("YN933", f"{os.fspath(path)!r} is a folder", hint="Choose another folder.")
        elif path.exists() and not force:
            findings.add(
                "YN933",
                f"{os.fspath(path)!r} is there already",
                hint="Choose another folder, or replace it with --force.",
            )
    if findings.refused:
        raise InputError(findings.sorted())


def _network_text(start: StartingCase, folder: Path) -> str:
    """The network as a case in the folder names it: by its name, or by the way to its file."""
    source = Path(start.network.file)
    if start.name == source.stem and not Path(start.name).suffix:
        return start.name
    return Path(os.path.relpath(source.resolve(), folder)).as_posix()


def _write(path: Path, text: str) -> None:
    path.write_text(text, encoding="utf-8", newline="\n")


def _answered(half: Path, folder: Path, plan: RunPlan | None) -> Prediction:
    """The first answer of everything that was written; an error refuses it all."""
    try:
        case, findings = load_case(os.fspath(half / CASE))
        if case is None:
            raise InputError(findings.sorted())
        answer = predict_case(case)
        if answer.outcome is not Outcome.SOLVED:
            raise InputError(answer.findings)
        if case.plant is not None:
            plant_case(case)
        if plan is not None:
            cultivation, doubts = load_run(os.fspath(half / RUN))
            if cultivation is None:
                raise InputError(doubts.sorted())
            find_rates(cultivation)
    except InputError as error:
        raise InputError([_at_folder(item, half, folder) for item in error.findings]) from error
    return answer


def _at_folder(finding: Finding, half: Path, folder: Path) -> Finding:
    """The finding at the file that was meant."""
    where = finding.where
    if where is None or Path(where.file).parent != half:
        return finding
    there = os.fspath(folder / Path(where.file).name)
    return replace(finding, where=replace(where, file=there))


def _put_in_place(half: Path, folder: Path, names: tuple[str, ...], force: bool) -> None:
    """Put all files where they belong; if one cannot be, what was there before is there again."""
    fresh = not folder.is_dir()
    if fresh:
        folder.mkdir()
    before = half / "before"
    before.mkdir()
    aside: list[str] = []
    placed: list[str] = []
    try:
        for name in names:
            there = folder / name
            if force and there.exists():
                there.replace(before / name)
                aside.append(name)
            # A link fails where a file is already, even if it came a moment ago.
            os.link(half / name, there)
            placed.append(name)
    except OSError:
        for name in placed:
            (folder / name).unlink()
        for name in aside:
            (before / name).replace(folder / name)
        if fresh:
            folder.rmdir()
        raise
