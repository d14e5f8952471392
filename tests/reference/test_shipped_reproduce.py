"""Shipped networks: what each says it reproduces comes out, and it does what it is meant for.

The values and their sources stand in the network files themselves, under ``reproduces``.
"""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from typing import TYPE_CHECKING

import pytest

from yieldnet.foundation.findings import Severity
from yieldnet.model.case import Aim, AimDirection
from yieldnet.model.network import Direction
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.ladder import climb_down, objective_of
from yieldnet.prediction.overall import CARBON_DIOXIDE
from yieldnet.prediction.prepare import prepare
from yieldnet.reading.case_file import load_case
from yieldnet.reading.network_file import load_network
from yieldnet.reading.reproductions import load_reproductions
from yieldnet.reading.shipped import find_shipped, shipped_names
from yieldnet.verbs import audit, read_network, reproduce

if TYPE_CHECKING:
    from collections.abc import Callable
    from fractions import Fraction

    from yieldnet.model.network import Network
    from yieldnet.prediction.prepare import Prepared
    from yieldnet.prediction.reproduce import Reproduced

    Limits = Callable[[str, str, str], tuple[Fraction, Fraction | None]]

NAMES = shipped_names()


def _entries() -> list[tuple[str, str]]:
    """Name of each network with each of its entries; a file that cannot be read has none."""
    return [
        (name, item.name)
        for name in NAMES
        for item in load_reproductions(str(find_shipped(name)))[0]
    ]


def _pairs() -> list[tuple[str, str, str]]:
    """Each network with each substrate and each other compound it is meant to make of it."""
    found: list[tuple[str, str, str]] = []
    for name in NAMES:
        network, _ = load_network(str(find_shipped(name)))
        meant = network.meant_for if network is not None else None
        if meant is not None:
            found += [
                (name, substrate, product)
                for substrate in meant.substrates
                for product in meant.products
                if substrate != product
            ]
    return found


ENTRIES, PAIRS = _entries(), _pairs()


@cache
def _reproduced(name: str) -> dict[str, Reproduced]:
    return {item.name: item for item in reproduce(name)}


@cache
def _network(name: str) -> Network:
    return read_network(name)


def test_there_are_networks_to_test() -> None:
    assert {"facultative-succinate", "lysine-coryneform"} <= {name for name, _ in ENTRIES}
    assert {"facultative-succinate", "lysine-coryneform"} <= {name for name, *_ in PAIRS}


@pytest.mark.parametrize("name", NAMES)
def test_a_network_says_what_it_is_for_and_what_it_reproduces(name: str) -> None:
    network = _network(name)
    assert network.meant_for is not None
    found = _reproduced(name)
    assert len(found) >= 1
    assert all(item.source for item in found.values())
    assert all(item.source for item in network.parameter_sets)


@pytest.mark.parametrize("name", NAMES)
def test_a_network_audits_without_errors_and_warnings(name: str) -> None:
    told = [item for item in audit(name).findings if item.severity is not Severity.NOTE]
    assert [str(item) for item in told] == []


@pytest.mark.parametrize(("name", "entry"), ENTRIES)
def test_a_value_comes_out_and_its_case_is_not_doubtful(name: str, entry: str) -> None:
    item = _reproduced(name)[entry]
    assert item.agrees, f"expected {item.expected}, found {item.found} ({item.outcome})"
    doubts = [one for one in item.findings if one.severity is not Severity.NOTE]
    assert [str(one) for one in doubts] == []


def _case_text(network: Network, name: str, substrate: str) -> str:
    """A substrate with every co-feed that is neither food nor carbon, and all that may leave.

    Another substrate that the network is meant for is no co-feed, though hydrogen holds no carbon:
    with it free, carbon dioxide would become product without end. Of what goes either way, carbon
    dioxide and what holds no carbon stays so; the rest may only leave.
    """
    assert network.meant_for is not None
    fed, given, either = [], [], []
    for compound, way in network.crossing:
        if compound == substrate:
            continue
        held = network.compound(compound)
        assert held is not None
        free = compound == CARBON_DIOXIDE or not held.formula["C"]
        free = free and compound not in network.meant_for.substrates
        if way is Direction.CONSUMED:
            fed += [compound] * free
        elif way is Direction.EITHER and free:
            either.append(compound)
        else:
            given.append(compound)
    left = " + ".join([substrate, *(f"? {item}" for item in fed)])
    right = " + ".join(f"? {item}" for item in given)
    lines = [f"case: all of {substrate}", f"network: {name}", f"equation: {left} -> {right}"]
    if either:
        lines += ["either side:", *(f"  - {item}" for item in either)]
    return "\n".join(lines) + "\n"


@pytest.fixture(scope="module")
def limits(tmp_path_factory: pytest.TempPathFactory) -> Limits:
    """Best value by the network and by the elements alone of a product from a substrate."""
    path = tmp_path_factory.mktemp("cases") / "case.yaml"

    @cache
    def ready(name: str, substrate: str) -> Prepared:
        path.write_text(_case_text(_network(name), name, substrate), "utf-8")
        case, findings = load_case(str(path))
        assert case is not None, [str(item) for item in findings]
        found = prepare(case, Optimiser(engine_named("glpk")))
        assert [item for item in found.findings if item.code == "YN516"] == []
        return found

    @cache
    def found(name: str, substrate: str, product: str) -> tuple[Fraction, Fraction | None]:
        question = ready(name, substrate)
        aim = Aim(direction=AimDirection.MOST, compound=product)
        objective = objective_of(replace(question.case, aim=aim))
        assert objective is not None
        assert question.point is not None, "infeasible"
        ladder, best = climb_down(question.optimiser, question.layers, objective, question.point)
        assert best is not None
        assert best.status is Status.OPTIMAL
        assert ladder[0].rung == "elements"
        return best.value, ladder[0].value

    return found


@pytest.mark.parametrize(("name", "substrate", "product"), PAIRS)
def test_what_it_is_meant_for_is_possible_and_never_above_the_elements(
    limits: Limits, name: str, substrate: str, product: str
) -> None:
    best, by_elements = limits(name, substrate, product)
    assert by_elements is not None, "the elements alone set no limit"
    assert 0 <= best <= by_elements


@pytest.mark.parametrize("name", NAMES)
def test_every_substrate_is_used_and_every_product_is_made(limits: Limits, name: str) -> None:
    # Not every product comes from every substrate: xylitol comes from xylose alone.
    meant = _network(name).meant_for
    assert meant is not None
    useful = {pair[1:] for pair in PAIRS if pair[0] == name and limits(*pair)[0] > 0}
    assert {substrate for substrate, _ in useful} == set(meant.substrates)
    assert {product for _, product in useful} == set(meant.products)
