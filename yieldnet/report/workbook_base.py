"""Size of the plant, protons and base, as live numbers on the sheet ``streams``.

In: amounts, pH, pKa. Out: the scale; protons of every acid and nitrogen source for each phase, and
the base that takes them up. The formulas are those of ``plant.streams`` and ``plant.base``.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.chemistry.acids import HIGHEST_BROTH_PH, LOWEST_BROTH_PH, acid_named, is_acid
from yieldnet.chemistry.formula import Formula
from yieldnet.chemistry.library import find_compound
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.prediction.heat import same_formula
from yieldnet.report.workbook_inputs import Check
from yieldnet.report.workbook_live import (
    Live,
    all_of,
    at_least_zero,
    live,
    power_of_ten,
    sum_of,
    sum_of_products,
)
from yieldnet.report.workbook_page import Kind

if TYPE_CHECKING:
    from yieldnet.chemistry.acids import Acid
    from yieldnet.report.workbook_coefficients import Amounts
    from yieldnet.report.workbook_inputs import Setting
    from yieldnet.report.workbook_page import Page

__all__ = ["AcidSpecies", "Protons", "add_protons", "add_scale"]

_GRAMS = 1000
_TONS = 1000
_HARDLY = -1e-12
"""Base below which acid would be needed: nothing, but for the last digits [mol/mol]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class AcidSpecies:
    """One species of an acid in the broth.

    Parameters
    ----------
    compound : str
        The acid.
    formula : Formula
        Of the species.
    share : Live
        Its share of the acid [mol/mol].
    """

    compound: str
    formula: Formula
    share: Live


@dataclass(frozen=True, slots=True, kw_only=True)
class Protons:
    """Protons and base as cells.

    Parameters
    ----------
    phases : dict of str to Live
        Protons given off, by column of the equations [mol/mol basis].
    each : dict of str to Live
        Protons per mol of each acid made [mol/mol].
    taken : dict of str to Live
        Acid made or nitrogen source taken up, over all phases [mol/mol basis].
    species : tuple of AcidSpecies
        Species of the acids.
    of_acids : Live
        Protons of the acids over all phases [mol/mol basis].
    base : Live
        Base over all phases [mol/mol basis].
    """

    phases: dict[str, Live]
    each: dict[str, Live]
    taken: dict[str, Live]
    species: tuple[AcidSpecies, ...]
    of_acids: Live
    base: Live


def add_scale(page: Page, setting: Setting, amounts: Amounts) -> None:
    """Size of the plant and its yields by mass.

    Parameters
    ----------
    page : Page
        The sheet ``streams``.
    setting : Setting
        What the workbook is made from.
    amounts : Amounts
        The equations.
    """
    book, plant = page.book, setting.plant
    product = plant.product
    page.heading("Size")
    page.list_header()
    recovery: Live = live(1)
    for k, item in enumerate(plant.recovery):
        step = book[f"recovery of {item.name}"]
        recovery = recovery * step if k else step
    mass = book[f"molar mass of {product}"]

    def add(name: str, value: Live, unit: str, how: str) -> Live:
        return page.entry(name, value, unit, Kind.FORMULA, how, key=name)

    recovered = add("recovery", recovery, "-", "product of all downstream steps")
    sold = add(
        "product sold", book["output"] * _TONS / book["on-stream"], "kg/h", "output / on-stream"
    )
    made = add("product in the broth", sold / recovered, "kg/h", "product sold / recovery")
    total = amounts.overall[product]
    add(
        "substrate used",
        made * _GRAMS / mass / total,
        "mol/h",
        "product in the broth / molar mass / yield over all phases",
    )
    ratio = mass / book[f"molar mass of {setting.case.basis.name}"]
    add("yield of production", amounts.production[product] * ratio, "g/g", "product / substrate")
    whole = add(
        "yield over all phases",
        total * ratio,
        "g/g",
        "product in the broth / substrate of growth, seed and production",
    )
    add("yield sold", whole * recovered, "g/g", "yield over all phases x recovery")


