"""The verbs as functions, with the names and options of the command line."""

from __future__ import annotations

import os
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence
    from fractions import Fraction

    from yieldnet.audit.audit import AuditResult
    from yieldnet.model.case import Case
    from yieldnet.model.network import Network
    from yieldnet.prediction.result import Prediction
    from yieldnet.studies.addition_result import AdditionResult
    from yieldnet.studies.coupling import CouplingDesign
    from yieldnet.studies.knockout import KnockOutResult
    from yieldnet.studies.screen import ScreenResult
    from yieldnet.studies.tradeoff import Tradeoff

    Path = str | os.PathLike[str]

__all__ = [
    "additions",
    "audit",
    "balance",
    "couple",
    "explain",
    "knockout",
    "predict",
    "read_case",
    "read_network",
    "schema",
    "screen",
    "tradeoff",
]


def read_case(path: Path) -> Case:
    """Case of a file, with its network.

    Parameters
    ----------
    path : str or path
        Path of the case file.

    Returns
    -------
    Case
        The question as written, every number exact.

    Raises
    ------
    InputError
        If anything in the file or its network is wrong; carries all findings.

    Examples
    --------
    >>> read_case("examples/lysine/case.yaml").basis.name
    'glucose'
    """
    from yieldnet.reading.case_file import load_case

    case, findings = load_case(os.fspath(path))
    if case is None:
        raise InputError(findings.sorted())
    return case


def read_network(path: Path) -> Network:
    """Network of a file, or a shipped network by its name.

    Parameters
    ----------
    path : str or path
        Path of the network file, or the name of a shipped network.

    Returns
    -------
    Network
        The network as written.

    Raises
    ------
    InputError
        If anything in the file is wrong; carries all findings.

    Examples
    --------
    >>> read_network("lysine-coryneform").title
    'Coryneform lysine former on glucose'
    """
    from pathlib import Path

    from yieldnet.foundation.findings import Finding, near
    from yieldnet.reading.network_file import load_network
    from yieldnet.reading.shipped import find_shipped, shipped_names

    name = os.fspath(path)
    if not Path(name).suffix and Path(name).name == name and not find_shipped(name):
        known = shipped_names()
        hint = near(name, known) or f"Shipped networks: {', '.join(known)}."
        message = f"network {name!r} is neither a file nor a shipped network"
        raise InputError([Finding(code="YN513", message=message, hint=hint)])
    network, findings = load_network(str(find_shipped(name) or name))
    if network is None:
        raise InputError(findings.sorted())
    return network


def predict(
    case: Case | Path,
    *,
    engine: str = "glpk",
    fluxes: bool = False,
    proof: bool = False,
    order: Sequence[str] = (),
) -> Prediction:
    """Yield coefficients of a case by elements and by network, side by side.

    Parameters
    ----------
    case : Case or path
        The question, or the path of its file.
    engine : {"glpk", "optlang"}
        Solver whose answer is proven in fractions.
    fluxes : bool
        Whether the answer holds the fluxes at the aim.
    proof : bool
        Whether the answer holds the proof on paper.
    order : sequence of str
        Another order of the rungs below ``elements``, for a second ladder; empty for none.

    Returns
    -------
    Prediction
        Ranges, ladder and filled-in equation [mol/mol basis]; infeasible and unbounded are
        answers too.

    Raises
    ------
    InputError
        If the files must be refused; carries all findings.

    Examples
    --------
    >>> round(predict("examples/lysine/case.yaml").best_yield_mol_per_mol(), 3)
    0.811
    """
    from yieldnet.prediction.predict import Wanted, predict_case

    wanted = Wanted(fluxes=fluxes, proof=proof, order=tuple(order))
    return predict_case(_as_case(case), engine, wanted)


def balance(case: Case | Path, *, engine: str = "glpk") -> Prediction:
    """Yield coefficients of a case by elements alone.

    Parameters
    ----------
    case : Case or path
        The question, or the path of its file; its network is left out.
    engine : {"glpk", "optlang"}
        Solver whose answer is proven in fractions.

    Returns
    -------
    Prediction
        Ranges and ladder without the network [mol/mol basis].

    Raises
    ------
    InputError
        If the files must be refused; carries all findings.

    Examples
    --------
    >>> round(balance("examples/lysine/case.yaml").best_yield_mol_per_mol(), 3)
    0.857
    """
    from yieldnet.prediction.predict import balance_case

    return balance_case(_as_case(case), engine)


