"""Measured sets that hold more than they need: named ones, and random ones with correlated errors.

The values of the named sets keep every equation between them exactly, so that what a test adds to
them is all that is wrong with them.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from functools import cache
from pathlib import Path
from random import Random
from tempfile import TemporaryDirectory
from typing import TYPE_CHECKING

from tests.property.cases import Wanted, layers_of, random_case
from yieldnet.balance.statements import side_sign, statements_of, yield_column
from yieldnet.foundation.exact import is_positive_definite
from yieldnet.model.case import Correlation, Measurement
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.coefficients import layer_equations
from yieldnet.prediction.data_tests import judge_layers
from yieldnet.prediction.layers import build_layers
from yieldnet.verbs import read_case

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from yieldnet.balance.freedom import CoefficientEquations
    from yieldnet.balance.redundancy import Redundancy
    from yieldnet.model.case import Case
    from yieldnet.prediction.data_tests import LayerData
    from yieldnet.prediction.layers import Layers

__all__ = [
    "NAMED",
    "Judged",
    "case_of_text",
    "judge",
    "named_set",
    "random_correlations",
    "random_sets",
    "simulated",
    "with_values",
]

LEVEL = 0.95
ZERO = Fraction(0)
MIXED_ACIDS = (
    "? biomass + ? succinate + ? formate + ? acetate + ? ethanol + ? lactate + ? hydrogen"
    " + ? carbon dioxide"
)
NAMED = {
    "aerobic yeast": """
case: aerobic yeast
equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? carbon dioxide
either side: [water]
compounds:
  biomass: CH1.8O0.5N0.2
measured:
  oxygen: 2.85 ± 0.08
  biomass: 3.0 ± 0.09
  carbon dioxide: 3.0 ± 0.08
""",
    "mixed acid": f"""
case: mixed acid
equation: glucose + ? ammonia -> {MIXED_ACIDS}
either side: [water]
compounds:
  biomass: CH1.8O0.5N0.2
measured:
  biomass: 0.40 ± 0.02
  succinate: 0.10 ± 0.008
  formate: 0.50 ± 0.03
  acetate: 0.80 ± 0.04
  ethanol: 0.90 ± 0.04
  lactate: 0.10 ± 0.01
  hydrogen: 0.80 ± 0.05
  carbon dioxide: 1.20 ± 0.06
correlations:
  acetate: {{ethanol: 0.5, lactate: 0.3}}
  carbon dioxide: {{hydrogen: 0.6}}
""",
    "mixed acid with a network": f"""
case: mixed acid with a network
network: facultative-succinate
strain: mixed-acid wild type without air
equation: glucose + ? ammonia -> {MIXED_ACIDS}
either side: [water]
measured:
  biomass: 0.40 ± 0.02
  succinate: 0.11 ± 0.008
  formate: 0.61 ± 0.03
  acetate: 0.75 ± 0.03
  ethanol: 0.85 ± 0.03
  lactate: 0.11 ± 0.01
  hydrogen: 1.04 ± 0.05
  carbon dioxide: 1.04 ± 0.05
""",
}
"""Cases by title; their values are moved until they agree before they are used."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Judged:
    """A case with its problems, its equations and the tests of its measured values."""

    case: Case
    layers: Layers
    optimiser: Optimiser
    equations: dict[str, CoefficientEquations]
    tested: tuple[LayerData, ...]

    @property
    def data(self) -> Redundancy:
        """Equations of the last layer that adds any."""
        return self.tested[-1].redundancy

    @property
    def last(self) -> CoefficientEquations:
        """Equalities of the layer of :attr:`data`."""
        return self.equations[self.tested[-1].layer]


def judge(case: Case) -> Judged:
    """Problems of a case and the tests of its values."""
    statements = statements_of(case)
    layers = build_layers(case, statements, None, {}) if case.network is None else layers_of(case)
    equations = layer_equations(layers)
    return Judged(
        case=case,
        layers=layers,
        optimiser=Optimiser(engine_named("glpk")),
        equations=equations,
        tested=judge_layers(layers, equations, LEVEL),
    )


