"""Run files: a cultivation with its sheet (design of the format: README, "The run file")."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import library_names
from yieldnet.foundation.exact import WrittenNumber
from yieldnet.foundation.findings import Findings, TooManyFindings, near
from yieldnet.model.cultivation import Additions, Cultivation, CultivationKind, Gas, Method, Series
from yieldnet.model.equation import UNKNOWN
from yieldnet.reading.fields import Fields, entries, text, text_list
from yieldnet.reading.names import NameBook
from yieldnet.reading.nodes import Kind, Node, compose
from yieldnet.reading.overall import OverallReader
from yieldnet.reading.run_checks import RunRules
from yieldnet.reading.run_columns import ColumnReader, Columns
from yieldnet.reading.run_errors import ErrorBook
from yieldnet.reading.run_gas_checks import GasRules
from yieldnet.reading.run_labels import LabelBook, Role
from yieldnet.reading.run_settings import SettingsReader
from yieldnet.reading.run_values import SettingReader
from yieldnet.reading.sheet import read_sheet
from yieldnet.reading.source import MAX_FINDINGS, read_text, too_many

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.model.cultivation import Reading
    from yieldnet.model.equation import Equation, Term
    from yieldnet.model.network import Compound
    from yieldnet.reading.run_settings import Content, GasSettings
    from yieldnet.reading.sheet import Sheet

__all__ = ["RUN_KEYS", "load_run"]

RUN_KEYS = (
    "run",
    "about",
    "kind",
    "sheet",
    "tab",
    "ignore",
    "equation",
    "either side",
    "compounds",
    "method",
    "window",
    "errors",
    "volume",
    "dry weight",
    "salts",
    "feed",
    "base",
    "gas",
)
"""Keys of a run file."""


def load_run(path: str) -> tuple[Cultivation | None, Findings]:
    """Cultivation of a run file with its sheet, ``None`` if anything is wrong, with all findings.

    Parameters
    ----------
    path : str
        Path of the run file.

    Returns
    -------
    Cultivation or None
        The run in the units of :mod:`yieldnet.model.cultivation`.
    Findings
        Everything wrong or doubtful, in the run file and in its sheet.
    """
    findings = Findings(limit=MAX_FINDINGS)
    try:
        source = read_text(path, findings)
        root = compose(source, path, findings) if source is not None else None
        if root is not None and root.kind is not Kind.MAPPING:
            entries(root, "the file", findings)
            root = None
        run = _Reader(root, path, findings).run() if root is not None else None
    except TooManyFindings:
        findings.items.append(too_many(path))
        return None, findings
    if run is None or findings.refused:
        return None, findings
    return replace(run, findings=findings.sorted()), findings


@dataclass(slots=True)
class _Reader:
    """Reads one run file; what the sheet means rests on what the file says first."""

    root: Node
    path: str
    findings: Findings
    fields: Fields = field(init=False)
    overall: OverallReader = field(init=False)

    def __post_init__(self) -> None:
        self.fields = Fields(self.root, "the run file", RUN_KEYS, self.findings)
        self.overall = OverallReader(book=NameBook(self.findings), findings=self.findings)

    def run(self) -> Cultivation | None:
        fields = self.fields
        fields.need("run", "Begin the file with 'run: ' and a title.")
        kind_node = fields.need("kind", "Write batch, fed-batch or chemostat.")
        kind = self._word(kind_node, "kind", [item.value for item in CultivationKind])
        method = self._word(fields.get("method"), "method", [item.value for item in Method])
        if (own := fields.get("compounds")) is not None:
            self.overall.own_compounds(own)
        equation = self._equation(
            fields.need("equation", "Write substrate + ? oxygen -> ? product + ? biomass.")
        )
        self.overall.either_side(fields.get("either side"))
        sheet = self._sheet(fields.need("sheet", "Name the .csv or .xlsx file of the run."))
        basis = self.overall.basis
        if equation is None or basis is None:
            return None
        return _Parts(
            fields=fields,
            findings=self.findings,
            path=self.path,
            kind=CultivationKind(kind) if kind else None,
            method=Method(method) if method else Method.EXPONENTIAL,
            overall=self.overall,
            basis=basis,
            equation=equation,
            sheet=sheet,
        ).run()

    def _word(self, node: Node | None, key: str, allowed: list[str]) -> str | None:
        written = text(node, f"{key!r}", self.findings) if node else None
        if node is None or written is None:
            return None
        if written not in allowed:
            self.findings.add(
                "YN112",
                f"{key!r} {written!r} is not known",
                node.span,
                left="expected " + ", ".join(allowed[:-1]) + " or " + allowed[-1],
                hint=near(written, allowed),
            )
            return None
        return written

    def _equation(self, node: Node | None) -> Equation | None:
        """Overall equation, whose coefficients are what the run is to find."""
        equation = self.overall.equation(node)
        if equation is None or node is None:
            return None
        basis = equation.left[0]
        sides: list[tuple[Term, ...]] = []
        for side in (equation.left, equation.right):
            terms = list(side)
            for place, term in enumerate(side):
                if term is basis:
                    continue
                if isinstance(term.coefficient, WrittenNumber) and _has_number(term, node):
                    self.findings.add(
                        "YN142",
                        f"the coefficient of {term.name!r} is a number",
                        term.span or node.span,
                        hint="Write ? before it: the run is to find the number.",
                    )
                terms[place] = replace(term, coefficient=UNKNOWN)
            sides.append(tuple(terms))
        self.overall.coefficients.update(
            {name: replace(item, written=None) for name, item in self.overall.coefficients.items()}
        )
        return replace(equation, left=sides[0], right=sides[1])

    def _sheet(self, node: Node | None) -> Sheet | None:
        written = text(node, "'sheet'", self.findings) if node else None
        tab_node = self.fields.get("tab")
        tab = text(tab_node, "'tab'", self.findings) if tab_node else ""
        if node is None or written is None or tab is None:
            return None
        return read_sheet(
            str(Path(self.path).parent / written),
            self.findings,
            named_at=node.span,
            tab=tab,
            tab_at=tab_node.span if tab_node else None,
            known=(*self.overall.compounds, *library_names()),
        )


def _has_number(term: Term, node: Node) -> bool:
    """Whether a coefficient was written, since 1 and nothing are the same to an equation."""
    coefficient = term.coefficient
    if not isinstance(coefficient, WrittenNumber) or coefficient.text != "1":
        return True
    span = term.span or node.span
    line = node.lines[span.line - node.span.line] if node.lines else ""
    return line[span.column - 1 :].startswith("1 ")


@dataclass(slots=True, kw_only=True)
class _Parts:
    """Reads settings and columns, checks them against each other, puts the run together."""

    fields: Fields
    findings: Findings
    path: str
    kind: CultivationKind | None
    method: Method
    overall: OverallReader
    basis: Compound
    equation: Equation
    sheet: Sheet | None

    def run(self) -> Cultivation | None:
        fields, findings = self.fields, self.findings
        compounds = (self.basis, *self.overall.compounds.values())
        labels = LabelBook(
            compounds={item.name: item for item in compounds}, book=self.overall.book
        )
        errors = ErrorBook(findings=findings)
        values = SettingReader(findings=findings, errors=errors)
        settings = SettingsReader(values=values, labels=labels, findings=findings)
        labels.salts = settings.salts(fields.get("salts"))
        errors.read(fields.get("errors"), labels)
        calibration = settings.calibration(fields.get("dry weight"))
        feed = settings.contents(fields.get("feed"), Role.FEED, "'feed'")
        base = self._base(settings)
        window = settings.window(fields.get("window"))
        gas = settings.gas(fields.get("gas"))
        volume_node, volume_label = fields.get("volume"), labels.find("volume")
        volume = (
            values.labelled(volume_node, volume_label) if volume_node and volume_label else None
        )
        ignore_node = fields.get("ignore")
        ignored = text_list(ignore_node, "'ignore'", findings) if ignore_node else ()
        if self.sheet is None:
            return None
        columns = ColumnReader(
            sheet=self.sheet,
            labels=labels,
            errors=errors,
            findings=findings,
            kind=self.kind,
            ignored=ignored,
        ).read()
        if columns.understood:
            errors.unused()
        if self.kind is None:
            return None
        RunRules(
            fields=fields,
            sheet=self.sheet,
            columns=columns,
            findings=findings,
            kind=self.kind,
            method=self.method,
            window=window,
            volume=volume,
            calibration=calibration,
            feed=feed,
            base=base,
        ).check()
        GasRules(
            fields=fields, sheet=self.sheet, columns=columns, findings=findings, gas=gas
        ).check()
        if findings.refused:
            return None
        rows = self.sheet.rows
        return Cultivation(
            title=fields.text("run"),
            about=fields.text("about"),
            kind=self.kind,
            method=self.method,
            equation=self.equation,
            basis=self.basis,
            coefficients=tuple(self.overall.coefficients.values()),
            compounds=compounds,
            times=tuple(time for _, time in columns.times),
            states=columns.states or ("",) * len(rows),
            rows=tuple(row[0].span for row in rows),
            broth=tuple(column.series for column in columns.of(Role.BROTH)),
            calibration=calibration,
            volume=columns.one(Role.VOLUME) or volume,
            sampled=columns.one(Role.SAMPLED),
            dilution_rate=columns.one(Role.DILUTION_RATE),
            additions=self._additions(columns, feed, base),
            gas=_gas(columns, gas, len(rows)),
            window=window,
            file=self.path,
            sheet=self.sheet.file,
            span=self.fields.node.span,
        )

    def _base(self, settings: SettingsReader) -> tuple[Content, ...]:
        node = self.fields.get("base")
        if node is not None and node.kind is Kind.TEXT and node.text == "none":
            return ()
        return settings.contents(node, Role.BASE, "'base'")

    def _additions(
        self, columns: Columns, feed: Iterable[Content], base: Iterable[Content]
    ) -> tuple[Additions, ...]:
        found = (
            Additions(
                name="feed",
                contents=_contents(feed),
                contents_by_row=tuple(column.series for column in columns.of(Role.FEED)),
                added=columns.one(Role.FED),
                rate=columns.one(Role.FEED_RATE),
            ),
            Additions(
                name="base",
                contents=_contents(base),
                added=columns.one(Role.BASE_ADDED),
                rate=columns.one(Role.BASE_RATE),
            ),
        )
        return tuple(
            item
            for item in found
            if item.contents or item.contents_by_row or item.added or item.rate
        )


def _contents(items: Iterable[Content]) -> tuple[tuple[str, Reading], ...]:
    return tuple((item.label.compound, item.reading) for item in items)


def _gas(columns: Columns, settings: GasSettings | None, rows: int) -> Gas | None:
    """Gas of a run; a fraction that the run file gives is one and the same reading in every row."""
    if settings is None:
        return None
    shared = tuple(
        Series(
            compound=item.label.compound,
            readings=(item.reading,) * rows,
            heading=item.label.name,
            span=item.key.span,
        )
        for item in settings.inlet
    )
    return Gas(
        flow_in=columns.one(Role.FLOW_IN),
        flow_out=columns.one(Role.FLOW_OUT),
        inlet=(*(column.series for column in columns.of(Role.GAS_IN)), *shared),
        outlet=tuple(column.series for column in columns.of(Role.GAS_OUT)),
        normal_temperature=settings.temperature,
        normal_pressure=settings.pressure,
        moisture=settings.moisture,
        dissolved=settings.dissolved,
    )
