"""Findings: what is wrong or doubtful in a user's file, as values.

A finding has a stable code (its title, reason and way out stand in the catalogue), a severity, a
place, both sides where two things disagree, and a hint. Findings are gathered and shown together.
"""

from __future__ import annotations

import difflib
from dataclasses import dataclass, field
from enum import StrEnum
from typing import TYPE_CHECKING

from yieldnet.foundation.catalogue import CATALOGUE

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

__all__ = ["Finding", "Findings", "Severity", "SourceSpan", "TooManyFindings", "near"]


class Severity(StrEnum):
    """How much a finding weighs: an error refuses, a warning doubts, a note tells."""

    ERROR = "error"
    WARNING = "warning"
    NOTE = "note"


@dataclass(frozen=True, slots=True, kw_only=True)
class SourceSpan:
    """Place in a file.

    Parameters
    ----------
    file : str
        Path as the user gave it.
    line : int
        Line number, counted from 1 [-].
    column : int
        Column of the first character, counted from 1 [-].
    """

    file: str
    line: int
    column: int

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """One thing wrong or doubtful.

    Parameters
    ----------
    code : str
        Code in the catalogue, such as ``YN201``.
    message : str
        What is wrong, naming the thing.
    where : SourceSpan or None
        Place in the file; ``None`` for something that is not in a file.
    left, right : str
        The two sides that disagree; empty where there are none.
    hint : str
        The way out.
    severity : Severity
        Error unless said otherwise.
    """

    code: str
    message: str
    where: SourceSpan | None = None
    left: str = ""
    right: str = ""
    hint: str = ""
    severity: Severity = Severity.ERROR

    def __post_init__(self) -> None:
        if self.code not in CATALOGUE:
            raise KeyError(f"finding code {self.code!r} is not in the catalogue")

    def __str__(self) -> str:
        place = f"{self.where}: " if self.where else ""
        sides = ""
        if self.left or self.right:
            sides = (
                f" ({self.left}; {self.right})"
                if self.left and self.right
                else (f" ({self.left or self.right})")
            )
        hint = f". {self.hint}" if self.hint else ""
        return f"{place}{self.severity} {self.code}: {self.message}{sides}{hint}"


class TooManyFindings(Exception):
    """A file has so many mistakes that reading it further helps nobody."""


@dataclass(slots=True)
class Findings:
    """A list of findings in the making; readers and rules add to it.

    Parameters
    ----------
    items : list of Finding
        What was found so far.
    limit : int or None
        Most findings that are gathered; one more raises :class:`TooManyFindings` [-].
    """

    items: list[Finding] = field(default_factory=list)
    limit: int | None = None
    _seen: set[Finding] = field(default_factory=set)

    def __post_init__(self) -> None:
        self._seen.update(self.items)

    def add(
        self,
        code: str,
        message: str,
        where: SourceSpan | None = None,
        *,
        left: str = "",
        right: str = "",
        hint: str = "",
        severity: Severity = Severity.ERROR,
    ) -> None:
        """Add one finding unless the same one is there already."""
        finding = Finding(
            code=code,
            message=message,
            where=where,
            left=left,
            right=right,
            hint=hint,
            severity=severity,
        )
        self._take(finding)

    def extend(self, findings: Iterable[Finding]) -> None:
        """Add several findings, leaving out those already there."""
        for finding in findings:
            self._take(finding)

    def _take(self, finding: Finding) -> None:
        if finding in self._seen:
            return
        if self.limit is not None and len(self.items) >= self.limit:
            raise TooManyFindings
        self._seen.add(finding)
        self.items.append(finding)

    def __iter__(self) -> Iterator[Finding]:
        return iter(self.items)

    @property
    def refused(self) -> bool:
        """Whether any finding is an error."""
        return any(finding.severity is Severity.ERROR for finding in self.items)

    def sorted(self) -> tuple[Finding, ...]:
        """Findings in the order of file, line and column; those without a place last."""
        return tuple(
            sorted(
                self.items,
                key=lambda f: (
                    f.where is None,
                    (f.where.file, f.where.line, f.where.column) if f.where else ("", 0, 0),
                ),
            )
        )


def near(name: str, known: Iterable[str]) -> str:
    """Hint with the near matches of an unknown name.

    Parameters
    ----------
    name : str
        The name that is not known.
    known : iterable of str
        The names that are.

    Returns
    -------
    str
        ``did you mean 'ethanol'?``, or an empty text if nothing comes near.

    Examples
    --------
    >>> near("ethanoll", ["ethanol", "water"])
    "Did you mean 'ethanol'?"
    """
    folded = {item.casefold(): item for item in known}
    close = difflib.get_close_matches(name.casefold(), folded, n=3, cutoff=0.6)
    if not close:
        return ""
    return "Did you mean " + " or ".join(f"'{folded[item]}'" for item in close) + "?"
