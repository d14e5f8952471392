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
    inside : frozenset of str
        Carriers of the network, which a case cannot list.
    accept_all : bool
        Whether unknown names pass silently, because what would define them could not be read.
    """

    findings: Findings
    own: dict[str, Compound | None] = field(default_factory=dict)
    use_library: bool = True
    accept_all: bool = False
    inside: frozenset[str] = frozenset()
    taken: dict[str, Compound] = field(default_factory=dict)
    _told: set[tuple[str, str]] = field(default_factory=set)
    _spelling: dict[str, tuple[str, SourceSpan]] = field(default_factory=dict)

    def define(self, name: str, compound: Compound | None, span: SourceSpan) -> None:
        """Take a name that the file defines; its spelling counts from there."""
        self.own[name] = compound
        self._spelling.setdefault(name, (name, span))

    def twin(self, name: str) -> str | None:
        """Other name of the file for the same library compound, if there is one."""
        entry = find_compound(name)
        if entry is None:
            return None
        return next(
            (other for other in self.own if other != name and find_compound(other) is entry), None
        )

    def resolve(self, word: str, span: SourceSpan) -> str | None:
        """Name used everywhere for a word, or ``None`` with a finding."""
        name = self._lookup(word)
        if name is None:
            if self.accept_all:
                return word
            if word in self.inside:
                self.findings.add(
                    "YN505",
                    f"{word!r} is a carrier and cannot cross the cell boundary",
                    span,
                    hint="Leave it out; 'aim: most ATP' asks for what is left over.",
                )
                return None
            if not self.use_library and find_compound(word) is not None:
                self.findings.add(
                    "YN505",
                    f"{word!r} is in the library, but not in this network",
                    span,
                    hint=near(word, self.own) or "Add reactions with it to the network.",
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
        if spelled != word and (name, word) not in self._told:
            self._told.add((name, word))
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
