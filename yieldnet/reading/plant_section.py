"""The section ``plant`` of a case file: what a plant is to make (README, "A plant").

In: the section and what the case has said before it. Out: :class:`~yieldnet.model.plant.Plant`.
What needs the answer of the case, such as whether oxygen can be passed on fast enough, is not
looked at here.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.acids import HIGHEST_BROTH_PH, LOWEST_BROTH_PH
from yieldnet.chemistry.bases import NITROGEN_FEEDS, base_named, base_names
from yieldnet.foundation.findings import near
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.model.plant import Aeration, Phases, Plant, Price, Stated
from yieldnet.reading.fields import Fields, number, text, unsplit_pairs
from yieldnet.reading.nodes import Kind
from yieldnet.reading.plant_values import (
    CELSIUS,
    CONCENTRATIONS,
    HOURS,
    OUTPUTS,
    POWERS,
    PRESSURES,
    PRODUCTIVITIES,
    RATES,
    SPARGES,
    TIMES,
    VOLUMES,
    read_measure,
    read_price,
    read_share,
)

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.model.case import Aim, Condition, OverallCoefficient
    from yieldnet.reading.nodes import Node

__all__ = ["AERATION_KEYS", "PHASE_KEYS", "PLANT_KEYS", "PlantReader"]

PLANT_KEYS = (
    "product",
    "output",
    "on-stream",
    "recovery",
    "feedstock purity",
    "titre",
    "productivity",
    "phases",
    "pH",
    "base",
    "nitrogen feed",
    "temperature",
    "aeration",
    "stirrer",
    "vessel",
    "fill",
    "prices",
)
"""Keys of 'plant'."""
PHASE_KEYS = ("growth", "production", "turnaround", "inoculum", "cells")
"""Keys of 'phases'."""
AERATION_KEYS = ("pressure", "vvm", "kLa", "dissolved oxygen")
"""Keys of 'aeration'."""
ALL_STEPS = "all downstream steps"
"""Name of a recovery that is given as one number."""
_HOURS_OF_A_YEAR = 8784
_COLDEST, _HOTTEST = 0, 100


@dataclass(slots=True, kw_only=True)
class PlantReader:
    """Reads what a plant is to make.

    Parameters
    ----------
    findings : Findings
        Receives what is wrong.
    resolve : callable
        Name of a compound, or ``None`` with a finding.
    basis : str
        Basis substrate; empty if the equation could not be read.
    coefficients : mapping of str to OverallCoefficient
        The coefficients of the equation.
    aim : Aim or None
        Aim of the case.
    has_network : bool
        Whether the case names a network.
    ph : Condition or None
        pH of the conditions.
    uptake : Condition or None
        Substrate uptake of the conditions.
    """

    findings: Findings
    resolve: Callable[[str, SourceSpan], str | None]
    basis: str
    coefficients: Mapping[str, OverallCoefficient]
    aim: Aim | None
    has_network: bool
    ph: Condition | None
    uptake: Condition | None

    def plant(self, node: Node | None) -> Plant | None:
        """The plant, ``None`` if there is none or it cannot be used.

        Parameters
        ----------
        node : Node or None
            The section.

        Returns
        -------
        Plant or None
            As written; the findings say what is wrong in it.
        """
        if node is None:
            return None
        fields = Fields(node, "'plant'", PLANT_KEYS, self.findings)
        if node.kind is not Kind.MAPPING:
            return None
        product, given = self._product(fields)
        on_stream = self._on_stream(fields)
        output = self._output(fields, on_stream)
        recovery = self._recovery(fields.get("recovery"))
        purities = self._purities(fields.get("feedstock purity"))
        phases = self._phases(fields)
        base, ph = self._base(fields)
        feed = self._feed(fields.get("nitrogen feed"))
        if feed and fields.get("base") is None:
            self.findings.add(
                "YN906",
                "a nitrogen feed is given, and no base that takes up its protons",
                fields.span("nitrogen feed"),
                hint="Write 'base: ' and 'pH: ' as well, or leave the line out.",
            )
        plain = {
            "titre": self._measure(fields, "titre", CONCENTRATIONS),
            "productivity": self._measure(fields, "productivity", PRODUCTIVITIES),
            "stirrer": self._measure(fields, "stirrer", POWERS, zero=True),
            "vessel": self._measure(fields, "vessel", VOLUMES),
        }
        if plain["productivity"] is not None and phases is not None and phases.production:
            self.findings.add(
                "YN916",
                "productivity and the time of production are given, and either follows from the"
                " other",
                phases.production.span,
                left=f"productivity {plain['productivity'].text}",
                right=f"production {phases.production.text}",
                hint="Keep one of the two.",
            )
        if phases is not None:
            self._phases_fit(phases, plain["titre"], plain["productivity"])
        fill = fields.get("fill")
        filled = None if fill is None else read_share(fill, "fill", self.findings)
        temperature = self._temperature(fields.get("temperature"))
        aeration = self._aeration(fields.get("aeration"))
        prices = self._prices(fields.get("prices"))
        if not product or output is None or on_stream is None:
            return None
        return Plant(
            product=product,
            product_given=given,
            output=output,
            on_stream=on_stream,
            recovery=recovery,
            purities=purities,
            titre=plain["titre"],
            productivity=plain["productivity"],
            phases=phases,
            ph=ph,
            base=base,
            nitrogen_feed=feed,
            temperature=temperature,
            aeration=aeration,
            stirrer=plain["stirrer"],
            vessel=plain["vessel"],
            fill=filled,
            prices=prices,
            span=node.span,
        )

    def _measure(
        self, fields: Fields, key: str, units: Mapping[str, Fraction], *, zero: bool = False
    ) -> Stated | None:
        node = fields.get(key)
        found = None if node is None else read_measure(node, key, units, self.findings, zero=zero)
        return None if found is None else found[0]

    def _product(self, fields: Fields) -> tuple[str, bool]:
        node = fields.get("product")
        if node is None:
            if self.aim is None or self.aim.is_energy:
                self.findings.add(
                    "YN902",
                    "'plant' names no product, and the case aims at none",
                    fields.node.span,
                    hint="Write 'product: ' with a compound of the right side.",
                )
                return "", False
            name, span = self.aim.compound, self.aim.span
        else:
            written, span = text(node, "'product' of 'plant'", self.findings), node.span
            if written is None or not self.basis:
                return "", True
            name = self.resolve(written, node.span) or ""
        if not name:
            return "", True
        item = self.coefficients.get(name)
        if item is None or item.side is not Direction.PRODUCED:
            where = "not in the overall equation" if item is None else "not on its right side"
            listed = self.coefficients.values()
            made = [one.name for one in listed if one.side is Direction.PRODUCED]
            self.findings.add(
                "YN902",
                f"the product {name!r} of the plant is {where}",
                span,
                left=f"made: {', '.join(made) or 'nothing'}",
                hint=near(name, made) or f"Add '+ ? {name}' to the right of the equation.",
            )
            return "", True
        return name, node is not None

    def _on_stream(self, fields: Fields) -> Stated | None:
        node = fields.need("on-stream", "Write the hours of work in a year: 7800 h/y.")
        found = None if node is None else read_measure(node, "on-stream", HOURS, self.findings)
        if found is None or node is None:
            return None
        if found[0].value > _HOURS_OF_A_YEAR:
            self.findings.add(
                "YN900",
                f"on-stream {found[0].text} is more than a year has",
                node.span,
                left=f"{float(found[0].value):g} h/y",
                right=f"a year has {_HOURS_OF_A_YEAR} h at most",
                hint="Write the hours in which the plant makes product.",
            )
            return None
        return found[0]

    def _output(self, fields: Fields, on_stream: Stated | None) -> Stated | None:
        node = fields.need("output", "Write what is sold in a year: 20000 t/y.")
        units = {name: factor for name, (factor, _) in OUTPUTS.items()}
        found = None if node is None else read_measure(node, "output", units, self.findings)
        if found is None:
            return None
        stated, unit = found
        if OUTPUTS[unit][1] == "y":
            return stated
        if on_stream is None:
            return None
        per_year = stated.value * on_stream.value
        return Stated(value=per_year, text=stated.text, span=stated.span)

    def _recovery(self, node: Node | None) -> tuple[Stated, ...]:
        if node is None:
            return ()
        if node.kind is not Kind.MAPPING:
            one = read_share(node, "recovery", self.findings, name=ALL_STEPS)
            return () if one is None else (one,)
        found = [
            read_share(value, f"recovery of {key.text}", self.findings, name=key.text)
            for key, value in node.pairs
        ]
        return tuple(item for item in found if item is not None)

    def _purities(self, node: Node | None) -> tuple[Stated, ...]:
        found: list[Stated] = []
        if node is None:
            return ()
        known = (self.basis, *self.coefficients)
        for key, value in unsplit_pairs(node, "'feedstock purity'", self.findings, known):
            share = read_share(value, f"purity of {key.text}", self.findings)
            name = self.resolve(key.text, key.span) if self.basis else None
            if name is None or share is None:
                continue
            item = self.coefficients.get(name)
            fed = name == self.basis or (item is not None and item.side is Direction.CONSUMED)
            if not fed:
                self.findings.add(
                    "YN917",
                    f"a purity is given for {key.text!r}, which is not fed",
                    key.span,
                    hint="Give purities of compounds on the left of the equation.",
                )
                continue
            found.append(Stated(value=share.value, text=share.text, name=name, span=share.span))
        return tuple(found)

    def _phases(self, fields: Fields) -> Phases | None:
        node = fields.get("phases")
        if node is None:
            return None
        inner = Fields(node, "'phases'", PHASE_KEYS, self.findings)
        if node.kind is not Kind.MAPPING:
            return None
        inner.need("growth", "Write the time of growth: 12 h.")
        growth = self._measure(inner, "growth", TIMES)
        seed = inner.get("inoculum")
        inoculum = None if seed is None else read_share(seed, "inoculum", self.findings)
        if inoculum is not None and inoculum.value == 1:
            self.findings.add(
                "YN901",
                "an inoculum that fills the vessel leaves nothing to grow",
                inoculum.span,
                hint="Write the volume of the seed over that of the vessel, such as 5 %.",
            )
        cells = self._measure(inner, "cells", CONCENTRATIONS)
        if not self.has_network:
            self.findings.add(
                "YN916",
                "phases need a network, which tells how much biomass a substrate gives",
                node.span,
                hint="Name a network with growth, or leave 'phases' out.",
            )
        if cells is None and inner.get("cells") is None and self.uptake is None:
            self.findings.add(
                "YN916",
                "how many cells there are at the end of growth cannot be told",
                node.span,
                hint="Write 'cells: 20 g/L' of dry weight, or give the substrate uptake.",
            )
        if growth is None:
            return None
        return Phases(
            growth=growth,
            production=self._measure(inner, "production", TIMES),
            turnaround=self._measure(inner, "turnaround", TIMES, zero=True),
            inoculum=inoculum,
            cells=cells,
            span=node.span,
        )

    def _phases_fit(
        self, phases: Phases, titre: Stated | None, productivity: Stated | None
    ) -> None:
        """What growth and production need of each other."""
        biomass = self.coefficients.get(BIOMASS)
        if self.basis and (biomass is None or biomass.side is not Direction.PRODUCED):
            self.findings.add(
                "YN916",
                "a growth phase is asked for, and the equation makes no biomass",
                phases.span,
                hint="Add '+ ? biomass' to the right of the equation.",
            )
        if titre is None:
            self.findings.add(
                "YN916",
                "phases need a titre, over which the substrate of growth is spread",
                phases.span,
                hint="Write 'titre: 80 g/L'.",
            )
        if phases.cells is None and phases.production is None and productivity is None:
            self.findings.add(
                "YN916",
                "how many cells make the product in time cannot be told",
                phases.span,
                hint="Write 'productivity', or 'production' or 'cells' under 'phases'.",
            )

    def _base(self, fields: Fields) -> tuple[str, Stated | None]:
        base, ph = "", None
        node = fields.get("base")
        written = None if node is None else text(node, "'base' of 'plant'", self.findings)
        if node is not None and written is not None:
            known = base_named(written)
            if known is None:
                self.findings.add(
                    "YN905",
                    f"base {written!r} is not known",
                    node.span,
                    left=f"known: {', '.join(base_names())}",
                    hint=near(written, base_names()),
                )
            else:
                base = known.name
        at = fields.get("pH")
        if at is not None:
            value = number(at, "'pH' of 'plant'", self.findings)
            ph = None if value is None else Stated(value=value.value, text=value.text, span=at.span)
        elif self.ph is not None:
            ph = Stated(value=self.ph.value, text=self.ph.text, span=self.ph.span)
        wanted = ph is not None and (at is not None or bool(base))
        if ph is not None and wanted and not LOWEST_BROTH_PH <= ph.value <= HIGHEST_BROTH_PH:
            self.findings.add(
                "YN903",
                f"pH {ph.text} lies outside the range of the pKa data",
                ph.span,
                left=f"they are used from pH {LOWEST_BROTH_PH} to {HIGHEST_BROTH_PH}",
                hint="Below it free acid counts, above it free ammonia; neither is reckoned.",
            )
        if base and ph is None and at is None and node is not None:
            self.findings.add(
                "YN906",
                f"the base {base} is given, and no pH that it is to hold",
                node.span,
                hint="Write 'pH: 6.5'.",
            )
        if at is not None and node is None:
            self.findings.add(
                "YN906",
                "a pH is given, and no base that holds it",
                at.span,
                hint=f"Write 'base: ' with one of {', '.join(base_names())}.",
            )
        return base, ph

    def _feed(self, node: Node | None) -> str:
        written = None if node is None else text(node, "'nitrogen feed'", self.findings)
        if node is None or written is None:
            return ""
        names = [item.name for item in NITROGEN_FEEDS]
        found = next((item for item in NITROGEN_FEEDS if item.name == written), None)
        if found is None:
            self.findings.add(
                "YN905",
                f"nitrogen feed {written!r} is not known",
                node.span,
                left=f"known: {', '.join(names)}",
                hint=near(written, names),
            )
            return ""
        listed = {self.basis, *self.coefficients}
        if self.basis and found.compound not in listed:
            self.findings.add(
                "YN917",
                f"{written} stands for {found.compound}, which is not in the equation",
                node.span,
                hint=f"Take {found.compound} as the nitrogen source, or leave the line out.",
            )
            return ""
        return found.name

    def _temperature(self, node: Node | None) -> Stated | None:
        if node is None:
            return None
        written = text(node, "'temperature' of 'plant'", self.findings)
        if written is None:
            return None
        found = read_measure(
            node, "temperature", dict.fromkeys(CELSIUS, Fraction(1)), self.findings, zero=True
        )
        if found is None:
            return None
        value = found[0].value + CELSIUS[found[1]]
        if not _COLDEST < value < _HOTTEST:
            self.findings.add(
                "YN900",
                f"temperature {written} is none of a broth",
                node.span,
                left=f"expected {_COLDEST} to {_HOTTEST} degC",
                hint="Write it in degC or K.",
            )
            return None
        return Stated(value=value, text=written, span=node.span)

    def _aeration(self, node: Node | None) -> Aeration | None:
        if node is None:
            return None
        inner = Fields(node, "'aeration'", AERATION_KEYS, self.findings)
        if node.kind is not Kind.MAPPING:
            return None
        dissolved = inner.get("dissolved oxygen")
        return Aeration(
            pressure=self._measure(inner, "pressure", PRESSURES),
            vvm=self._measure(inner, "vvm", SPARGES),
            kla=self._measure(inner, "kLa", RATES),
            dissolved_oxygen=None
            if dissolved is None
            else read_share(dissolved, "dissolved oxygen", self.findings, zero=True),
            span=node.span,
        )

    def _prices(self, node: Node | None) -> tuple[Price, ...]:
        found: list[Price] = []
        if node is None:
            return ()
        others = [*base_names(), *(item.name for item in NITROGEN_FEEDS)]
        known = (self.basis, *self.coefficients, *others)
        for key, value in unsplit_pairs(node, "'prices'", self.findings, known):
            base = base_named(key.text)
            if key.text in others or base is not None:
                name: str | None = base.name if base is not None else key.text
            else:
                name = self.resolve(key.text, key.span) if self.basis else None
            price = read_price(value, key.text, self.findings)
            if name is None or price is None:
                continue
            if name not in known:
                self.findings.add(
                    "YN917",
                    f"a price is given for {key.text!r}, which is neither fed nor made",
                    key.span,
                    hint=near(key.text, known) or "Leave the line out.",
                )
                continue
            if found and price.currency != found[0].currency:
                self.findings.add(
                    "YN907",
                    f"the price of {key.text} is in another currency",
                    value.span,
                    left=f"{found[0].name} in {found[0].currency}",
                    right=f"{key.text} in {price.currency}",
                    hint="Turn all prices into one currency: no rate of exchange is built in.",
                )
                continue
            found.append(
                Price(name=name, value=price.value, currency=price.currency, span=key.span)
            )
        return tuple(found)