def case_of_text(text: str) -> Case:
    """Case of the text of its file."""
    with TemporaryDirectory() as folder:
        path = Path(folder, "case.yaml")
        path.write_text(text, "utf-8")
        return read_case(path)


def with_values(data: Redundancy, values: Sequence[Fraction]) -> Redundancy:
    """The same equations with other measured values."""
    moved = zip(data.measured, values, strict=True)
    return replace(data, measured=tuple(replace(item, value=value) for item, value in moved))


def simulated(data: Redundancy, count: int, seed: int) -> Iterator[tuple[Fraction, ...]]:
    """Values drawn round those of a set with the stated errors, in millionths."""
    import numpy as np

    generator = np.random.default_rng(seed)
    spread = np.array([[float(value) for value in row] for row in data.covariance])
    centre = np.array([float(item.value) for item in data.measured])
    for row in generator.multivariate_normal(centre, spread, size=count):
        yield tuple(Fraction(round(1e6 * float(value)), 10**6) for value in row)


@cache
def named_set(name: str) -> Judged:
    """Named set, its values moved by least squares until they keep every equation exactly."""
    judged = judge(case_of_text(NAMED[name]))
    moves = dict(zip(judged.data.measured, judged.data.adjustments(), strict=True))
    measured = tuple(replace(item, value=item.value + moves[item]) for item in judged.case.measured)
    found = judge(replace(judged.case, measured=measured))
    assert not any(found.data.deviations)
    assert found.data.degrees >= 2
    return found


def random_correlations(rng: Random, names: Sequence[str]) -> tuple[Correlation, ...]:
    """Correlations of every pair that leave the covariance positive definite."""
    size = len(names)
    roots = [[rng.gauss(0, 1) for _ in range(size)] for _ in names]
    lengths = [sum(x * x for x in row) ** 0.5 for row in roots]
    shrink = 1.0
    while True:
        table = {
            (i, j): Fraction(
                round(
                    100
                    * shrink
                    * sum(x * y for x, y in zip(roots[i], roots[j], strict=True))
                    / (lengths[i] * lengths[j])
                ),
                100,
            )
            for j in range(size)
            for i in range(j)
        }
        matrix = [
            [Fraction(1) if i == j else table[min(i, j), max(i, j)] for j in range(size)]
            for i in range(size)
        ]
        if is_positive_definite(matrix):
            return tuple(
                Correlation(first=names[i], second=names[j], value=value)
                for (i, j), value in table.items()
                if value
            )
        shrink *= 0.8


def random_sets(count: int, correlated: bool = True) -> list[Judged]:
    """Random cases on random networks, with so much measured that the values tie one another."""
    found: list[Judged] = []
    seed = 0
    while len(found) < count:
        seed += 1
        case = random_case(
            4 + seed % 7, seed, Wanted(measured="none", demands=False, conditions=False)
        )
        judged = judge(_much_measured(Random(f"set {seed}"), case, correlated))
        if judged.data.degrees and judged.data.consistent:
            found.append(judged)
    return found


def _much_measured(rng: Random, case: Case, correlated: bool) -> Case:
    """Most coefficients measured at a point of the equalities, with noise."""
    judged = judge(case)
    answer = judged.optimiser.optimise(judged.layers.final, {})
    point: Mapping[str, Fraction] = {}
    if answer.status is Status.OPTIMAL:
        point = {
            item.name: side_sign(item.side) * answer[yield_column(item.name)]
            for item in case.coefficients
        }
    measured = []
    for name, value in point.items():
        if rng.random() < 0.75:
            sd = max(abs(value) * Fraction(rng.randint(2, 10), 100), Fraction(1, 100))
            value += sd * Fraction(round(100 * rng.gauss(0, 1)), 100)
            measured.append(
                Measurement(
                    compound=name, value=value, sd=sd, text=str(value), label=f"measured {name}"
                )
            )
    names = [item.compound for item in measured]
    return replace(
        case,
        measured=tuple(measured),
        correlations=random_correlations(rng, names) if correlated else (),
        aim=None,
    )
