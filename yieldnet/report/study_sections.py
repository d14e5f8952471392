"""The sections of a study in their order: which view tells what, where its pictures stand.

In: a study. Out: sections of blocks, which the page lays out. A section is there when its data are.
Every figure comes from the views that the text outputs use.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.model.network import Direction
from yieldnet.plant.sheet import CAUTIONS
from yieldnet.prediction.assumptions import KEPT
from yieldnet.prediction.result import CoefficientStatus
from yieldnet.report.data_view import data_view
from yieldnet.report.energetics_view import energetics_view
from yieldnet.report.figures import range_text
from yieldnet.report.page_table import PageTable, page_table
from yieldnet.report.plant_view import plant_headline, plant_view
from yieldnet.report.study_pictures import StudyPicture, study_pictures
from yieldnet.report.study_view import knockout_headline, knockout_tables
from yieldnet.report.table import Table
from yieldnet.report.tradeoff_view import (
    region_headline,
    region_notes,
    region_tables,
    tradeoff_findings,
    tradeoff_title,
)
from yieldnet.report.view import view_of

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from yieldnet.foundation.findings import Finding
    from yieldnet.prediction.result import EquationTerm, Prediction
    from yieldnet.report.study import Study
    from yieldnet.report.view import PredictionView

__all__ = [
    "MARKS",
    "Block",
    "MarkedTerm",
    "Section",
    "marked_equation",
    "study_findings",
    "study_sections",
    "study_sources",
    "summary_lines",
]

MARKS = {
    "basis": "the substrate that all else is counted per mol of",
    "measured": "measured, or reconciled from measured values",
    "fixed": "follows from the balances, whatever is best",
    "predicted": "follows only because the aim is at its best value",
    "bracketed": "not unique even then: lowest and highest value",
    "open": "without an end: nothing holds it",
}
"""Words that mark a coefficient, and what each means."""
_FIXED = {CoefficientStatus.FIXED_BY_ELEMENTS, CoefficientStatus.FIXED_BY_NETWORK}
_MEASURED = {CoefficientStatus.MEASURED, CoefficientStatus.RECONCILED}


@dataclass(frozen=True, slots=True, kw_only=True)
class MarkedTerm:
    """One term of the overall equation with the mark that says how it is known.

    Parameters
    ----------
    amount : str
        Its coefficient; empty for one.
    compound : str
        Which compound.
    mark : str
        One of :data:`MARKS`.
    left : bool
        Whether it stands left of the arrow.
    """

    amount: str
    compound: str
    mark: str
    left: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Block:
    """A piece of a section; one of its parts is there.

    Parameters
    ----------
    text : str
        A paragraph.
    strong : bool
        Whether the paragraph is the answer of its section.
    lines : tuple of str
        A list.
    table : PageTable or None
        A table.
    picture : StudyPicture or None
        A picture.
    terms : tuple of MarkedTerm
        An equation.
    listing : str
        A file in full.
    label : str
        Its name.
    local : bool
        Whether it tells of this machine and not of the study.
    """

    text: str = ""
    strong: bool = False
    lines: tuple[str, ...] = ()
    table: PageTable | None = None
    picture: StudyPicture | None = None
    terms: tuple[MarkedTerm, ...] = ()
    listing: str = ""
    label: str = ""
    local: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Section:
    """A part of the study under its own heading.

    Parameters
    ----------
    name : str
        Its address in the page.
    title : str
        Its heading.
    blocks : tuple of Block
        What it holds.
    """

    name: str
    title: str
    blocks: tuple[Block, ...]


def marked_equation(result: Prediction) -> tuple[MarkedTerm, ...]:
    """Filled-in overall equation, each coefficient marked; terms that are zero are left out.

    Parameters
    ----------
    result : Prediction
        The answer.

    Returns
    -------
    tuple of MarkedTerm
        Left side first.
    """
    found = []
    for term in result.terms:
        if term.range.single and term.range.low == 0:
            continue
        amount = range_text(term.range)
        if not term.range.single:
            amount = f"[{amount}]"
        elif term.range.low == 1:
            amount = ""
        found.append(
            MarkedTerm(
                amount=amount,
                compound=term.compound,
                mark=_mark(result, term),
                left=term.side is Direction.CONSUMED,
            )
        )
    return tuple(sorted(found, key=lambda item: not item.left))


def _mark(result: Prediction, term: EquationTerm) -> str:
    if term.compound == result.case.basis.name:
        return "basis"
    item = result.coefficient(term.compound)
    if item.status in _MEASURED and not item.set_aside:
        return "measured"
    if item.status in _FIXED:
        return "fixed"
    if term.range.single:
        return "predicted"
    return "open" if None in (term.range.low, term.range.high) else "bracketed"


def summary_lines(study: Study) -> tuple[tuple[str, str], ...]:
    """The study in short: a word and a line each."""
    view = view_of(study.prediction)
    found = [("Answer", view.headline)]
    if study.plant is not None:
        found.append(("Plant", plant_headline(study.plant)))
    if study.reconciliation is not None:
        found.append(("Measured values", data_view(study.reconciliation).headline))
    if study.energetics is not None:
        found.append(("Heat and energy", energetics_view(study.energetics).headline))
    findings = study_findings(study)
    counts = [
        f"{number} {word}{'s' if number != 1 else ''}"
        for word in ("error", "warning", "note")
        if (number := sum(str(item.severity) == word for item in findings))
    ]
    found.append(("Findings", ", ".join(counts) or "none"))
    found.append(("Caution", CAUTIONS[0]))
    return tuple(found)


def study_findings(study: Study) -> tuple[Finding, ...]:
    """Findings of all answers, each once, in the order of the answers."""
    parts: list[Iterable[Finding]] = [study.prediction.findings]
    if study.reconciliation is not None:
        parts.append(study.reconciliation.findings)
    if study.energetics is not None:
        parts.append(study.energetics.findings)
    if study.tradeoff is not None:
        parts.append(tradeoff_findings(study.tradeoff))
    if study.ideas is not None:
        parts.append(study.ideas.before.findings)
    if study.plant is not None:
        parts.append(study.plant.findings)
    return tuple(dict.fromkeys(item for part in parts for item in part))


def _assumptions(study: Study) -> tuple[tuple[str, str, str], ...]:
    """Assumptions of all answers, each once; "kept and not used" only where nothing used it."""
    found = list(view_of(study.prediction).assumptions)
    if study.reconciliation is not None:
        found += data_view(study.reconciliation).assumptions
    if study.energetics is not None:
        found += energetics_view(study.energetics).assumptions
    if study.plant is not None:
        found += plant_view([study.plant]).assumptions
    used = set()
    if study.energetics is not None:
        used |= {KEPT["temperature"], KEPT["pH"], KEPT["concentrations"]}
    if study.plant is not None:
        used |= {KEPT["plant"], KEPT["temperature"], KEPT["pH"]}
    return tuple(item for item in dict.fromkeys(found) if item[0] not in used)


def study_sources(study: Study) -> tuple[tuple[str, str], ...]:
    """Sources of the numbers that were used, and what each was used for.

    Parameters
    ----------
    study : Study
        The study.

    Returns
    -------
    tuple of (str, str)
        Source and uses, in the order of the page.
    """
    uses: dict[str, dict[str, None]] = {}

    def add(source: str, use: str) -> None:
        words = " ".join(source.split())
        if words:
            uses.setdefault(words, {})[use] = None

    for text, _, source in _assumptions(study):
        add(source, text)
    if study.energetics is not None and study.energetics.heat is not None:
        for term in study.energetics.heat.terms:
            if term.amount:
                add(term.heat.known.source, f"heat of combustion of {term.compound}")
    if study.plant is not None:
        for item in study.plant.figures:
            add(item.source, item.name)
            for one in item.inputs:
                add(one.source, one.name)
    return tuple((source, "; ".join(names)) for source, names in uses.items())


def study_sections(study: Study) -> tuple[Section, ...]:
    """All sections of a study.

    Parameters
    ----------
    study : Study
        The study.

    Returns
    -------
    tuple of Section
        In the order of reading.
    """
    pictures = {item.name: item for item in study_pictures(study)}
    view = view_of(study.prediction)
    return tuple(
        section
        for section in (
            _overall(study, view),
            _coefficients(view, pictures),
            _ladder(view, pictures),
            _relaxations(view, pictures),
            _limits(view),
            _measured(study, pictures),
            _tradeoff(study, pictures),
            _energetics(study),
            _ideas(study),
            _plant(study, pictures),
            _later(),
            _left_out(study),
            _findings(study),
            _taken(study),
            _sources(study),
            _inputs(study),
        )
        if section.blocks
    )


def _text(text: str, *, strong: bool = False) -> Iterator[Block]:
    if text:
        yield Block(text=text, strong=strong)


def _tables(tables: Iterable[Table]) -> Iterator[Block]:
    for table in tables:
        if table.rows:
            yield Block(table=page_table(table))
        elif table.note:
            yield Block(text=f"{table.title}: {table.note}")


def _drawn(pictures: dict[str, StudyPicture], name: str) -> Iterator[Block]:
    if name in pictures:
        yield Block(picture=pictures[name])


def _part(view: PredictionView, *beginnings: str) -> list[Table]:
    return [table for table in view.tables if table.title.startswith(beginnings)]


_ELSEWHERE = ("Ladder", "Degrees", "What would give it back", "What limits", "Filled in")
"""Tables of a prediction that stand in sections of their own."""


def _overall(study: Study, view: PredictionView) -> Section:
    terms = marked_equation(study.prediction)
    blocks = [*_text(view.headline, strong=True)]
    if study.case.about:
        blocks += _text(" ".join(study.case.about.split()))
    if view.conflict:
        blocks += _text(view.conflict[0])
        blocks.append(Block(lines=tuple(text.removeprefix("- ") for text in view.conflict[1:])))
    if terms:
        blocks.append(Block(terms=terms))
        blocks += _text(view.equation)
        used = dict.fromkeys(term.mark for term in terms)
        blocks.append(
            Block(lines=tuple(f"{mark}: {MARKS[mark]}" for mark in MARKS if mark in used))
        )
    blocks += _tables(_part(view, "Filled in"))
    if view.remarks:
        blocks.append(Block(lines=view.remarks))
    return Section(name="equation", title="Overall equation", blocks=tuple(blocks))


def _coefficients(view: PredictionView, pictures: dict[str, StudyPicture]) -> Section:
    tables = [item for item in view.tables if not item.title.startswith(_ELSEWHERE)]
    return Section(
        name="coefficients",
        title="Elements against network",
        blocks=(*_drawn(pictures, "ranges"), *_tables(tables)),
    )


def _ladder(view: PredictionView, pictures: dict[str, StudyPicture]) -> Section:
    return Section(
        name="ladder",
        title="Ladder: what each layer costs",
        blocks=(*_drawn(pictures, "ladder"), *_tables(_part(view, "Ladder", "Degrees"))),
    )


def _relaxations(view: PredictionView, pictures: dict[str, StudyPicture]) -> Section:
    return Section(
        name="relaxations",
        title="What would give it back",
        blocks=(
            *_drawn(pictures, "relaxations"),
            *_tables(_part(view, "What would give it back")),
        ),
    )


def _limits(view: PredictionView) -> Section:
    return Section(
        name="limits", title="What limits", blocks=tuple(_tables(_part(view, "What limits")))
    )


def _measured(study: Study, pictures: dict[str, StudyPicture]) -> Section:
    blocks: list[Block] = []
    if study.reconciliation is not None:
        view = data_view(study.reconciliation)
        blocks += _text(view.headline, strong=True)
        blocks += _text(view.aim)
        if view.equations:
            blocks += _text("Equations in which only measured values stand, mol/mol:")
            blocks.append(Block(lines=view.equations))
        blocks += _drawn(pictures, "measured")
        blocks += _tables(view.tables)
        if view.next is not None:
            blocks += _tables([view.next])
        for remark in view.remarks:
            blocks += _text(remark)
    return Section(name="measured", title="Measured values", blocks=tuple(blocks))


def _tradeoff(study: Study, pictures: dict[str, StudyPicture]) -> Section:
    result, blocks = study.tradeoff, list[Block]()
    if result is not None:
        blocks += _text(tradeoff_title(result))
        blocks += _text(region_headline(result, 0), strong=True)
        blocks += _drawn(pictures, "tradeoff")
        blocks += _tables(region_tables(result, 0))
        for note in region_notes(result, 0):
            blocks += _text(note)
    return Section(name="trade-off", title="Trade-off", blocks=tuple(blocks))


def _energetics(study: Study) -> Section:
    blocks: list[Block] = []
    if study.energetics is not None:
        view = energetics_view(study.energetics)
        blocks += _text(view.headline, strong=True)
        blocks += _tables(view.tables)
        for remark in view.remarks:
            blocks += _text(remark)
    return Section(name="energy", title="Heat and Gibbs energy", blocks=tuple(blocks))


def _ideas(study: Study) -> Section:
    blocks: list[Block] = []
    if study.ideas is not None:
        blocks += _text(knockout_headline(study.ideas), strong=True)
        # What would give it back after the idea is what the section of that name tells.
        tables = knockout_tables(study.ideas)
        blocks += _tables(
            table for table in tables if not table.title.startswith("What would give it back")
        )
    return Section(name="ideas", title="Ideas tried", blocks=tuple(blocks))


def _plant(study: Study, pictures: dict[str, StudyPicture]) -> Section:
    blocks: list[Block] = []
    if study.plant is not None:
        view = plant_view([study.plant], formulas=True)
        blocks += _text(view.headlines[0][1], strong=True)
        blocks += _text("Cautions:")
        blocks.append(Block(lines=view.cautions))
        blocks += _drawn(pictures, "streams")
        blocks += _tables(view.tables)
        blocks += _text(view.balance)
        blocks += _text("How each figure follows:")
        blocks.append(Block(lines=view.formulas))
    return Section(name="plant", title="Plant", blocks=tuple(blocks))


def _later() -> Section:
    return Section(
        name="later",
        title="Routes and uncertainty",
        blocks=(
            Block(
                lines=(
                    "Routes through the network: their place is here; this version does not tell"
                    " them yet.",
                    "Uncertainty of the parameters: its place is here; this version does not tell"
                    " it yet. What the errors of the measured values do is told above.",
                )
            ),
        ),
    )


def _left_out(study: Study) -> Section:
    lines = tuple(f"{name}: {' '.join(reason.split())}" for name, reason in study.left_out)
    return Section(
        name="left-out",
        title="What could not be told",
        blocks=(Block(lines=lines),) if lines else (),
    )


def _findings(study: Study) -> Section:
    lines = tuple(str(item) for item in study_findings(study))
    blocks = (Block(lines=lines),) if lines else tuple(_text("Nothing is doubtful."))
    return Section(name="findings", title="Findings", blocks=blocks)


def _taken(study: Study) -> Section:
    rows = []
    for text, value, source in _assumptions(study):
        number, _, unit = value.partition(" ")
        rows.append((text, number, "" if unit == "-" else unit, source))
    table = Table(
        title="What was taken for granted",
        columns=("assumption", "value", "unit", "source"),
        rows=tuple(rows),
    )
    return Section(name="assumptions", title="Assumptions", blocks=tuple(_tables([table])))


def _sources(study: Study) -> Section:
    table = Table(
        title="Where the numbers that were used come from",
        columns=("source", "used for"),
        rows=study_sources(study),
    )
    return Section(name="sources", title="Sources", blocks=tuple(_tables([table])))


def _inputs(study: Study) -> Section:
    digests = Table(
        title="Input files",
        columns=("file", "what", "SHA-256"),
        rows=tuple((item.name, item.role, item.digest) for item in study.inputs.texts()),
    )
    versions = Table(
        title="Versions of the programs that made this page",
        columns=("program", "version"),
        rows=study.versions,
    )
    return Section(
        name="inputs",
        title="Inputs and versions",
        blocks=(
            *_text(
                "The study can be repeated from this file alone: 'yieldnet report --verify FILE'"
                " reads the inputs below out of it, runs them again and compares all figures."
            ),
            *_tables([digests]),
            *(Block(table=block.table, local=True) for block in _tables([versions])),
            *(
                Block(listing=item.text, label=f"{item.role}: {item.name}")
                for item in study.inputs.texts()
            ),
        ),
    )
