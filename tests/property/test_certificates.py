"""Proofs on paper, on every example and on a thousand random networks.

The checker shares nothing with the solver; what it is given is put together here from the case as
it was read: equations, sides, statements, and the reconciled point that the answer prints.
"""

from __future__ import annotations

import json
from copy import deepcopy
from fractions import Fraction
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

from tests.property.solved import solved_cases
from tests.reference.certificate_checker import check_proof
from yieldnet.model.binding import bind
from yieldnet.model.case import AimDirection, EnergySurplus
from yieldnet.model.network import BIOMASS, CarrierKind, Direction
from yieldnet.prediction.certificate import certificate
from yieldnet.prediction.result import Outcome, Prediction
from yieldnet.report.json_form import as_text, prediction_form
from yieldnet.verbs import read_case

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Mapping

    from click.testing import Result

    from tests.property.solved import Solved
    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case

NETWORKS = 1_000
"""Random networks whose proof is checked [-]."""
ZERO = Fraction(0)
EXAMPLES = sorted((Path(__file__).resolve().parents[2] / "examples").glob("*/case.yaml"))
Limits = tuple[Fraction | None, Fraction | None]


def _check(
    case: Case, bound: BoundNetwork, proof: Mapping[str, Any], point: Mapping[str, Fraction]
) -> None:
    """Check a proof against what the case says."""
    network, aim = case.network, case.aim
    assert network is not None
    assert aim is not None
    strain = network.strain(case.strain.name) if case.strain else None
    names = [*(strain.off if strain else ()), *(item.name for item in case.knock_outs)]
    off = {member for name in names for member in network.members(name)}
    sides = {item.name: item.side for item in case.coefficients}
    maintained, need, kept = _maintenance(case)
    limits = {name: _limits(case, name, point) for name, _ in network.crossing}
    for item in network.carriers:
        if item.kind is CarrierKind.ENERGY:
            least = need if item.name == maintained else ZERO
            limits[item.name] = (
                least,
                least if case.energy_surplus is EnergySurplus.NONE else None,
            )
    about = {item.label: item.compound for item in case.measured}
    about |= {"growth rate / substrate uptake": BIOMASS, "maintenance": maintained}
    about |= {f"{word} {name}": name for name in sides for word in ("written", "demand")}
    check_proof(
        proof,
        {
            item.name: (dict(item.coefficients), item.reversible)
            for item in bound.reactions
            if item.name not in off
        },
        limits,
        {aim.compound: Fraction(-1 if sides.get(aim.compound) is Direction.CONSUMED else 1)},
        1 if aim.direction is AimDirection.MOST else -1,
        about,
        {maintained: {BIOMASS: kept}} if kept else {},
    )


def _limits(case: Case, name: str, point: Mapping[str, Fraction]) -> Limits:
    """Least and most that may leave, from side, written value, reconciled point and demand."""
    if name == case.basis.name:
        return Fraction(-1), Fraction(-1)
    item = case.coefficient(name)
    if item is None:
        return ZERO, ZERO
    lows: list[Fraction] = []
    highs: list[Fraction] = []
    if item.side is not Direction.EITHER:
        lows.append(ZERO)
    exact = [point[name]] if name in point else []
    # The aim's own coefficient is set aside, exact or not.
    own = case.aim is not None and case.aim.compound == name
    if item.written is not None and item.written.last_place is None and not own:
        exact.append(item.written.value)
    lows += exact
    highs += exact
    for demand in case.demands:
        if demand.compound == name:
            lows += [] if demand.low is None else [demand.low]
            highs += [] if demand.high is None else [demand.high]
    low, high = max(lows, default=None), min(highs, default=None)
    if item.side is Direction.CONSUMED:
        return None if high is None else -high, None if low is None else -low
    return low, high


