"""Exceptions for when yieldnet cannot go on.

What is wrong in a user's file is a :class:`~yieldnet.foundation.findings.Finding`; these exceptions
carry findings or a reason to the entry points, which catch :class:`YieldnetError` only.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.foundation.findings import Finding

__all__ = ["InputError", "SolveError", "TextError", "YieldnetError"]


class YieldnetError(Exception):
    """Anything yieldnet raises on purpose."""


class InputError(YieldnetError, ValueError):
    """A file or an option cannot be used; carries every finding of the run.

    Parameters
    ----------
    findings : iterable of Finding
        What is wrong, in the order of the file.
    """

    def __init__(self, findings: Iterable[Finding]) -> None:
        self.findings: tuple[Finding, ...] = tuple(findings)
        super().__init__("\n".join(str(finding) for finding in self.findings))


class SolveError(YieldnetError):
    """A number was asked of an answer that has none, or no engine can solve the problem."""


class TextError(ValueError):
    """A text that cannot be read as what it should be; whoever reads the file makes it a finding.

    Parameters
    ----------
    reason : str
        What is wrong.
    hint : str
        The way out.
    code : str
        Finding code that fits; empty for the usual one of the class.
    """

    usual_code = ""

    def __init__(self, reason: str, hint: str = "", code: str = "") -> None:
        super().__init__(reason)
        self.reason = reason
        self.hint = hint
        self.code = code or self.usual_code