def audit(network: Network | Path, *, engine: str = "glpk") -> AuditResult:
    """Everything wrong or doubtful in a network.

    Parameters
    ----------
    network : Network or path
        The network, the path of its file, or the name of a shipped network.
    engine : {"glpk", "optlang"}
        Solver for the rules that need a linear problem.

    Returns
    -------
    AuditResult
        The findings of every rule.

    Raises
    ------
    InputError
        If the file cannot be read as a network; carries all findings.

    Examples
    --------
    >>> audit("lysine-coryneform").clean
    True
    """
    from yieldnet.audit.audit import audit_network
    from yieldnet.model.network import Network

    written = network if isinstance(network, Network) else read_network(network)
    return audit_network(written, engine)


def explain(word: str) -> str:
    """What a word of the glossary or a finding code means.

    Parameters
    ----------
    word : str
        Word, status, rung or code; capitals do not count.

    Returns
    -------
    str
        Its meaning.

    Raises
    ------
    KeyError
        If it is neither.

    Examples
    --------
    >>> explain("RQ")
    'Respiratory quotient: carbon dioxide given off per oxygen taken up.'
    """
    from yieldnet.foundation.catalogue import CATALOGUE
    from yieldnet.foundation.glossary import GLOSSARY

    for name, meaning in GLOSSARY.items():
        if name.casefold() == word.casefold():
            return meaning
    entry = CATALOGUE[word.upper()]
    return f"{entry.title}. {entry.why} {entry.way_out}"


def schema(file: str) -> dict[str, Any]:
    """JSON Schema of one of the two files.

    Parameters
    ----------
    file : {"case", "network"}
        Which file.

    Returns
    -------
    dict
        The schema, draft 2020-12.

    Raises
    ------
    KeyError
        If there is no such file.

    Examples
    --------
    >>> schema("case")["title"]
    'yieldnet case'
    """
    from yieldnet.reading.schema import case_schema, network_schema

    return {"case": case_schema, "network": network_schema}[file]()


def knockout(case: Case | Path, names: Sequence[str], *, engine: str = "glpk") -> KnockOutResult:
    """A case before and after switching reactions or groups off.

    Parameters
    ----------
    case : Case or path
        The question with a product as its aim, or the path of its file.
    names : sequence of str
        Reactions or groups of its network.
    engine : {"glpk", "optlang"}
        Solver whose answer is proven in fractions.

    Returns
    -------
    KnockOutResult
        Both answers, and what the cell would do [mol/mol basis].

    Raises
    ------
    InputError
        If the files must be refused, a name is unknown, or no uptake is left.

    Examples
    --------
    >>> result = knockout("examples/lysine/case.yaml", ["malic enzyme"])
    >>> result.after.aim.value
    Fraction(3, 4)
    """
    from yieldnet.studies.knockout import knock_out

    return knock_out(_as_case(case), names, engine)


def screen(
    case: Case | Path,
    *,
    depth: int = 1,
    groups: bool = False,
    score: str = "guaranteed",
    growth_share: float = 0.1,
    yes: bool = False,
    engine: str = "glpk",
    tick: Callable[[int, int], None] | None = None,
) -> ScreenResult:
    """All knock-outs of a case to a depth, ranked by what they do for the product.

    Parameters
    ----------
    case : Case or path
        The question with growth and a product as its aim, or the path of its file.
    depth : int
        Most knock-outs at once [-].
    groups : bool
        Whether groups are switched off as wholes.
    score : {"guaranteed", "product", "product-growth"}
        What is ranked.
    growth_share : float
        Required growth for ``product``, as a share of the most [-].
    yes : bool
        Whether it may take longer than a minute.
    engine : {"glpk", "optlang"}
        Solver whose answers prove the entries at the top.
    tick : callable, optional
        Called with the sets done and the sets in all.

    Returns
    -------
    ScreenResult
        Ranked sets.

    Raises
    ------
    InputError
        If the case cannot be studied, or the screen would take too long.

    Examples
    --------
    >>> result = screen("examples/succinate-from-xylose/case.yaml", depth=2)
    >>> result.entries[0].names
    ('alcohol dehydrogenase', 'lactate dehydrogenase')
    """
    import time

    from yieldnet.studies.screen import Score, screen_case

    return screen_case(
        _as_case(case),
        depth=depth,
        groups=groups,
        score=Score(score),
        growth_share=growth_share,
        confirmed=yes,
        engine=engine,
        tick=tick,
        clock=time.perf_counter,
    )


