"""Candidates: the reactions of a candidate file merged into the network of a case, switched off.

A group of the file is one candidate. Names are matched to those of the network through the compound
library; coefficients are numbers by then. What cannot be added is told with the reason.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from yieldnet.audit.rules import closure, negative_coefficients, parameter_ranges
from yieldnet.chemistry.library import find_compound
from yieldnet.foundation.exact import WrittenNumber
from yieldnet.foundation.findings import Finding, Findings, Severity
from yieldnet.model.binding import BoundReaction, bind, composition
from yieldnet.model.equation import Equation, Term
from yieldnet.model.network import Compound, Reaction

if TYPE_CHECKING:
    from collections.abc import Collection, Iterable
    from fractions import Fraction

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.network import Network

__all__ = ["Idea", "Merged", "merge"]

_Scaled = tuple[tuple[str, "Fraction"], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Idea:
    """One candidate: a reaction of the file, or a group of them.

    Parameters
    ----------
    name : str
        The group, or the reaction without one.
    reactions : tuple of str
        Reactions that are added, as named in the extended network.
    equations : tuple of str
        Their equations in numbers.
    undoes : tuple of str
        Reactions that the network has and the case switches off, and that this would bring back.
    needs : tuple of str
        New compounds that only other candidates make or use; empty if it stands alone.
    about, source : str
        As written, each once.
    """

    name: str
    reactions: tuple[str, ...]
    equations: tuple[str, ...]
    undoes: tuple[str, ...] = ()
    needs: tuple[str, ...] = ()
    about: str = ""
    source: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Merged:
    """A network with all applicable candidates in it.

    Parameters
    ----------
    bound : BoundNetwork
        The extended network in numbers.
    ideas : tuple of Idea
        Candidates that can be added, in the order of the file.
    already_there : tuple of str
        Candidates that the network has.
    not_applicable : tuple of (str, str)
        Candidates that this network cannot take, with the reason.
    refused : tuple of str
        Candidates that are wrong in themselves.
    findings : tuple of Finding
        All of this with place and way out.
    """

    bound: BoundNetwork
    ideas: tuple[Idea, ...]
    already_there: tuple[str, ...]
    not_applicable: tuple[tuple[str, str], ...]
    refused: tuple[str, ...]
    findings: tuple[Finding, ...]


@dataclass(slots=True)
class _Merger:
    """Candidates on the way into a network."""

    host: BoundNetwork
    off: frozenset[str]
    file: Network
    findings: Findings

    def merged(self) -> Merged:
        """All candidates merged."""
        self._left_out()
        already: list[str] = []
        refused: list[str] = []
        not_applicable: dict[str, str] = {}
        parts: dict[str, list[tuple[Reaction, BoundReaction]]] = {}
        undoes: dict[str, list[str]] = {}
        for name, members in self._units().items():
            bound = self._numbers(name, members)
            if bound is None:
                refused.append(name)
                continue
            renamed, reason = self._renamed(bound)
            if reason:
                not_applicable[name] = reason
                continue
            pairs = list(zip(members, renamed, strict=True))
            new = [(item, known) for item, known in pairs if self._twin(known, on=True) is None]
            if not new:
                already.append(name)
                self._already(name, members[0], self._twin(renamed[0], on=True) or "")
                continue
            parts[name] = new
            twins = (self._twin(known, on=False) for _, known in new)
            undoes[name] = [twin for twin in twins if twin is not None]
        needs = self._dead_ends(parts)
        for name, words in self._beyond_help(parts).items():
            not_applicable[name] = words
            parts.pop(name)
        self._tell(not_applicable, parts, needs)
        ideas: list[Idea] = []
        added: list[tuple[Reaction, BoundReaction]] = []
        taken = {item.name for item in self.host.reactions} | set(self.host.network.groups())
        for name, new in parts.items():
            named = []
            for item, known in new:
                own = item.name if item.name not in taken else f"{item.name} (added)"
                named.append((item, replace(known, name=own, group="")))
            written = [_written(item, known) for item, known in named]
            added += [(item, known) for item, (_, known) in zip(written, named, strict=True)]
            ideas.append(
                Idea(
                    name=name,
                    reactions=tuple(known.name for _, known in named),
                    equations=tuple(str(item.equation) for item in written),
                    undoes=tuple(dict.fromkeys(undoes[name])),
                    needs=needs.get(name, ()),
                    about=_joined(item.about for item, _ in new),
                    source=_joined(item.source for item, _ in new),
                )
            )
        return Merged(
            bound=self._extended(added),
            ideas=tuple(ideas),
            already_there=tuple(already),
            not_applicable=tuple(not_applicable.items()),
            refused=tuple(refused),
            findings=self.findings.sorted(),
        )

    def _units(self) -> dict[str, list[Reaction]]:
        units: dict[str, list[Reaction]] = {}
        for item in self.file.reactions:
            units.setdefault(item.group or item.name, []).append(item)
        return units

    def _left_out(self) -> None:
        for name, there in (
            ("growth", self.file.growth is not None),
            ("maintenance", self.file.maintenance is not None),
            ("strains", bool(self.file.strains)),
            ("parameter sets", bool(self.file.parameter_sets)),
            ("meant for", self.file.meant_for is not None),
        ):
            if there:
                self.findings.add(
                    "YN708",
                    f"'{name}' of the candidate file is not added",
                    self.file.span,
                    hint="Only its reactions are candidates.",
                    severity=Severity.NOTE,
                )

    def _numbers(self, name: str, members: list[Reaction]) -> list[BoundReaction] | None:
        """Coefficients of a candidate, or ``None`` with a finding for each fault."""
        theirs = {item.name for item in self.file.parameters}
        shared = {
            item.name: item.value for item in self.host.network.parameters if item.name in theirs
        }
        alone = replace(self.file, reactions=tuple(members), growth=None)
        bound, doubts = bind(alone, shared)
        for rule in (closure, negative_coefficients):
            doubts.extend(rule(bound))
        for item in doubts.items:
            wrong = item.severity is Severity.ERROR
            self.findings.add(
                "YN708" if wrong else item.code,
                f"candidate {name!r} cannot be added: {item.message}" if wrong else item.message,
                item.where,
                left=item.left,
                right=item.right,
                hint=item.hint,
                severity=item.severity,
            )
        return None if doubts.refused else list(bound.reactions)

    def _renamed(self, reactions: list[BoundReaction]) -> tuple[list[BoundReaction], str]:
        """Reactions with the names of the network, and why they cannot be added, if so."""
        here = dict(self.host.formulas)
        entries = {entry.name: name for name in here if (entry := find_compound(name)) is not None}
        theirs = {item.name: item for item in self.file.carriers}
        ours = {item.name: item for item in self.host.network.carriers}
        formulas = {item.name: item.formula for item in self.file.compounds}
        names: dict[str, str] = {}
        for reaction in reactions:
            for word, _ in reaction.coefficients:
                if word in theirs:
                    if word not in ours:
                        return [], f"the network has no carrier {word!r}"
                    same = composition(ours[word].formula) == composition(theirs[word].formula)
                    if ours[word].kind is not theirs[word].kind or not same:
                        return [], f"the carrier {word!r} carries something else in the network"
                    names[word] = word
                    continue
                entry = find_compound(word)
                known = word if word in here or entry is None else entries.get(entry.name, word)
                if known in ours:
                    return [], f"{known!r} is a carrier in the network"
                if known in here and composition(here[known]) != composition(formulas[word]):
                    return [], (
                        f"{known!r} is {here[known]} in the network and {formulas[word]} here"
                    )
                names[word] = known
        return [_with_names(item, names) for item in reactions], ""

    def _twin(self, reaction: BoundReaction, on: bool) -> str | None:
        """Reaction of the network that can do all that this one can, running or switched off."""
        wanted, ways = _scaled(reaction)
        for item in self.host.reactions:
            if (item.name in self.off) is not on:
                scaled, able = _scaled(item)
                if scaled == wanted and ways <= able:
                    return item.name
        return None

    def _already(self, name: str, first: Reaction, twin: str) -> None:
        self.findings.add(
            "YN704",
            f"candidate {name!r} is in the network already",
            first.span,
            left=f"there {twin!r}",
            severity=Severity.NOTE,
        )

    def _dead_ends(
        self, parts: dict[str, list[tuple[Reaction, BoundReaction]]]
    ) -> dict[str, tuple[str, ...]]:
        """New compounds of each candidate that nothing else in the network makes or uses."""
        return {
            name: stuck
            for name, new in parts.items()
            if (stuck := _one_sided(self.host, [known for _, known in new]))
        }

    def _beyond_help(
        self, parts: dict[str, list[tuple[Reaction, BoundReaction]]]
    ) -> dict[str, str]:
        """Candidates that stand still even with all others in place."""
        left = dict(parts)
        hopeless: dict[str, str] = {}
        while True:
            everything = [known for new in left.values() for _, known in new]
            stuck = set(_one_sided(self.host, everything))
            gone = {
                name: sorted(stuck & {word for _, item in new for word, _ in item.coefficients})
                for name, new in left.items()
            }
            gone = {name: words for name, words in gone.items() if words}
            if not gone:
                return hopeless
            for name, words in gone.items():
                listed = " and ".join(map(repr, words))
                hopeless[name] = f"nothing else in the network makes or uses {listed}"
                left.pop(name)

    def _tell(
        self,
        not_applicable: dict[str, str],
        kept: dict[str, list[tuple[Reaction, BoundReaction]]],
        needs: dict[str, tuple[str, ...]],
    ) -> None:
        spans = {name: members[0].span for name, members in self._units().items()}
        for name, reason in not_applicable.items():
            self.findings.add(
                "YN708",
                f"candidate {name!r} cannot be added here: {reason}",
                spans[name],
                severity=Severity.NOTE,
            )
        for name, words in needs.items():
            if name in kept:
                listed = " and ".join(map(repr, words))
                self.findings.add(
                    "YN708",
                    f"candidate {name!r} does nothing alone: only other candidates make or use"
                    f" {listed}",
                    spans[name],
                    hint="Pairs are tried with --pairs.",
                    severity=Severity.NOTE,
                )

    def _extended(self, added: list[tuple[Reaction, BoundReaction]]) -> BoundNetwork:
        network = self.host.network
        known = {name for name, _ in self.host.formulas}
        formulas = {item.name: item.formula for item in self.file.compounds}
        new = dict.fromkeys(
            name for _, item in added for name, _ in item.coefficients if name not in known
        )
        compounds = tuple(Compound(name=name, formula=formulas[name]) for name in new)
        return replace(
            self.host,
            network=replace(
                network,
                compounds=(*network.compounds, *compounds),
                reactions=(*network.reactions, *(item for item, _ in added)),
            ),
            reactions=(*self.host.reactions, *(known for _, known in added)),
            formulas=(*self.host.formulas, *((item.name, item.formula) for item in compounds)),
        )


def merge(host: BoundNetwork, off: Collection[str], candidates: Network) -> Merged:
    """Candidates merged into a network.

    Parameters
    ----------
    host : BoundNetwork
        The network in numbers.
    off : collection of str
        Its reactions that the case switches off; a candidate may bring them back.
    candidates : Network
        The candidate file.

    Returns
    -------
    Merged
        The extended network, the candidates that can be added, and what cannot.

    Notes
    -----
    A parameter of the file that the network has too takes the value of the network. A candidate is
    in the network already if a reaction that runs can do the same, up to scale, in every direction;
    a one-way reaction does not stand in the way of the opposite one.
    """
    findings = Findings()
    findings.extend(parameter_ranges(bind(replace(candidates, reactions=(), growth=None))[0]))
    return _Merger(host, frozenset(off), candidates, findings).merged()


def _scaled(reaction: BoundReaction) -> tuple[_Scaled, frozenset[bool]]:
    """Coefficients up to scale, and the directions in which they can run."""
    ordered = sorted(reaction.coefficients)
    if not ordered:
        return (), frozenset()
    first = ordered[0][1]
    forward = first > 0
    ways = {forward, not forward} if reaction.reversible else {forward}
    return tuple((name, amount / first) for name, amount in ordered), frozenset(ways)


def _one_sided(host: BoundNetwork, added: list[BoundReaction]) -> tuple[str, ...]:
    """New compounds that cannot be both made and used by two different reactions."""
    known = {name for name, _ in host.formulas}
    makers: dict[str, set[int]] = {}
    users: dict[str, set[int]] = {}
    for place, reaction in enumerate(added):
        for name, amount in reaction.coefficients:
            if name in known:
                continue
            makers.setdefault(name, set())
            users.setdefault(name, set())
            if amount > 0 or reaction.reversible:
                makers[name].add(place)
            if amount < 0 or reaction.reversible:
                users[name].add(place)
    return tuple(
        name
        for name in makers
        if not makers[name] or not users[name] or len(makers[name] | users[name]) < 2
    )


def _with_names(reaction: BoundReaction, names: dict[str, str]) -> BoundReaction:
    return replace(
        reaction,
        coefficients=tuple((names[word], amount) for word, amount in reaction.coefficients),
        written=tuple(
            (sign, names.get(word, word), amount, new)
            for sign, word, amount, new in reaction.written
        ),
    )


def _written(item: Reaction, known: BoundReaction) -> Reaction:
    """The reaction as the extended network holds it: numbers, and the names of the network."""
    sides = {
        sign: tuple(
            Term(name=word, coefficient=WrittenNumber(amount, str(amount)))
            for place, word, amount, _ in known.written
            if place == sign and amount
        )
        for sign in (-1, 1)
    }
    return replace(
        item,
        name=known.name,
        group="",
        equation=Equation(left=sides[-1], right=sides[1], reversible=known.reversible),
    )


def _joined(texts: Iterable[str]) -> str:
    return "; ".join(dict.fromkeys(" ".join(text.split()) for text in texts if text))
