"""A case to start from: a network, a substrate, a product and an overall equation that works.

In: networks with their names, and what was asked for. Out: one :class:`StartingCase` whose best
value is above zero, or findings that say which pairs work. Left out: the text of the files, which
is the work of ``report``.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from yieldnet.chemistry.bases import NITROGEN_SOURCES
from yieldnet.chemistry.library import find_compound, library_names
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.exact import read_number
from yieldnet.foundation.findings import Findings, near
from yieldnet.model.case import Aim, AimDirection, Case, OverallCoefficient
from yieldnet.model.equation import UNKNOWN, Equation, Term
from yieldnet.model.network import BIOMASS, Direction, Network
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.ladder import objective_of
from yieldnet.prediction.overall import CARBON_DIOXIDE
from yieldnet.prediction.prepare import prepare

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence
    from fractions import Fraction

    from yieldnet.model.network import Compound

__all__ = ["OverallShape", "StartingCase", "best_yields", "overall_shape", "start_case"]

_ONE = read_number("1")


@dataclass(frozen=True, slots=True, kw_only=True)
class OverallShape:
    """Compounds of an overall equation by their place.

    Parameters
    ----------
    substrate : str
        The basis.
    nitrogen : str
        Nitrogen source; empty if the network takes up none.
    fed : tuple of str
        Other compounds of the left side, the nitrogen source first.
    made : tuple of str
        Compounds of the right side.
    either : tuple of str
        Compounds of either side.
    left_out : tuple of str
        Compounds that the network could take up and the equation does not list.
    """

    substrate: str
    nitrogen: str
    fed: tuple[str, ...]
    made: tuple[str, ...]
    either: tuple[str, ...]
    left_out: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class StartingCase:
    """What a first case is made of.

    Parameters
    ----------
    name : str
        Name or path of the network, as it was given.
    network : Network
        The network.
    shape : OverallShape
        The overall equation, the product first on its right side.
    product : str
        Compound that is to be most.
    best : Fraction
        Its best value, above zero [mol/mol basis].
    chosen : tuple of str
        What was not asked for and how it was chosen, in words.
    """

    name: str
    network: Network
    shape: OverallShape
    product: str
    best: Fraction
    chosen: tuple[str, ...] = ()

    @property
    def substrate(self) -> str:
        """The basis."""
        return self.shape.substrate


def overall_shape(network: Network, substrate: str, product: str = "") -> OverallShape:
    """Overall equation of a substrate in a network.

    Parameters
    ----------
    network : Network
        The network.
    substrate : str
        The basis; it may be taken up.
    product : str
        Compound that comes first on the right side; empty for none.

    Returns
    -------
    OverallShape
        The substrate, one nitrogen source, and what else is taken up without being food; all that
        may be given off; carbon dioxide and what holds no carbon on either side.

    Notes
    -----
    Another substrate that the network is meant for is no co-feed, though hydrogen holds no carbon:
    with it free, carbon dioxide would become product without end. It may only be given off.
    """
    foods = set(network.meant_for.substrates if network.meant_for else ())
    carbon = {item.name: bool(item.formula["C"]) for item in network.compounds}
    ways = [(name, way) for name, way in network.crossing if name != substrate]
    taken = [name for name, way in ways if way is Direction.CONSUMED]
    sources = [item.name for item in network.compounds if item.formula["N"] and item.name in taken]
    sources.sort(key=lambda name: _rank(NITROGEN_SOURCES, name))
    nitrogen = sources[0] if sources else ""
    free = {
        name
        for name, _ in ways
        if name not in foods and (name == CARBON_DIOXIDE or not carbon[name])
    }
    fed = [name for name in taken if name in free and name not in sources]
    either = [name for name, way in ways if way is Direction.EITHER and name in free]
    made = [name for name, way in ways if way is not Direction.CONSUMED and name not in either]
    made.sort(key=lambda name: (name != product, name != BIOMASS))
    listed = {nitrogen, *fed}
    return OverallShape(
        substrate=substrate,
        nitrogen=nitrogen,
        fed=tuple(name for name in (nitrogen, *fed) if name),
        made=tuple(made),
        either=tuple(either),
        left_out=tuple(name for name in taken if name not in listed),
    )


def _rank(order: Sequence[str], name: str) -> int:
    return order.index(name) if name in order else len(order)


def best_yields(
    network: Network, substrate: str, products: Iterable[str], engine: str = "glpk"
) -> dict[str, Fraction]:
    """Best value of each product that can be made of a substrate at all.

    Parameters
    ----------
    network : Network
        The network, as it stands: no strain, nothing knocked out.
    substrate : str
        The basis.
    products : iterable of str
        Compounds that may be given off.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    dict of str to Fraction
        Those with a best value above zero, in the order given [mol/mol basis].

    Raises
    ------
    InputError
        If the network must be refused, or the equation cannot close.
    """
    shape = overall_shape(network, substrate)
    ready = prepare(_case(network, shape), Optimiser(engine_named(engine)))
    found: dict[str, Fraction] = {}
    for product in products:
        if product not in shape.made:
            continue
        aim = Aim(direction=AimDirection.MOST, compound=product)
        objective = objective_of(replace(ready.case, aim=aim))
        assert objective is not None
        # Nothing is measured, so the last rung needs no reconciled point.
        answer = objective.best(ready.optimiser, ready.layers.final)
        if answer.status is Status.OPTIMAL and answer.value > 0:
            found[product] = answer.value
    return found


def _case(network: Network, shape: OverallShape) -> Case:
    """The question without an aim."""

    def compound(name: str) -> Compound:
        held = network.compound(name)
        assert held is not None
        return held

    sides = (
        (Direction.CONSUMED, shape.fed),
        (Direction.PRODUCED, shape.made),
        (Direction.EITHER, shape.either),
    )
    unknown = [(side, name) for side, names in sides for name in names]
    return Case(
        title=shape.substrate,
        network=network,
        equation=Equation(
            left=(
                Term(name=shape.substrate, coefficient=_ONE),
                *(Term(name=name, coefficient=UNKNOWN) for name in shape.fed),
            ),
            right=tuple(Term(name=name, coefficient=UNKNOWN) for name in shape.made),
        ),
        basis=compound(shape.substrate),
        coefficients=tuple(OverallCoefficient(name=name, side=side) for side, name in unknown),
        compounds=(compound(shape.substrate), *(compound(name) for _, name in unknown)),
    )


def start_case(
    networks: Sequence[tuple[str, Network]], substrate: str = "", product: str = ""
) -> StartingCase:
    """Network, substrate and product to start from.

    Parameters
    ----------
    networks : sequence of (str, Network)
        The network that was asked for; or all that may be suggested, each with its name.
    substrate, product : str
        What was asked for, by name or synonym; empty to take what the network is meant for.

    Returns
    -------
    StartingCase
        A pair that works.

    Raises
    ------
    InputError
        If nothing was asked for, a name is unknown, no network or several fit, or the product
        cannot be made of the substrate.
    """
    findings = Findings()
    for word in filter(None, (substrate, product)):
        crossing = {name for _, network in networks for name, _ in network.crossing}
        if _own_name(word, crossing) is None and find_compound(word) is None:
            known = (*crossing, *library_names())
            findings.add(
                "YN301",
                f"compound {word!r} is not known",
                hint=near(word, known) or "'yieldnet compounds' lists the library.",
            )
    if findings.refused:
        raise InputError(findings.sorted())
    if len(networks) == 1:
        return _on_network(*networks[0], substrate, product)
    if not substrate and not product:
        findings.add(
            "YN930",
            "neither a network nor a substrate or product is named",
            hint="Name one with --network, --substrate or --product; 'yieldnet networks' lists the"
            " networks with what each is meant for.",
        )
        raise InputError(findings.sorted())
    return _suggested(networks, substrate, product)


def _own_name(word: str, names: Iterable[str]) -> str | None:
    """The word as a network spells it: itself, or a name of the same library compound."""
    names = tuple(names)
    for name in names:
        if name.casefold() == word.casefold():
            return name
    entry = find_compound(word)
    if entry is None:
        return None
    return next((name for name in names if find_compound(name) is entry), None)


def _suggested(
    networks: Sequence[tuple[str, Network]], substrate: str, product: str
) -> StartingCase:
    """The one network that is meant for what was asked for, and does it."""
    findings = Findings()
    meant = []
    for name, network in networks:
        scope = network.meant_for
        if scope is None:
            continue
        if substrate and _own_name(substrate, scope.substrates) is None:
            continue
        if product and _own_name(product, scope.products) is None:
            continue
        meant.append((name, network))
    asked = " and ".join(
        f"the {what} {word!r}"
        for what, word in (("substrate", substrate), ("product", product))
        if word
    )
    if not meant:
        scopes = [network.meant_for for _, network in networks if network.meant_for]
        sides = []
        for what, word, other in (
            ("substrates", substrate, product),
            ("products", product, substrate),
        ):
            # What goes with the other word, or all where that goes with nothing.
            back = "products" if what == "substrates" else "substrates"
            fit = [one for one in scopes if other and _own_name(other, getattr(one, back))]
            listed = sorted({name for one in fit or scopes for name in getattr(one, what)})
            if word:
                beside = f" with {other}" if fit else ""
                sides.append(f"{what}{beside}: {', '.join(listed)}")
        findings.add(
            "YN930",
            f"no shipped network is meant for {asked}",
            left=sides[0],
            right=sides[1] if len(sides) > 1 else "",
            hint="Take one of these, or name a network of your own with --network.",
        )
        raise InputError(findings.sorted())
    fits: list[StartingCase] = []
    for name, network in meant:
        try:
            fits.append(_on_network(name, network, substrate, product))
        except InputError as error:
            findings.extend(error.findings)
    if not fits:
        raise InputError(findings.sorted())
    if len(fits) > 1:
        listed = [f"{item.name} ({item.network.title})" for item in fits]
        findings = Findings()
        findings.add(
            "YN931",
            f"{len(fits)} networks are meant for {asked}",
            left="; ".join(listed),
            hint="Choose one with --network.",
        )
        raise InputError(findings.sorted())
    (found,) = fits
    words = f"network {found.name}: the only one that ships and does this"
    return replace(found, chosen=(words, *found.chosen))


def _on_network(name: str, network: Network, substrate: str, product: str) -> StartingCase:
    """A pair that works on one network."""
    findings = Findings()
    ways = dict(network.crossing)
    eaten = _those(network, Direction.CONSUMED)
    made = _those(network, Direction.PRODUCED)
    wanted: dict[str, tuple[str, ...]] = {}
    for what, word, listed, way, words in (
        ("substrate", substrate, eaten, Direction.CONSUMED, "taken up"),
        ("product", product, made, Direction.PRODUCED, "given off"),
    ):
        own = _own_name(word, ways) if word else None
        if word and (own is None or ways[own] not in (way, Direction.EITHER)):
            findings.add(
                "YN932",
                f"the {what} {word!r} cannot be {words} in {network.title!r}",
                left=f"{what}s: {', '.join(listed)}",
                hint=near(word, listed) or "Take one of these, or another network.",
            )
        wanted[what] = (own,) if own is not None else listed
    if findings.refused:
        raise InputError(findings.sorted())
    for one in wanted["substrate"]:
        others = [item for item in wanted["product"] if item != one]
        best = best_yields(network, one, others)
        for item in others:
            if item in best:
                shape = overall_shape(network, one, item)
                return StartingCase(
                    name=name,
                    network=network,
                    shape=shape,
                    product=item,
                    best=best[item],
                    chosen=_chosen(one, item, substrate, product),
                )
    raise InputError([*_no_pair(network, wanted, eaten, made)])


def _those(network: Network, way: Direction) -> tuple[str, ...]:
    """What a network is meant to take up or to give off; biomass last.

    A network that does not say is taken to be meant for all that holds carbon and crosses.
    """
    scope = network.meant_for
    if scope is not None:
        names = scope.substrates if way is Direction.CONSUMED else scope.products
    else:
        names = tuple(
            name
            for name, to in network.crossing
            if to in (way, Direction.EITHER)
            and (held := network.compound(name)) is not None
            and held.formula["C"]
            and name not in (CARBON_DIOXIDE, *NITROGEN_SOURCES)
        )
    return tuple(sorted(names, key=lambda name: name == BIOMASS))


def _chosen(one: str, item: str, substrate: str, product: str) -> tuple[str, ...]:
    found = []
    if not substrate:
        found.append(f"substrate {one}: the first that the network is meant for and that works")
    if not product:
        found.append(f"product {item}: the first that the network is meant for and that works")
    return tuple(found)


def _no_pair(
    network: Network,
    wanted: dict[str, tuple[str, ...]],
    eaten: tuple[str, ...],
    made: tuple[str, ...],
) -> Findings:
    """That nothing asked for works, and what would."""
    findings = Findings()
    substrates, products = wanted["substrate"], wanted["product"]
    works = {
        one: best_yields(network, one, [item for item in (*made, *products) if item != one])
        for one in (*eaten, *substrates)
    }
    from_here = sorted({item for one in substrates for item in works[one]} - set(substrates))
    to_there = [one for one, items in works.items() if set(items) & set(products)]
    one, item = " or ".join(substrates), " or ".join(products)
    if substrates == products:
        message = f"{one!r} is both substrate and product"
    else:
        message = f"{network.title!r} makes no {item} from {one}"
    findings.add(
        "YN932",
        message,
        left=f"{one} gives {', '.join(from_here) or 'nothing'}",
        right=f"{item} comes from {', '.join(to_there) or 'nothing'}",
        hint="Take one of these pairs, or another network.",
    )
    return findings