def tradeoff(
    cases: Case | Path | Sequence[Case | Path],
    *,
    x: str = "",
    y: str = "",
    over: str = "",
    engine: str = "glpk",
) -> Tradeoff:
    """All that two coefficients can be together, as an exact polygon for each case.

    Parameters
    ----------
    cases : Case or path, or sequence of them
        One question or several of the same basis, or the paths of their files.
    x : str
        Coefficient along x; biomass if empty.
    y : str
        Coefficient along y; the aim of the first case if empty.
    over : {"", "growth-rate", "oxygen"}
        Axis with a name of its own, instead of ``x``.
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.

    Returns
    -------
    Tradeoff
        Corners, edges and what changes along them [mol/mol basis], growth rates [1/h].

    Raises
    ------
    InputError
        If the files must be refused, or a case cannot be shown on these axes.
    ValueError
        If there is no case, or ``over`` is not known or stands beside ``x``.

    Examples
    --------
    >>> (region,) = tradeoff("examples/succinate-from-xylose/case.yaml").regions
    >>> [(round(float(at.x), 3), round(float(at.y), 3)) for at in region.corners]
    [(0.0, 0.0), (0.942, 0.0), (0.942, 0.496), (0.111, 1.028), (0.0, 1.041)]
    """
    from yieldnet.model.case import Case
    from yieldnet.studies.tradeoff import trade_off

    several = [cases] if isinstance(cases, Case | str | os.PathLike) else cases
    return trade_off([_as_case(case) for case in several], x, y, over, engine)


def additions(
    case: Case | Path,
    *,
    candidates: Network | Path | None = None,
    pairs: bool = False,
    with_deletions: bool = False,
    top: int = 5,
    engine: str = "glpk",
) -> AdditionResult:
    """What added reactions would bring to the aim of a case.

    Parameters
    ----------
    case : Case or path
        The case, or the path of its file; it needs a network and a product as its aim.
    candidates : Network or path, optional
        Network of candidate reactions, the path of its file, or the name of a shipped network;
        the candidate file that ships with the program if left out.
    pairs : bool
        Whether two candidates are tried together as well.
    with_deletions : bool
        Whether every knock-out is tried on top of the best additions.
    top : int
        How many of the best additions get knock-outs [-].
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.

    Returns
    -------
    AdditionResult
        Additions by gain, each with the rungs it relieves [mol/mol basis].

    Raises
    ------
    InputError
        If the files must be refused, or the case has no best value to improve; carries all
        findings.

    Examples
    --------
    >>> result = additions("examples/lysine/case.yaml")
    >>> result.singles[0].names, result.before, result.singles[0].value
    (('transhydrogenase without cost',), Fraction(30, 37), Fraction(6, 7))
    """
    from yieldnet.model.network import Network
    from yieldnet.reading.shipped import shipped_candidates
    from yieldnet.studies.additions import add_candidates

    if candidates is None:
        candidates = shipped_candidates()
    written = candidates if isinstance(candidates, Network) else read_network(candidates)
    return add_candidates(
        _as_case(case),
        written,
        pairs=pairs,
        with_deletions=with_deletions,
        top=top,
        engine=engine,
    )


def couple(
    case: Case | Path,
    *,
    least_yield: str | Fraction,
    growth_share: float = 0.1,
    depth: int = 3,
    alternatives: int = 10,
    groups: bool = False,
    engine: str = "glpk",
) -> CouplingDesign:
    """Smallest knock-out sets that force product whenever the cell grows.

    Parameters
    ----------
    case : Case or path
        The question with growth and a product as its aim, or the path of its file.
    least_yield : str or Fraction
        Product to force, in mol/mol basis or as a text with a unit [mol/mol].
    growth_share : float
        Growth from which on it is forced, as a share of the most [-].
    depth : int
        Largest set to look for [-].
    alternatives : int
        Most sets of one size [-].
    groups : bool
        Whether groups are knocked out as wholes.
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.

    Returns
    -------
    CouplingDesign
        Sets with what they force, exact [mol/mol basis].

    Raises
    ------
    InputError
        If the case cannot be studied, or the yield cannot be read.

    Examples
    --------
    >>> design = couple("examples/succinate-from-xylose/case.yaml", least_yield="0.4")
    >>> design.sets[0].members
    ('alcohol dehydrogenase', 'lactate dehydrogenase')
    """
    from yieldnet.studies.design import design_case

    return design_case(
        _as_case(case),
        least_yield=least_yield,
        growth_share=growth_share,
        depth=depth,
        alternatives=alternatives,
        groups=groups,
        engine=engine,
    )


def _as_case(case: Case | Path) -> Case:
    from yieldnet.model.case import Case

    return case if isinstance(case, Case) else read_case(case)
