"""Protons that a cultivation gives off, the base that takes them up, and the ions that are left.

In: an overall equation, pH, base and form of the nitrogen source. Out: a proton balance per mol of
basis, exact after each power of ten is rounded once. Left out: carbonate in the broth, which
leaves as carbon dioxide when the broth is acidified, and phosphate and sulfate of the minerals.

Protons given off, per mol of basis::

    sum over acids made of amount x protons given off at the pH of the broth
    + ammonium taken up - ammonia dissolved (0 in sum for ammonia, 1 for ammonium sulfate)
    + 0 x urea
    - nitrate taken up + nitric acid dissolved (-1 for sodium nitrate, 0 for nitric acid)

Base = protons given off / protons that one mol of base takes up.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.acids import acid_named, is_acid, solubilities_of
from yieldnet.chemistry.bases import NITROGEN_FEEDS, base_named, usual_feed
from yieldnet.chemistry.formula import Formula
from yieldnet.chemistry.library import find_compound
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.network import BIOMASS
from yieldnet.prediction.heat import same_formula

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.chemistry.acids import Acid
    from yieldnet.chemistry.bases import Base, NitrogenFeed
    from yieldnet.model.case import Case
    from yieldnet.model.plant import Plant

__all__ = ["ProtonBalance", "ProtonTerm", "feeds_of", "proton_balance", "tell_solubility"]

_ZERO = Fraction(0)
_UNCHARGED = {BIOMASS, "water", "carbon dioxide", "oxygen", "ammonia", "urea", "nitrate"}


@dataclass(frozen=True, slots=True, kw_only=True)
class ProtonTerm:
    """Protons that one compound brings.

    Parameters
    ----------
    compound : str
        Acid made, or nitrogen source.
    amount : Fraction
        Made, or taken up [mol/mol basis].
    each : Fraction
        Protons given off per mol of it [mol/mol].
    rule : str
        Why, in words.
    acid : Acid or None
        Its constants.
    feed : NitrogenFeed or None
        Form in which it is fed.
    source : str
        Of the constants.
    """

    compound: str
    amount: Fraction
    each: Fraction
    rule: str
    acid: Acid | None = None
    feed: NitrogenFeed | None = None
    source: str = ""

    @property
    def protons(self) -> Fraction:
        """Protons given off [mol/mol basis]."""
        return self.amount * self.each


@dataclass(frozen=True, slots=True, kw_only=True)
class ProtonBalance:
    """Protons and base of an equation.

    Parameters
    ----------
    base : Base
        What takes them up.
    ph : Fraction
        pH of the broth [-].
    terms : tuple of ProtonTerm
        Acids, then nitrogen sources.
    uncharged : tuple of str
        Compounds that were not counted as acids or bases.
    """

    base: Base
    ph: Fraction
    terms: tuple[ProtonTerm, ...]
    uncharged: tuple[str, ...]

    @property
    def protons(self) -> Fraction:
        """All protons given off [mol/mol basis]."""
        return sum((item.protons for item in self.terms), _ZERO)

    @property
    def acid_protons(self) -> Fraction:
        """Protons given off by the acids made [mol/mol basis]."""
        return sum((item.protons for item in self.terms if item.acid is not None), _ZERO)

    @property
    def base_amount(self) -> Fraction:
        """Base that takes them up [mol/mol basis]."""
        return self.protons / self.base.equivalents

    def held_ions(self) -> tuple[tuple[str, Formula, Fraction], ...]:
        """Name, formula and amount of what base and nitrogen feed leave [mol/mol basis]."""
        found = [(self.base.name, self.base.cation, self.base_amount * self.base.cations)]
        for item in self.terms:
            feed = item.feed
            if feed is not None and feed.counter_ion is not None:
                found.append((feed.name, feed.counter_ion, item.amount * feed.counter_ions))
        return tuple(one for one in found if one[2])

    def acid_ions(self) -> tuple[tuple[str, Formula, Fraction], ...]:
        """Name, formula and amount of every species of the acids made [mol/mol basis]."""
        found = []
        for item in self.terms:
            if item.acid is None:
                continue
            entry = find_compound(item.compound)
            assert entry is not None
            for lost, share in enumerate(item.acid.shares(self.ph)):
                elements = dict(entry.formula.elements)
                elements["H"] -= lost
                found.append((item.compound, Formula.of(elements, -lost), item.amount * share))
        return tuple(found)


def feeds_of(case: Case, plant: Plant) -> dict[str, NitrogenFeed]:
    """Form in which each nitrogen source of a case is fed; empty without a base."""
    if not plant.base:
        return {}
    chosen = next((item for item in NITROGEN_FEEDS if item.name == plant.nitrogen_feed), None)
    found = {}
    for item in case.compounds:
        entry = find_compound(item.name)
        # Another formula under the name of the library is another compound, such as an ion.
        if entry is None or not same_formula(entry.formula, item.formula):
            continue
        feed = usual_feed(entry.name)
        if chosen is not None and chosen.compound == entry.name:
            feed = chosen
        if feed is not None:
            found[item.name] = feed
    return found


def proton_balance(
    case: Case,
    plant: Plant,
    amounts: Mapping[str, Fraction],
    findings: Findings,
    *,
    refuse: bool = True,
) -> ProtonBalance | None:
    """Protons that an equation gives off at the pH of the broth; ``None`` without a base.

    Parameters
    ----------
    case : Case
        The case.
    plant : Plant
        With base, pH and form of the nitrogen source.
    amounts : mapping of str to Fraction
        Overall equation, production positive [mol/mol basis].
    findings : Findings
        Receives why it cannot be told.
    refuse : bool
        Whether an equation that needs acid is refused; one phase of several may need it.

    Returns
    -------
    ProtonBalance or None
        Protons and base [mol/mol basis].

    Raises
    ------
    InputError
        If an acid that is made has no pKa, or acid would be needed instead of base.
    """
    base = base_named(plant.base) if plant.base else None
    if base is None or plant.ph is None:
        return None
    ph = plant.ph.value
    feeds = feeds_of(case, plant)
    terms: list[ProtonTerm] = []
    unknown, uncharged = [], []
    for item in case.compounds:
        amount = amounts[item.name]
        entry = find_compound(item.name)
        same = entry is not None and same_formula(entry.formula, item.formula)
        acid = acid_named(item.name) if same else None
        if amount > 0 and acid is not None:
            terms.append(
                ProtonTerm(
                    compound=item.name,
                    amount=amount,
                    each=acid.protons_given_off(ph),
                    rule="mean protons given off by its species at the pH of the broth",
                    acid=acid,
                    source=f"{acid.source}, {acid.status}",
                )
            )
        elif amount > 0 and is_acid(item.name) and item.name not in _UNCHARGED:
            unknown.append(item.name)
        elif amount > 0 and item.name not in _UNCHARGED:
            uncharged.append(item.name)
    for name, feed in feeds.items():
        if amounts[name] < 0:
            terms.append(
                ProtonTerm(
                    compound=name,
                    amount=-amounts[name],
                    each=Fraction(feed.protons),
                    rule=f"fed as {feed.name}",
                    feed=feed,
                )
            )
    if unknown:
        findings.add(
            "YN904",
            f"no pKa is known of {', '.join(unknown)}, so the base demand cannot be told",
            plant.span,
            hint="Leave 'base', 'pH' and 'nitrogen feed' out of 'plant'.",
        )
        raise InputError(findings.sorted())
    balance = ProtonBalance(base=base, ph=ph, terms=tuple(terms), uncharged=tuple(uncharged))
    if refuse and balance.protons < 0:
        findings.add(
            "YN918",
            f"the cells take up {float(-balance.protons):.3g} mol protons per mol"
            f" {case.basis.name} more than they give off",
            plant.span,
            left=f"base {base.name}",
            hint="Feed the nitrogen source in another form, or leave 'base' and 'pH' out.",
        )
        raise InputError(findings.sorted())
    return balance


def tell_solubility(plant: Plant, findings: Findings) -> None:
    """Warn of a titre at which the product falls out, where its solubility is known.

    Parameters
    ----------
    plant : Plant
        With a titre.
    findings : Findings
        Receives the warning.
    """
    if plant.titre is None:
        return
    acid = acid_named(plant.product)
    share = Fraction(1)
    if acid is not None and plant.base and plant.ph is not None:
        share = acid.shares(plant.ph.value)[0]
    calcium = plant.base.startswith("calcium")
    for item in solubilities_of(plant.product):
        if item.form == "calcium salt":
            there, what = (1 - share) * plant.titre.value if calcium else _ZERO, "calcium salt"
        elif item.form == "acid":
            there, what = share * plant.titre.value, "undissociated acid"
        else:
            there, what = plant.titre.value, "a phase of its own"
        if there > item.value:
            findings.add(
                "YN910",
                f"at a titre of {plant.titre.text} {plant.product} falls out as {what}",
                plant.titre.span,
                left=f"{float(there):.3g} g/L in the broth",
                right=f"{float(item.value):.3g} g/L dissolve at {item.temperature}"
                f" ({item.source}, {item.status})",
                hint="Take a lower titre, another base or pH, or plan for a slurry.",
                severity=Severity.WARNING,
            )