def add_protons(
    page: Page, setting: Setting, amounts: Amounts, checks: list[Check]
) -> Protons | None:
    """Protons and base; ``None`` where no pH is held.

    Parameters
    ----------
    page : Page
        The sheet ``streams``.
    setting : Setting
        What the workbook is made from.
    amounts : Amounts
        The equations.
    checks : list of Check
        Receives what must hold.

    Returns
    -------
    Protons or None
        Their cells.
    """
    base, book = setting.base, page.book
    if base is None:
        return None
    acids, unknown = _acids(setting)
    each, species = _species(page, setting, acids)
    columns = {"production": amounts.production}
    if amounts.growth:
        columns |= {"growth": amounts.growth, "over all phases": amounts.overall}
    page.heading(f"Protons given off, mol/mol {setting.case.basis.name}")
    page.header("", *columns, *(f"amount, {name}" for name in columns), "", "protons per mol")
    taken: dict[str, Live] = {}
    cells: dict[str, list[Live]] = {name: [] for name in columns}
    names = [*acids, *setting.feeds]
    wide = len(columns)
    for name in names:
        page.write(1, name)
        own = page.write(
            3 + 2 * wide,
            each[name] if name in each else setting.feeds[name].protons,
            kind=None if name in each else Kind.CONSTANT,
        )
        for k, (title, equation) in enumerate(columns.items()):
            amount = equation[name] if name in each else -equation[name]
            used = page.write(2 + wide + k, at_least_zero(amount))
            cells[title].append(page.write(2 + k, used * own))
            taken[name] = used
        book.define(f"protons of {name}", cells[title][-1])
        page.row += 1
    page.write(1, "all protons", bold=True)
    totals = {}
    for k, (title, column) in enumerate(cells.items()):
        totals[title] = page.write(2 + k, sum_of(column) if column else 0)
    last = list(totals.values())[-1]
    page.row += 1
    page.list_header()
    base_amount = page.entry(
        f"{base.name} as base",
        last / book["protons taken up by one mol of base"],
        "mol/mol",
        Kind.FORMULA,
        "sum of the protons / protons taken up by one mol of base",
        key=f"{base.name} as base",
    )
    held = [
        cell for name, cell in zip(names, list(cells.values())[-1], strict=True) if name in each
    ]
    checks += [
        Check(
            name="base and not acid is needed",
            holds=base_amount.at_least(_HARDLY),
            way_out="Take another form of the nitrogen source.",
        ),
        Check(
            name="the pH is within the pKa data",
            holds=all_of(
                [
                    book["pH of the broth"].at_least(LOWEST_BROTH_PH),
                    book["pH of the broth"].at_most(HIGHEST_BROTH_PH),
                ]
            ),
            way_out=f"Stay between pH {LOWEST_BROTH_PH} and {HIGHEST_BROTH_PH}.",
        ),
    ]
    if unknown:
        checks.append(
            Check(
                name="no acid without a pKa is made",
                holds=all_of([amounts.overall[name].at_most(0) for name in unknown]),
                way_out=f"The base for {', '.join(unknown)} is not known.",
            )
        )
    return Protons(
        phases=totals,
        each=each,
        taken=taken,
        species=species,
        of_acids=sum_of(held) if held else live(0),
        base=base_amount,
    )


def _acids(setting: Setting) -> tuple[dict[str, Acid], list[str]]:
    """Acids that may be made, and those without a pKa."""
    known: dict[str, Acid] = {}
    unknown = []
    for item in setting.closing.order:
        side = setting.case.coefficient(item.name)
        entry = find_compound(item.name)
        if side is None or side.side is Direction.CONSUMED or item.name == BIOMASS:
            continue
        if entry is None or not same_formula(entry.formula, item.formula):
            continue
        acid = acid_named(item.name)
        if acid is not None:
            known[item.name] = acid
        elif is_acid(item.name):
            unknown.append(item.name)
    return known, unknown


def _species(
    page: Page, setting: Setting, acids: dict[str, Acid]
) -> tuple[dict[str, Live], tuple[AcidSpecies, ...]]:
    """Shares of the species of every acid, and the protons that one mol gives off."""
    if not acids:
        return {}, ()
    page.heading("Species of the acids at the pH of the broth")
    page.header("", "share", "protons lost", "parts: 10^(protons x pH - sum of pKa)", "pKa",
                "species", "source")  # fmt: skip
    ph = page.book["pH of the broth"]
    each: dict[str, Live] = {}
    species: list[AcidSpecies] = []
    for name, acid in acids.items():
        entry = find_compound(name)
        assert entry is not None
        source = f"{acid.source}, {acid.status}"
        page.book.sources[f"pKa of {name}", source] = None
        first = page.row
        formulas, lost, parts, constants = [], [], [], []
        for k in range(len(acid.constants) + 1):
            page.row = first + k
            elements = dict(entry.formula.elements)
            elements["H"] -= k
            formulas.append(Formula.of(elements, -k))
            page.write(1, name)
            page.write(6, str(formulas[k]))
            lost.append(page.write(3, k, kind=Kind.CONSTANT, shown="0"))
            if not k:
                parts.append(page.write(4, 1, kind=Kind.CONSTANT, shown="0"))
                continue
            constants.append(
                page.write(5, acid.constants[k - 1], kind=Kind.CONSTANT, shown="General")
            )
            # pKa1 + ... + pKak stand one below the other, from the second species on.
            exponent = lost[k] * ph - sum_of(constants)
            parts.append(page.write(4, power_of_ten(exponent), shown="0.00E+00"))
            page.write(7, source)
        for k, part in enumerate(parts):
            page.row = first + k
            share = page.write(2, part / sum_of(parts), shown="0.0000")
            species.append(AcidSpecies(compound=name, formula=formulas[k], share=share))
        own = [item.share for item in species if item.compound == name]
        each[name] = sum_of_products(lost, own)
        page.row = first + len(parts)
    return each, tuple(species)
