"""Random balanced networks for the laws of this folder.

Everything follows from a size and a seed, so that a failure is told in two numbers. Reactions close
by construction: carbon dioxide, water, ammonia and one redox carrier take up what the random
compounds leave over, some of them written as ``?``. ATP follows a random energy content of every
compound, never above what a reaction sets free, so that no loop makes ATP from nothing and no
network is refused for it.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from random import Random
from typing import TYPE_CHECKING

from hypothesis import strategies as st

from yieldnet.chemistry.formula import Formula, read_formula
from yieldnet.chemistry.library import find_compound
from yieldnet.foundation.exact import read_number
from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.model.network import (
    BIOMASS,
    Carrier,
    CarrierKind,
    Compound,
    Direction,
    Growth,
    Maintenance,
    Network,
    Parameter,
    Reaction,
    Strain,
)
from yieldnet.reading.equations import read_equation

if TYPE_CHECKING:
    from collections.abc import Mapping

    from hypothesis.strategies import SearchStrategy

    from yieldnet.model.equation import Equation

__all__ = [
    "AMMONIA",
    "ATP",
    "CARBON_DIOXIDE",
    "HYDROGEN",
    "OXYGEN",
    "WATER",
    "networks",
    "random_network",
]

CARBON_DIOXIDE, WATER, AMMONIA = "carbon dioxide", "water", "ammonia"
OXYGEN, HYDROGEN = "oxygen", "hydrogen"
ATP = "ATP"


def networks() -> SearchStrategy[Network]:
    """Random networks; a failing one is made smaller by its size."""
    return st.builds(random_network, st.integers(4, 12), st.integers(0, 10**6))


def _library(name: str) -> Formula:
    entry = find_compound(name)
    assert entry is not None
    return entry.formula


@dataclass(slots=True)
class _Sketch:
    """A network in the making: compounds with their formulas and energy contents."""

    rng: Random
    formulas: dict[str, Formula] = field(default_factory=dict)
    carriers: dict[str, Formula] = field(default_factory=dict)
    energy: dict[str, Fraction] = field(default_factory=dict)
    nitrogen: bool = False

    def maybe(self, chance: float) -> bool:
        return self.rng.random() < chance

    def formula_of(self, name: str) -> Formula:
        return self.formulas.get(name) or self.carriers.get(name) or _library(name)

    def add_compound(self) -> str:
        rng = self.rng
        name = f"compound {len(self.formulas) + 1}"
        earlier = list(self.formulas.values())
        if earlier and self.maybe(0.2):
            self.formulas[name] = rng.choice(earlier)  # an isomer
        elif earlier and self.maybe(0.15):
            one, two = rng.choice(earlier), rng.choice(earlier)  # joined, water set free
            amounts = {element: one[element] + two[element] for element in "CHON"}
            amounts["H"] = max(amounts["H"] - 2, Fraction(0))
            amounts["O"] = max(amounts["O"] - 1, Fraction(0))
            self.formulas[name] = Formula.of(amounts)
        else:
            carbon = rng.randint(1, 6)
            hydrogen = Fraction(rng.randint(1, 2 * carbon + 2))
            if self.maybe(0.15):
                hydrogen += Fraction(rng.randint(1, 9), 10)
            amounts = {
                "C": Fraction(carbon),
                "H": hydrogen,
                "O": Fraction(rng.randint(0, carbon)),
                "N": Fraction(rng.randint(1, 2) if self.nitrogen and self.maybe(0.3) else 0),
            }
            self.formulas[name] = Formula.of(amounts)
        # About a quarter of the available electrons, so that breaking down pays as a rule.
        content = self.formulas[name].degree_of_reduction() / 4
        self.energy[name] = Fraction(round(2 * content) + rng.randint(-1, 3), 2)
        return name

    def closed(self, amounts: Mapping[str, Fraction], carrier: str) -> dict[str, Fraction]:
        """Net amounts completed so that C, H, O and N close, production positive."""
        left_over = {
            element: -sum(
                (amount * self.formula_of(name)[element] for name, amount in amounts.items()),
                Fraction(0),
            )
            for element in "CHON"
        }
        carbon_dioxide = left_over["C"]
        water = left_over["O"] - 2 * carbon_dioxide
        ammonia = left_over["N"]
        hydrogen = left_over["H"] - 2 * water - 3 * ammonia
        closing = {
            CARBON_DIOXIDE: carbon_dioxide,
            WATER: water,
            AMMONIA: ammonia,
            carrier: hydrogen / self.carriers[carrier]["H"],
        }
        return {**amounts, **closing}

    def reaction(self, amounts: Mapping[str, Fraction], reversible: bool, carrier: str = "") -> str:
        """Equation text of a reaction that closes, with ATP that its energy allows."""
        rng = self.rng
        net = self.closed(amounts, rng.choice(list(self.carriers)))
        sides: tuple[list[str], list[str]] = ([], [])
        for name, amount in net.items():
            unknown = name not in amounts and self.maybe(0.6)
            if unknown and (name != AMMONIA or amount):
                # Now and then on the side on which it will not stay.
                wrong = self.maybe(0.1)
                sides[(amount > 0) != wrong].append(f"? {name}")
            elif amount:
                sides[amount > 0].append(f"{_number(rng, abs(amount))}{name}")
        free = -sum((amount * self.energy[name] for name, amount in net.items()), Fraction(0))
        made = free if reversible else Fraction(int(4 * free // 1) - rng.choice((0, 1, 3, 6)), 4)
        if ATP in self.energy and made:
            sides[made > 0].append(f"{_number(rng, abs(made))}{ATP}")
        for side in sides:
            rng.shuffle(side)
        arrow = "<->" if reversible else "->"
        return f"{' + '.join(sides[0])} {arrow} {' + '.join(sides[1])}"


def _number(rng: Random, amount: Fraction) -> str:
    return "" if amount == 1 and rng.random() < 0.8 else f"{amount} "


def random_network(size: int, seed: int) -> Network:
    """Network of some compounds, all reactions of which close."""
    rng = Random(seed)
    sketch = _Sketch(rng, nitrogen=rng.random() < 0.4)
    for name in ("NADH", "NADPH", "quinol")[: rng.randint(1, 3)]:
        sketch.carriers[name] = read_formula("H4" if sketch.maybe(0.1) else "H2")
        sketch.energy[name] = Fraction(rng.randint(0, 2), 2)
    sketch.energy |= dict.fromkeys((CARBON_DIOXIDE, WATER, AMMONIA), Fraction(0))
    sketch.energy |= {OXYGEN: Fraction(rng.randint(2, 6))}
    if sketch.maybe(0.9):
        sketch.energy[ATP] = Fraction(1)
    names = [sketch.add_compound() for _ in range(size)]
    sketch.energy[names[0]] += rng.randint(0, 4)
    texts = _reactions(sketch, names)
    growth = _growth(sketch, names) if sketch.maybe(0.45) else None
    compounds = [Compound(name=name, formula=sketch.formulas[name]) for name in names]
    compounds += [Compound(name=WATER, formula=_library(WATER))]
    compounds += [
        Compound(name=name, formula=_library(name))
        for name in (CARBON_DIOXIDE, OXYGEN, HYDROGEN, AMMONIA)
        if name in " ".join(texts.values()) or (growth and name in growth.equation.names())
    ]
    compounds += [growth.biomass] if growth else []
    carriers = [
        Carrier(name=name, kind=CarrierKind.REDOX, formula=formula)
        for name, formula in sketch.carriers.items()
    ]
    if ATP in sketch.energy:
        carriers.append(Carrier(name=ATP, kind=CarrierKind.ENERGY, formula=Formula(())))
    off = rng.sample(list(texts), min(len(texts) - 1, rng.randint(1, 2)))
    return Network(
        title="Made by a test",
        compounds=tuple(compounds),
        carriers=tuple(carriers),
        crossing=_crossing(sketch, compounds),
        reactions=tuple(
            Reaction(
                name=name,
                equation=_equation(text),
                group=rng.choice(("", "", "", "upper branch", "lower branch")),
            )
            for name, text in texts.items()
        ),
        parameters=_parameters(rng, " ".join(texts.values()), growth),
        strains=(Strain(name="mutant", off=tuple(off)),),
        growth=growth,
        maintenance=_maintenance(rng) if growth and ATP in sketch.energy else None,
    )


def _equation(text: str) -> Equation:
    findings = Findings()
    equation = read_equation(text, SourceSpan(file="", line=1, column=1), "random", findings)
    assert equation is not None, list(findings)
    return equation


def _reactions(sketch: _Sketch, names: list[str]) -> dict[str, str]:
    """Equation texts by name: a tree that reaches every compound, side steps, respiration."""
    rng = sketch.rng
    found: dict[str, str] = {}
    for place, name in enumerate(names[1:], 1):
        amounts = {
            rng.choice(names[:place]): -Fraction(rng.choice((1, 1, 2))),
            name: Fraction(rng.choice((1, 1, 2))),
        }
        found[f"step {place}"] = sketch.reaction(amounts, sketch.maybe(0.35))
    for extra in range(rng.randint(1, len(names))):
        picked = rng.sample(names, rng.randint(2, 4))
        used = rng.randint(1, len(picked) - 1)
        amounts = {
            name: Fraction(rng.randint(1, 3), rng.randint(1, 2)) * (-1 if place < used else 1)
            for place, name in enumerate(picked)
        }
        found[f"side step {extra + 1}"] = sketch.reaction(amounts, sketch.maybe(0.25))
    first, *others = sketch.carriers
    if others and sketch.maybe(0.5):
        found["transhydrogenase"] = _transhydrogenase(sketch, others[0], first)
    if sketch.maybe(0.6):
        found["hydrogenase"] = f"{first} <-> {sketch.carriers[first]['H'] / 2} {HYDROGEN}"
    if sketch.maybe(0.75):
        half = sketch.carriers[first]["H"] / 4
        free = sketch.energy[first] + half * sketch.energy[OXYGEN]
        made = " + (po_ratio) ATP" if ATP in sketch.energy and free >= 2 else ""
        found["respiration"] = f"{first} + {half} oxygen -> ? water{made}"
    return found


def _transhydrogenase(sketch: _Sketch, one: str, two: str) -> str:
    """Carriers turned into each other, the way their energy allows; with a cost at times."""
    ratio = sketch.carriers[one]["H"] / sketch.carriers[two]["H"]
    free = sketch.energy[one] - ratio * sketch.energy[two]
    left, right = f"{one}", f"{ratio} {two}"
    if free < 0:
        left, right = right, left
    cost = " + 1/4 ATP" if ATP in sketch.energy and sketch.maybe(0.4) else ""
    return f"{left}{cost} {'->' if free or cost else '<->'} {right}"


def _parameters(rng: Random, texts: str, growth: Growth | None) -> tuple[Parameter, ...]:
    found = []
    if "po_ratio" in texts:
        value, low = Fraction(rng.randint(2, 8), 4), Fraction(1, 2)
        found.append(Parameter(name="po_ratio", value=value, low=low, high=Fraction(2)))
    if growth and ATP in growth.equation.names():
        found.append(Parameter(name="growth_atp", value=Fraction(rng.randint(5, 40), 10)))
    return tuple(found)


def _growth(sketch: _Sketch, names: list[str]) -> Growth:
    rng = sketch.rng
    per_gram = sketch.maybe(0.4)
    hydrogen, oxygen, nitrogen = rng.choice("78"), rng.choice("45"), rng.choice(("2", "25"))
    # About one C-mol, or the carbon of a gram in mmol, in one to three precursors.
    carbon = 40 if per_gram else 1
    precursors = rng.sample(names, rng.randint(1, 3))
    terms = ["? ammonia", f"? {list(sketch.carriers)[-1]}"]
    for name in precursors:
        amount = carbon * rng.uniform(0.8, 1.4) / len(precursors) / sketch.formulas[name]["C"]
        terms.append(f"{amount:.3f} {name}")
    if ATP in sketch.energy:
        terms.append("(20*growth_atp - 1) ATP" if per_gram else "(growth_atp) ATP")
    rng.shuffle(terms)
    return Growth(
        biomass=Compound(
            name=BIOMASS,
            formula=read_formula(f"CH1.{hydrogen}O0.{oxygen}N0.{nitrogen}"),
            ash=Fraction(rng.randint(0, 8), 100),
        ),
        equation=_equation(f"{' + '.join(terms)} -> {BIOMASS} + ? carbon dioxide + ? water"),
        per_gram=per_gram,
    )


def _maintenance(rng: Random) -> Maintenance | None:
    if rng.random() < 0.3:
        return None
    written = read_number(f"0.{rng.randint(1, 9)}")
    return Maintenance(
        carrier=ATP,
        rate_mol_per_gram_hour=written.value / 1000,
        written=written,
        unit="mmol/g/h",
    )


def _crossing(sketch: _Sketch, compounds: list[Compound]) -> tuple[tuple[str, Direction], ...]:
    """Ways over the boundary: first compound in, last out, most of the others out as well."""
    rng = sketch.rng
    own = list(sketch.formulas)
    always = {
        own[0]: Direction.CONSUMED,
        own[-1]: Direction.PRODUCED,
        CARBON_DIOXIDE: Direction.EITHER,
        WATER: Direction.EITHER,
        OXYGEN: Direction.CONSUMED,
        HYDROGEN: Direction.PRODUCED,
        AMMONIA: rng.choice((Direction.CONSUMED, Direction.EITHER)),
        BIOMASS: Direction.PRODUCED,
    }
    others = (Direction.CONSUMED, *[Direction.PRODUCED] * 7, Direction.EITHER)
    found = []
    for item in compounds:
        if item.name in always:
            found.append((item.name, always[item.name]))
        elif sketch.maybe(0.75):
            found.append((item.name, rng.choice(others)))
    return tuple(rng.sample(found, len(found)))
