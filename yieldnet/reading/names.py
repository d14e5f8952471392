"""One name per compound: own names first, then the library by name or synonym."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import find_compound, library_names
from yieldnet.foundation.findings import near
from yieldnet.model.network import Compound

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.foundation.findings import Findings, SourceSpan

__all__ = ["NameBook"]


@dataclass(slots=True)
class NameBook:
    """Names that a file may use, and how it spelled them.

    Parameters
    ----------
    findings : Findings
        Receives unknown names and double spellings.
    own : dict of str to Compound or None
        Names the file (or its network) defines; ``None`` for a carrier.
    use_library : bool
        Whether a name that is not defined may come from the library.
    accept_all : bool
        Whether unknown names pass silently, because what would define them could not be read.
    """

    findings: Findings
    own: dict[str, Compound | None] = field(default_factory=dict)
    use_library: bool = True
    accept_all: bool = False
    taken: dict[str, Compound] = field(default_factory=dict)
    _spelling: dict[str, tuple[str, SourceSpan]] = field(default_factory=dict)

    def resolve(self, word: str, span: SourceSpan) -> str | None:
        """Name used everywhere for a word, or ``None`` with a finding."""
        name = self._lookup(word)
        if name is None:
            if self.accept_all:
                return word
            entry = None if self.use_library else find_compound(word)
            if entry is not None:
                self.findings.add(
                    "YN301",
                    f"compound {word!r} is in the library, but not in this network",
                    span,
                    hint="Add reactions with it to the network, or leave it out.",
                )
                return None
            self.findings.add(
                "YN301",
                f"compound {word!r} is not known",
                span,
                hint=near(word, self._candidates()) or "Define it with its formula, or rename it.",
            )
            return None
        spelled, first = self._spelling.setdefault(name, (word, span))
        if spelled != word:
            self.findings.add(
                "YN303",
                f"{name!r} is written under two names",
                span,
                left=f"{spelled!r} at line {first.line}",
                right=f"{word!r} at line {span.line}",
                hint="Use one of them throughout the file.",
            )
        return name

    def _lookup(self, word: str) -> str | None:
        if word in self.own:
            return word
        entry = find_compound(word)
        if entry is None:
            return None
        for name in self.own:
            if find_compound(name) is entry:
                return name
        if not self.use_library:
            return None
        if entry.name not in self.taken:
            self.taken[entry.name] = Compound(
                name=entry.name, formula=entry.formula, about=entry.note
            )
        return entry.name

    def _candidates(self) -> Iterable[str]:
        return (*self.own, *(library_names() if self.use_library else ()))
