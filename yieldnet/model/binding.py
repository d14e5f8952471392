"""From a written network to numbers: parameters put in, every ``?`` solved, exactly.

The ``?`` of a reaction follow from that reaction's own element (and charge) balances. A row of the
balance that no ``?`` can change is left for the closure rule of ``audit``.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import WrittenNumber, eliminate
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.equation import Unknown
from yieldnet.model.expression import Expression
from yieldnet.model.network import BIOMASS, GROWTH

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.chemistry.formula import Formula
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.equation import Equation, Term
    from yieldnet.model.network import Network

__all__ = ["CHARGE", "BoundNetwork", "BoundReaction", "bind", "composition"]

CHARGE = "charge"
"""Name of the charge balance among the element balances."""


@dataclass(frozen=True, slots=True, kw_only=True)
class BoundReaction:
    """A reaction whose coefficients are all numbers.

    Parameters
    ----------
    name, group : str
        As in the network.
    coefficients : tuple of (str, Fraction)
        Net coefficient of each compound, production positive; growth makes 1 mol biomass [mol].
    reversible : bool
        Whether it may run backwards.
    written : tuple of (int, str, Fraction, bool)
        Side (-1, +1), compound, number before netting, and whether it was solved from a ``?``.
    slack : tuple of (str, Fraction)
        How far each element may be off within the digits written; only growth has any [mol].
    span : SourceSpan or None
        Where the reaction was written.
    """

    name: str
    coefficients: tuple[tuple[str, Fraction], ...]
    reversible: bool
    group: str = ""
    written: tuple[tuple[int, str, Fraction, bool], ...] = ()
    slack: tuple[tuple[str, Fraction], ...] = ()
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    def coefficient(self, name: str) -> Fraction:
        """Net coefficient of a compound; 0 if it takes no part [mol]."""
        return dict(self.coefficients).get(name, Fraction(0))


@dataclass(frozen=True, slots=True, kw_only=True)
class BoundNetwork:
    """A network whose coefficients are all numbers.

    Parameters
    ----------
    network : Network
        What it came from, the parameters as used.
    reactions : tuple of BoundReaction
        In written order; growth, if any, last.
    formulas : tuple of (str, Formula)
        Formula of each compound and carrier.
    """

    network: Network
    reactions: tuple[BoundReaction, ...]
    formulas: tuple[tuple[str, Formula], ...]

    def residual(self, reaction: BoundReaction) -> dict[str, Fraction]:
        """Elements (and charge) made from nothing by one turn of a reaction; empty if it closes."""
        formulas = dict(self.formulas)
        total: dict[str, Fraction] = {}
        for name, amount in reaction.coefficients:
            for element, atoms in composition(formulas[name]).items():
                total[element] = total.get(element, Fraction(0)) + amount * atoms
        return {element: value for element, value in total.items() if value}

    def growth_residual(self) -> dict[str, Fraction]:
        """Residual of growth, which may keep one within its written digits."""
        growth = self.reaction(GROWTH)
        return self.residual(growth) if growth is not None else {}

    def reaction(self, name: str) -> BoundReaction | None:
        """Reaction by name."""
        return next((item for item in self.reactions if item.name == name), None)

    def without(self, names: frozenset[str]) -> BoundNetwork:
        """The network with some reactions taken out."""
        return replace(
            self, reactions=tuple(item for item in self.reactions if item.name not in names)
        )


def composition(formula: Formula) -> dict[str, Fraction]:
    """Elements of a formula, with the charge as one more entry where there is any."""
    parts = dict(formula.elements)
    if formula.charge:
        parts[CHARGE] = Fraction(formula.charge)
    return parts


def bind(
    network: Network,
    overrides: Mapping[str, Fraction] | None = None,
    places: Mapping[str, SourceSpan] | None = None,
) -> tuple[BoundNetwork, Findings]:
    """Network with parameters put in and every ``?`` solved.

    Parameters
    ----------
    network : Network
        The network as written.
    overrides : mapping of str to Fraction, optional
        Other values of some parameters.
    places : mapping of str to SourceSpan, optional
        Where those other values were written.

    Returns
    -------
    BoundNetwork
        Exact coefficients; a reaction that could not be solved is left out of it.
    Findings
        A ``?`` without a solution or with several, divisions by zero, coefficients that
        changed sides.
    """
    for name, value in (overrides or {}).items():
        network = network.with_parameter(name, value, (places or {}).get(name))
    changed = places or {}
    parameters = {item.name: item.value for item in network.parameters}
    formulas = {item.name: item.formula for item in network.compounds}
    formulas.update({item.name: item.formula for item in network.carriers})
    findings = Findings()
    bound: list[BoundReaction] = []
    for item in network.reactions:
        solved = _solve(
            item.name, item.equation, item.span, formulas, parameters, {}, findings, changed
        )
        if solved is not None:
            bound.append(
                BoundReaction(
                    name=item.name,
                    group=item.group,
                    coefficients=_net(solved),
                    reversible=item.equation.reversible,
                    written=solved,
                    span=item.span,
                )
            )
    if network.growth is not None:
        bound.extend(_bind_growth(network, formulas, parameters, findings, changed))
    return (
        BoundNetwork(network=network, reactions=tuple(bound), formulas=tuple(formulas.items())),
        findings,
    )


def _bind_growth(
    network: Network,
    formulas: Mapping[str, Formula],
    parameters: Mapping[str, Fraction],
    findings: Findings,
    places: Mapping[str, SourceSpan],
) -> list[BoundReaction]:
    growth = network.growth
    assert growth is not None
    # Per gram, the equation makes 1 g of dry weight and its other coefficients are mmol; both are
    # turned into mol before the `?` are solved, then the whole is scaled to 1 mol of biomass.
    gram = {BIOMASS: 1 / (growth.biomass.weight.molar_mass or Fraction(1))}
    scale = Fraction(1, 1000) if growth.per_gram else Fraction(1)
    solved = _solve(
        GROWTH,
        growth.equation,
        growth.span,
        formulas,
        parameters,
        gram if growth.per_gram else {},
        findings,
        places,
        scale,
    )
    if solved is None:
        return []
    made = dict(_net(solved)).get(BIOMASS, Fraction(0))
    if made <= 0:
        findings.add(
            "YN414",
            "the growth equation makes no biomass",
            growth.span,
            hint="Put 'biomass' with coefficient 1 on its right side.",
        )
        return []
    scaled = tuple((sign, name, amount / made, new) for sign, name, amount, new in solved)
    return [
        BoundReaction(
            name=GROWTH,
            coefficients=_net(scaled),
            reversible=False,
            written=scaled,
            slack=_written_slack(growth.equation, formulas, scale / made),
            span=growth.span,
        )
    ]


def _written_slack(
    equation: Equation, formulas: Mapping[str, Formula], scale: Fraction
) -> tuple[tuple[str, Fraction], ...]:
    """Half a unit of the last written digit of every decimal, carried to the elements."""
    slack: dict[str, Fraction] = {}
    for _, term in equation.terms():
        number = term.coefficient
        if isinstance(number, WrittenNumber) and number.last_place is not None:
            for element, atoms in composition(formulas[term.name]).items():
                half = number.last_place / 2 * abs(atoms) * scale
                slack[element] = slack.get(element, Fraction(0)) + half
    return tuple(slack.items())


def _net(
    solved: Sequence[tuple[int, str, Fraction, bool]],
) -> tuple[tuple[str, Fraction], ...]:
    total: dict[str, Fraction] = {}
    for sign, name, amount, _ in solved:
        total[name] = total.get(name, Fraction(0)) + sign * amount
    return tuple((name, amount) for name, amount in total.items() if amount)


def _solve(
    name: str,
    equation: Equation,
    span: SourceSpan | None,
    formulas: Mapping[str, Formula],
    parameters: Mapping[str, Fraction],
    fixed: Mapping[str, Fraction],
    findings: Findings,
    places: Mapping[str, SourceSpan],
    scale: Fraction = Fraction(1),
) -> tuple[tuple[int, str, Fraction, bool], ...] | None:
    """Numbers of all terms, or ``None`` with a finding."""
    numbers: list[Fraction | None] = []
    failed = False
    for _, term in equation.terms():
        try:
            numbers.append(_number(term, parameters, fixed, scale))
        except ZeroDivisionError:
            failed = True
            findings.add(
                "YN207",
                f"the coefficient {term.coefficient} of {term.name!r} in {name!r} divides by zero",
                _blamed(term, places) or term.span or span,
                hint="Change the parameter values or the expression.",
            )
    if failed:
        return None
    terms = equation.terms()
    for place, (sign, term) in enumerate(terms):
        value = numbers[place]
        names = term.coefficient.names() if isinstance(term.coefficient, Expression) else ()
        composite = str(term.coefficient) != f"({names[0] if names else ''})"
        if value is not None and value < 0 and composite:
            _report_move(name, sign, term, value, span, findings)
    unknown = [place for place, number in enumerate(numbers) if number is None]
    for place in unknown:
        if not composition(formulas[terms[place][1].name]):
            findings.add(
                "YN403",
                f"the ? of {terms[place][1].name!r} in {name!r} cannot follow from elements, "
                "since it has none",
                terms[place][1].span or span,
                hint="Write a number or a parameter expression.",
            )
            return None
    values = _unknowns(terms, numbers, unknown, formulas)
    if isinstance(values, _Unsolved):
        findings.add(values.code, f"{values.reason} in {name!r}", span, hint=values.hint)
        return None
    solved: list[tuple[int, str, Fraction, bool]] = []
    for place, (sign, term) in enumerate(terms):
        number = numbers[place]
        if number is not None:
            turned = number < 0
            solved.append((-sign if turned else sign, term.name, abs(number), False))
            continue
        value = values[unknown.index(place)]
        if value < 0:
            _report_move(name, sign, term, value, span, findings)
            sign, value = -sign, -value
        if value:
            solved.append((sign, term.name, value, True))
    return tuple(solved)


def _report_move(
    name: str,
    sign: int,
    term: Term,
    value: Fraction,
    span: SourceSpan | None,
    findings: Findings,
) -> None:
    """Say that a coefficient came out negative, so that it counts on the other side."""
    sides = {-1: "left", 1: "right"}
    findings.add(
        "YN404",
        f"{term.coefficient} of {term.name!r} in {name!r} is negative and counts on the other side",
        term.span or span,
        left=f"written on the {sides[sign]}",
        right=f"{float(-value):.4g} on the {sides[-sign]}",
        hint="Move it in the file to read the equation as it runs.",
        severity=Severity.NOTE,
    )


def _blamed(term: Term, places: Mapping[str, SourceSpan]) -> SourceSpan | None:
    """Where a value used by a coefficient was changed, if it was."""
    if isinstance(term.coefficient, Expression):
        for name in term.coefficient.names():
            if name in places:
                return places[name]
    return None


def _number(
    term: Term,
    parameters: Mapping[str, Fraction],
    fixed: Mapping[str, Fraction],
    scale: Fraction,
) -> Fraction | None:
    coefficient = term.coefficient
    if isinstance(coefficient, Unknown):
        return None
    value = (
        coefficient.value(parameters) if isinstance(coefficient, Expression) else coefficient.value
    )
    return value * fixed[term.name] if term.name in fixed else value * scale


@dataclass(frozen=True, slots=True)
class _Unsolved:
    code: str
    reason: str
    hint: str


def _unknowns(
    terms: Sequence[tuple[int, Term]],
    numbers: Sequence[Fraction | None],
    unknown: Sequence[int],
    formulas: Mapping[str, Formula],
) -> list[Fraction] | _Unsolved:
    """Solution of the balances for the unknown terms."""
    if not unknown:
        return []
    parts = [composition(formulas[term.name]) for _, term in terms]
    elements = list(dict.fromkeys(element for place in unknown for element in parts[place]))

    def row(element: str) -> list[Fraction]:
        known = sum(
            (
                sign * (numbers[place] or 0) * parts[place].get(element, Fraction(0))
                for place, (sign, _) in enumerate(terms)
            ),
            Fraction(0),
        )
        return [terms[place][0] * parts[place].get(element, Fraction(0)) for place in unknown] + [
            -known
        ]

    size = len(unknown)
    form = eliminate([row(element) for element in elements], size + 1)
    if size in form.pivots:
        # Elements that no ? holds may be what is wrong; they are named first.
        others = dict.fromkeys(element for part in parts for element in part)
        out_of_reach = [
            element for element in others if element not in elements and row(element)[-1]
        ]
        if out_of_reach:
            return _Unsolved(
                "YN402",
                f"no ? holds {' or '.join(out_of_reach)}, which does not close",
                "Correct the numbers, or give a compound with it a ?.",
            )
        blamed = [
            element
            for element in elements
            if size
            not in eliminate(
                [row(other) for other in elements if other != element], size + 1
            ).pivots
        ]
        return _Unsolved(
            "YN402",
            "no value of the ? closes " + (" or ".join(blamed) or "the balances"),
            "Give another compound a ?, or correct the numbers"
            + (f": all balances but {blamed[0]} can be closed." if len(blamed) == 1 else "."),
        )
    if form.rank < size:
        loose = [
            terms[place][1].name
            for column, place in enumerate(unknown)
            if column not in form.pivots
            or any(
                entry
                for other, entry in enumerate(form.rows[form.pivots.index(column)][:size])
                if other != column
            )
        ]
        return _Unsolved(
            "YN403",
            "the balances leave the ? of " + ", ".join(map(repr, loose)) + " free",
            "Write a number for one of them.",
        )
    return [form.rows[form.pivots.index(column)][size] for column in range(size)]
