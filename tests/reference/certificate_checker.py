"""A proof on paper, checked the way a reader would: sums of products, and nothing of yieldnet.

Multiply the steady state of every compound by its worth and add up. What the reactions make of
worth equals the worth of what leaves, so for any fluxes at all

    aim = sum of made x flux + sum of (what it counts for the aim - worth) x what leaves.

The first sum is never for the better: a reaction that may run both ways makes no worth, and one
that runs one way none for the better. In the second, a compound that counts more than its worth
must meet an upper limit on what leaves, and one that counts less a lower one. What is left is the
line of arithmetic, and the fluxes of the proof must reach it.
"""

from __future__ import annotations

from collections import defaultdict
from fractions import Fraction
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = ["check_proof"]

ZERO = Fraction(0)
Limits = tuple[Fraction | None, Fraction | None]


def check_proof(
    proof: Mapping[str, Any],
    reactions: Mapping[str, tuple[Mapping[str, Fraction], bool]],
    limits: Mapping[str, Limits],
    counts: Mapping[str, Fraction],
    better: int,
    about: Mapping[str, str],
    tied: Mapping[str, Mapping[str, Fraction]],
) -> None:
    """Check the proof of a best value.

    Parameters
    ----------
    proof : mapping
        The key ``proof`` of the JSON.
    reactions : mapping of str to (mapping of str to Fraction, bool)
        Allowed reactions: net coefficients, production positive, and whether they run both ways.
    limits : mapping of str to (Fraction or None, Fraction or None)
        Least and most of what may leave the cell, taking up negative [mol/mol basis].
    counts : mapping of str to Fraction
        What one mol that leaves counts for the aim [mol aim/mol].
    better : {1, -1}
        +1 if the most is looked for, -1 for the least.
    about : mapping of str to str
        Compound or carrier of each statement that the line of arithmetic names.
    tied : mapping of str to mapping of str to Fraction
        How much of a carrier is kept back per mol of something else that leaves; its limits hold
        for the rest [mol/mol].
    """
    worth: dict[str, Fraction] = defaultdict(Fraction)
    worth |= {name: Fraction(text) for name, text in proof["worths"].items()}
    told = {item["reaction"]: item for item in proof["reactions"]}
    assert set(told) == set(reactions), "not the reactions that are allowed"
    leaves: dict[str, Fraction] = defaultdict(Fraction)
    for name, (coefficients, both_ways) in reactions.items():
        flux, made = (Fraction(told[name][key]) for key in ("flux", "made"))
        assert made == sum(worth[key] * n for key, n in coefficients.items()), f"{name}: made"
        assert better * made <= 0, f"{name} makes worth"
        assert made == 0 or not both_ways, f"{name} makes worth backwards"
        assert flux >= 0 or both_ways, f"{name} runs backwards"
        assert made * flux == 0, f"{name} runs and makes worth"
        for compound, n in coefficients.items():
            leaves[compound] += n * flux
    assert not any(amount for name, amount in leaves.items() if name not in limits), "a balance"
    value = sum(amount * leaves[name] for name, amount in counts.items())
    pulls = {name: counts.get(name, ZERO) - worth[name] for name in limits}
    for carrier, parts in tied.items():
        for name, kept in parts.items():
            leaves[carrier] -= kept * leaves[name]
            pulls[name] += kept * pulls[carrier]
    line: dict[str, Fraction] = defaultdict(Fraction)
    for term in proof["terms"]:
        name = about.get(term["name"], term["name"])
        line[name] += Fraction(term["worth"]) * Fraction(term["amount"])
    assert set(line) <= set(limits), "a term about nothing that leaves"
    for name, (low, high) in limits.items():
        assert low is None or leaves[name] >= low, f"{name} leaves too little"
        assert high is None or leaves[name] <= high, f"{name} leaves too much"
        end = high if better * pulls[name] > 0 else low
        assert not pulls[name] or end is not None, f"{name} can profit without end"
        assert line[name] == pulls[name] * (end or ZERO), f"{name}: the term is not its limit"
    assert sum(line.values()) == value == Fraction(proof["value"]), "line, fluxes and value differ"
