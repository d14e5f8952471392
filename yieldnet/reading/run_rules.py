"""What all rules over a run share: the parts they look at and the ways to say what is wrong."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.reading.fields import Fields
    from yieldnet.reading.run_columns import Columns
    from yieldnet.reading.run_labels import Role
    from yieldnet.reading.run_settings import Content
    from yieldnet.reading.sheet import Sheet

__all__ = ["Rules"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Rules:
    """Rules over one run.

    Parameters
    ----------
    fields : Fields
        The run file.
    sheet : Sheet
        The grid.
    columns : Columns
        Its columns.
    findings : Findings
        Receives what is wrong.
    """

    fields: Fields
    sheet: Sheet
    columns: Columns
    findings: Findings

    @property
    def top(self) -> SourceSpan:
        """Place of the headings."""
        return self.sheet.headings[0].span

    def missing(self, what: str, hint: str, where: SourceSpan | None = None) -> None:
        """Say that the run lacks something it needs."""
        self.findings.add("YN139", what, where or self.top, hint=hint)

    def in_vain(self, key: str, why: str, hint: str) -> None:
        """Say that a setting, if it is there, has no use."""
        if self.fields.get(key) is not None:
            self.findings.add("YN145", f"{key!r} {why}", self.fields.span(key), hint=hint)

    def twice(self, contents: tuple[Content, ...], role: Role, name: str) -> None:
        """Say which values stand in the run file and in the sheet."""
        for content in contents:
            column = self.columns.found.get((role, content.label.compound))
            if column is not None:
                self.findings.add(
                    "YN144",
                    f"{content.label.compound!r} stands under {name!r} and in the sheet",
                    content.key.span,
                    left=f"column {column.heading.text!r}",
                    hint="Keep it in one of them.",
                )