def _maintenance(case: Case) -> tuple[str, Fraction, Fraction]:
    """Carrier, what must be left per mol basis, and what more per mol biomass."""
    network = case.network
    assert network is not None
    if network.maintenance is None:
        return "", ZERO, ZERO
    carrier, rate = network.maintenance.carrier, network.maintenance.rate_mol_per_gram_hour
    if case.substrate_uptake is not None:
        return carrier, rate / case.substrate_uptake.value, ZERO
    if case.growth_rate is not None and BIOMASS in {item.name for item in case.coefficients}:
        mass = case.compound(BIOMASS).weight.molar_mass
        assert mass is not None
        return carrier, ZERO, rate / case.growth_rate.value * mass
    return carrier, ZERO, ZERO


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.parent.name)
def test_every_example_with_an_aim_is_proven_on_paper(
    path: Path, run: Callable[..., Result]
) -> None:
    form = json.loads(run("predict", str(path), "--proof", "--json").stdout)
    case = read_case(path)
    assert case.network is not None
    if form["status"] != "solved" or case.aim is None:
        assert form["proof"] is None
        assert (form["conflict"] is None) == (form["status"] == "solved")
        return
    assert form["proof"]["value"] == form["aim"]["exact"]
    point = {
        item["compound"]: Fraction(item["reconciled"]["exact"])
        for item in form["coefficients"]
        if item["reconciled"]
    }
    bound, _ = bind(case.network, dict(case.parameters))
    _check(case, bound, form["proof"], point)


def test_examples_hold_proofs() -> None:
    assert sum(read_case(path).aim is not None for path in EXAMPLES) >= 4


def _proof(item: Solved) -> dict[str, Any]:
    """Proof of a best value as the JSON tells it."""
    answer = Prediction(
        case=item.case,
        outcome=Outcome.SOLVED,
        aim=None,
        freedom=(),
        ladder=(),
        findings=(),
        assumptions=(),
        certificate=certificate(item.optimiser, item.layers, item.best),
    )
    proof: dict[str, Any] = json.loads(as_text(prediction_form(answer)))["proof"]
    return proof


def test_random_networks_are_proven_on_paper() -> None:
    kinds = dict.fromkeys(("most", "least", "ATP", "tied", "none", "degenerate", "statement"), 0)
    for item in solved_cases(NETWORKS):
        case, proof = item.case, _proof(item)
        _check(case, item.bound, proof, item.point)
        assert case.aim is not None
        kinds[case.aim.direction] += 1
        kinds["ATP"] += case.aim.is_energy
        kinds["tied"] += bool(_maintenance(case)[2])
        kinds["none"] += case.energy_surplus is EnergySurplus.NONE
        kinds["degenerate"] += any(
            told["flux"] == told["made"] == "0" for told in proof["reactions"]
        )
        kinds["statement"] += len(proof["terms"]) > 1
    # The thousand must hold every kind of proof, or the law says little.
    assert min(kinds.values()) >= 10, kinds


def _touched(case: Case, proof: dict[str, Any]) -> Iterator[tuple[str, dict[str, Any]]]:
    """The proof with one thing changed at a time, and what the checker must say to it."""

    def more(holder: dict[str, str], key: str) -> None:
        holder[key] = str(Fraction(holder.get(key, "0")) + Fraction(1, 7))

    wrong = deepcopy(proof)
    more(wrong["worths"], case.basis.name)
    yield ": made", wrong
    wrong = deepcopy(proof)
    more(wrong["reactions"][0], "made")
    yield ": made", wrong
    wrong = deepcopy(proof)
    wrong["reactions"].pop()
    yield "not the reactions that are allowed", wrong
    wrong = deepcopy(proof)
    for item in wrong["reactions"]:
        # All that is eaten: a single flux might have room to move.
        item["flux"] = str(2 * Fraction(item["flux"]))
    yield "leaves too (little|much)", wrong
    wrong = deepcopy(proof)
    wrong["terms"].append({"name": case.basis.name, "worth": "1/7", "amount": "1"})
    yield "the term is not its limit", wrong
    wrong = deepcopy(proof)
    wrong["terms"].append({"name": "luck", "worth": "1/7", "amount": "1"})
    yield "a term about nothing that leaves", wrong
    wrong = deepcopy(proof)
    more(wrong, "value")
    yield "line, fluxes and value differ", wrong


def test_a_proof_that_was_touched_does_not_pass() -> None:
    refused = 0
    for item in solved_cases(60):
        for message, wrong in _touched(item.case, _proof(item)):
            with pytest.raises(AssertionError, match=message):
                _check(item.case, item.bound, wrong, item.point)
            refused += 1
    assert refused == 60 * 7
