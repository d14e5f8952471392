"""Rules over a written network and its numbers; each returns findings and looks at one thing."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import compound_entries
from yieldnet.foundation.exact import decimal_text
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.binding import composition
from yieldnet.model.expression import Expression
from yieldnet.model.network import BIOMASS, GROWTH, CarrierKind, Direction

if TYPE_CHECKING:
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.binding import BoundNetwork, BoundReaction

__all__ = [
    "closure",
    "duplicates",
    "growth_energy",
    "negative_coefficients",
    "one_sided_compounds",
    "parameter_ranges",
    "untouched_crossing",
    "unused_parameters",
]


def _amount(value: Fraction) -> str:
    return decimal_text(value) or f"{float(value):.6g}"


def closure(bound: BoundNetwork) -> Findings:
    """Reactions that do not close, with the failing elements and the ``?`` that would mend them."""
    findings = Findings()
    for reaction in bound.reactions:
        residual = bound.residual(reaction)
        if not residual:
            continue
        slack = dict(reaction.slack)
        within = reaction.name == GROWTH and all(
            abs(value) <= slack.get(element, Fraction(0)) for element, value in residual.items()
        )
        left, right = _sides(bound, reaction, residual)
        off = ", ".join(
            f"{_amount(abs(value))} {element} too {'many' if value > 0 else 'few'}"
            for element, value in residual.items()
        )
        if within:
            findings.add(
                "YN405",
                f"growth closes only within its written digits: {off} on the right per mol biomass",
                reaction.span,
                left=left,
                right=right,
                hint="The residual is charged to biomass everywhere; ? terms would close it.",
                severity=Severity.WARNING,
            )
        else:
            findings.add(
                "YN401",
                f"{reaction.name!r} does not close: {off} on the right",
                reaction.span,
                left=left,
                right=right,
                hint=_mend(bound, reaction, residual),
            )
    return findings


def _sides(
    bound: BoundNetwork, reaction: BoundReaction, residual: dict[str, Fraction]
) -> tuple[str, str]:
    """What stands left and right of each failing element."""
    formulas = dict(bound.formulas)
    totals = {-1: dict.fromkeys(residual, Fraction(0)), 1: dict.fromkeys(residual, Fraction(0))}
    for sign, name, amount, _ in reaction.written:
        for element, atoms in composition(formulas[name]).items():
            if element in residual:
                totals[sign][element] += amount * atoms
    texts = [
        " ".join(f"{_amount(value)} {element}" for element, value in totals[sign].items())
        for sign in (-1, 1)
    ]
    return f"left {texts[0]}", f"right {texts[1]}"


def _mend(bound: BoundNetwork, reaction: BoundReaction, residual: dict[str, Fraction]) -> str:
    """The single compound that would close the balance, added or in place of another one."""
    own = {name: composition(formula) for name, formula in bound.formulas if name != BIOMASS}
    library = {
        item.name: composition(item.formula)
        for item in compound_entries()
        if item.kind == "crossing" and item.name not in own
    }
    for known, where in ((own, ""), (library, ", which the network would have to know")):
        found = [
            _change(reaction, name, amount)
            for name, parts in known.items()
            if (amount := _multiple(residual, parts))
        ]
        found += _exchanges(bound, reaction, residual, known)
        if found:
            return f"It would close with {' or '.join(found[:3])}{where}."
    return "No single compound would close it: correct a coefficient or a formula."


def _change(reaction: BoundReaction, name: str, amount: Fraction) -> str:
    """An amount more on the side where it is missing, or less where the compound stands."""
    side, other = ("left", "right") if amount > 0 else ("right", "left")
    stands = {place for place, item, _, _ in reaction.written if item == name}
    there = -1 if other == "left" else 1
    if there in stands:
        return f"{_amount(abs(amount))} {name} less on the {other}"
    return f"{_amount(abs(amount))} {name} more on the {side}"


def _multiple(residual: dict[str, Fraction], parts: dict[str, Fraction]) -> Fraction | None:
    """How many times a composition makes up a residual; ``None`` if it does not."""
    if not parts or set(parts) != set(residual):
        return None
    ratios = {residual[element] / parts[element] for element in parts}
    return ratios.pop() if len(ratios) == 1 else None


def _exchanges(
    bound: BoundNetwork,
    reaction: BoundReaction,
    residual: dict[str, Fraction],
    known: dict[str, dict[str, Fraction]],
) -> list[str]:
    """Compounds that would close the balance in place of one that is written."""
    formulas = dict(bound.formulas)
    found = []
    for sign, name, amount, _ in reaction.written:
        if not amount:
            continue
        wanted = composition(formulas[name])
        for element, excess in residual.items():
            wanted[element] = wanted.get(element, Fraction(0)) - sign * excess / amount
        wanted = {element: atoms for element, atoms in wanted.items() if atoms}
        number = "" if amount == 1 else f"{_amount(amount)} "
        found += [
            f"{number}{other} in place of {number}{name}"
            for other, parts in known.items()
            if wanted and parts == wanted
        ]
    return found


def one_sided_compounds(bound: BoundNetwork) -> Findings:
    """Inside compounds that reactions only make or only use."""
    findings = Findings()
    crossing = dict(bound.network.crossing)
    carriers = {item.name: item.kind for item in bound.network.carriers}
    for name, _ in bound.formulas:
        if name in crossing:
            continue
        made = used = False
        for reaction in bound.reactions:
            amount = reaction.coefficient(name)
            made |= amount > 0 or (reaction.reversible and amount < 0)
            used |= amount < 0 or (reaction.reversible and amount > 0)
        if made and not used and carriers.get(name) is CarrierKind.ENERGY:
            continue
        if made != used:
            spans = [
                item.span
                for item in bound.reactions
                if item.coefficient(name) and item.span is not None
            ]
            findings.add(
                "YN406",
                f"{name!r} is only {'made' if made else 'used'}, so its reactions stand still",
                spans[0] if spans else None,
                hint=f"Add a reaction that {'uses' if made else 'makes'} it, or let it cross.",
                severity=Severity.WARNING,
            )
        elif not made:
            findings.add(
                "YN406",
                f"{name!r} takes part in no reaction",
                _definition(bound, name),
                hint="Delete it, or write the reaction that is missing.",
                severity=Severity.WARNING,
            )
    return findings


def _definition(bound: BoundNetwork, name: str) -> SourceSpan | None:
    compound = bound.network.compound(name)
    if compound is not None:
        return compound.span
    return next((item.span for item in bound.network.carriers if item.name == name), None)


def untouched_crossing(bound: BoundNetwork) -> Findings:
    """Crossing compounds that no reaction makes or uses, the way they may cross."""
    findings = Findings()
    for name, direction in bound.network.crossing:
        amounts = [
            (item.coefficient(name), item.reversible)
            for item in bound.reactions
            if item.coefficient(name)
        ]
        made = any(amount > 0 or both for amount, both in amounts)
        used = any(amount < 0 or both for amount, both in amounts)
        if not amounts:
            reason = f"{name!r} may cross, and no reaction touches it"
        elif direction is Direction.PRODUCED and not made:
            reason = f"{name!r} may leave the cell, and no reaction makes it"
        elif direction is Direction.CONSUMED and not used:
            reason = f"{name!r} may enter the cell, and no reaction uses it"
        else:
            continue
        findings.add(
            "YN410",
            reason,
            dict(bound.network.crossing_spans).get(name, bound.network.span),
            hint="Write its reaction, or take it out of 'crossing'.",
            severity=Severity.WARNING,
        )
    return findings


def duplicates(bound: BoundNetwork) -> Findings:
    """Reactions that do the same, up to direction and scale."""
    findings = Findings()
    first: dict[tuple[tuple[str, Fraction], ...], BoundReaction] = {}
    for reaction in bound.reactions:
        if not reaction.coefficients:
            continue
        ordered = sorted(reaction.coefficients)
        scaled = tuple((name, amount / ordered[0][1]) for name, amount in ordered)
        twin = first.setdefault(scaled, reaction)
        if twin is reaction:
            continue
        same_way = (twin.coefficients[0][1] > 0) == (
            reaction.coefficient(twin.coefficients[0][0]) > 0
        )
        if not same_way and not (twin.reversible or reaction.reversible):
            # The two directions of one step, each written as a reaction: a common way to give
            # them different names, and no duplicate.
            continue
        together = bool(reaction.group) and reaction.group == twin.group
        findings.add(
            "YN409",
            f"{reaction.name!r} does the same as {twin.name!r}",
            reaction.span,
            left=f"{twin.name!r} at line {twin.span.line if twin.span else '?'}",
            right=f"{reaction.name!r} at line {reaction.span.line if reaction.span else '?'}",
            hint="Both fall with their group." if together else "Keep one, or give both one group.",
            severity=Severity.NOTE if together else Severity.WARNING,
        )
    return findings


def negative_coefficients(bound: BoundNetwork) -> Findings:
    """Coefficients that are a bare parameter with a negative value, such as a negative P/O."""
    findings = Findings()
    network = bound.network
    values = {item.name: item.value for item in network.parameters}
    places = {item.name: item.span for item in network.parameters}
    equations = [(item.name, item.equation, item.span) for item in network.reactions]
    if network.growth is not None:
        equations.append((GROWTH, network.growth.equation, network.growth.span))
    for label, equation, span in equations:
        for _, term in equation.terms():
            if not isinstance(term.coefficient, Expression):
                continue
            names = term.coefficient.names()
            if str(term.coefficient) != f"({names[0] if names else ''})":
                continue
            if values.get(names[0], Fraction(0)) < 0:
                findings.add(
                    "YN210",
                    f"parameter {names[0]!r} is {values[names[0]]}, so the coefficient of"
                    f" {term.name!r} in {label!r} is negative",
                    places[names[0]] or term.span or span,
                    hint="Give it a value of 0 or more, or move the compound to the other side.",
                )
    return findings


def unused_parameters(bound: BoundNetwork) -> Findings:
    """Parameters that no coefficient uses."""
    findings = Findings()
    network = bound.network
    equations = [item.equation for item in network.reactions]
    equations += [network.growth.equation] if network.growth else []
    used = {
        name
        for equation in equations
        for _, term in equation.terms()
        if isinstance(term.coefficient, Expression)
        for name in term.coefficient.names()
    }
    for item in network.parameters:
        if item.name not in used:
            findings.add(
                "YN411",
                f"parameter {item.name!r} is used by no coefficient",
                item.span,
                hint="Use it in an equation, or delete it.",
                severity=Severity.WARNING,
            )
    return findings


def parameter_ranges(bound: BoundNetwork) -> Findings:
    """Parameters whose value lies outside their own low and high."""
    findings = Findings()
    for item in bound.network.parameters:
        below = item.low is not None and item.value < item.low
        above = item.high is not None and item.value > item.high
        if below or above:
            end = item.low if below else item.high
            assert end is not None
            findings.add(
                "YN412",
                f"parameter {item.name!r} is outside its own range",
                item.span,
                left=f"value {_amount(item.value)}",
                right=f"{'low' if below else 'high'} {_amount(end)} {item.unit}".strip(),
                hint="Correct the value, or the range if there is a reason for it.",
                severity=Severity.WARNING,
            )
    return findings


def growth_energy(bound: BoundNetwork) -> Findings:
    """What growth costs in ATP, per C-mol, per g, and as g biomass per mol ATP."""
    findings = Findings()
    growth = bound.reaction(GROWTH)
    if growth is None or bound.network.growth is None:
        return findings
    biomass = bound.network.growth.biomass
    mass, carbon = biomass.weight.molar_mass, biomass.formula["C"]
    for item in bound.network.carriers:
        cost = -growth.coefficient(item.name)
        if item.kind is not CarrierKind.ENERGY or cost <= 0 or not mass or not carbon:
            continue
        findings.add(
            "YN416",
            f"growth spends {float(cost / carbon):.3g} mol {item.name} per C-mol biomass,"
            f" {float(1000 * cost / mass):.3g} mmol per g dry weight",
            growth.span,
            left=f"that is {float(mass / cost):.3g} g biomass per mol {item.name} (Y_ATP)",
            hint="Published Y_ATP: 10.5 on average, 28.8 at most (Bauchop and Elsden 1960;"
            " Stouthamer 1973).",
            severity=Severity.NOTE,
        )
    return findings
