"""The verbs as functions, with the names and options of the command line."""

from __future__ import annotations

import os
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence
    from fractions import Fraction

    from yieldnet.audit.audit import AuditResult
    from yieldnet.chemistry.macromolecules import BiomassComposition
    from yieldnet.foundation.findings import Finding
    from yieldnet.model.case import Case
    from yieldnet.model.cultivation import Cultivation
    from yieldnet.model.network import Network
    from yieldnet.model.reproduction import Reproduction
    from yieldnet.plant.sheet import PlantSheet
    from yieldnet.prediction.energetics import Energetics
    from yieldnet.prediction.growth import GrowthCurve
    from yieldnet.prediction.reconciliation import Reconciliation
    from yieldnet.prediction.reproduce import Reproduced
    from yieldnet.prediction.result import Prediction
    from yieldnet.rates.result import RateResult
    from yieldnet.report.new_folder import NewStudy
    from yieldnet.report.study import Study
    from yieldnet.report.verify import Verification
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
    "biomass_from",
    "couple",
    "energetics",
    "explain",
    "growth",
    "knockout",
    "new",
    "plant",
    "predict",
    "rates",
    "read_case",
    "read_network",
    "read_run",
    "reconcile",
    "report",
    "reproduce",
    "schema",
    "screen",
    "tradeoff",
    "verify",
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
    from yieldnet.reading.network_file import load_network

    network, findings = load_network(_network_path(path))
    if network is None:
        raise InputError(findings.sorted())
    return network


def _network_path(path: Path) -> str:
    """Path of a network file, or of a shipped network by its name."""
    from pathlib import Path

    from yieldnet.foundation.findings import Finding, near
    from yieldnet.reading.shipped import find_shipped, shipped_names

    name = os.fspath(path)
    if not Path(name).suffix and Path(name).name == name and not find_shipped(name):
        known = shipped_names()
        hint = near(name, known) or f"Shipped networks: {', '.join(known)}."
        message = f"network {name!r} is neither a file nor a shipped network"
        raise InputError([Finding(code="YN513", message=message, hint=hint)])
    return str(find_shipped(name) or name)


def read_reproducing_network(path: Path) -> tuple[Network, tuple[Reproduction, ...]]:
    """Network of a file, or a shipped one by its name, with the values it says it gives again.

    Parameters
    ----------
    path : str or path
        Path of the network file, or the name of a shipped network.

    Returns
    -------
    Network
        The network as written.
    tuple of Reproduction
        Entries of ``reproduces``, in written order.

    Raises
    ------
    InputError
        If anything in the file is wrong; carries all findings.
    """
    from yieldnet.reading.reproductions import load_reproducing_network

    network, reproductions, findings = load_reproducing_network(_network_path(path))
    if network is None or findings.refused:
        raise InputError(findings.sorted())
    return network, reproductions


def read_run(path: Path) -> Cultivation:
    """Cultivation of a run file, with its sheet.

    Parameters
    ----------
    path : str or path
        Path of the run file.

    Returns
    -------
    Cultivation
        Everything that was measured, in h, L, mol, g dry weight, K and kPa.

    Raises
    ------
    InputError
        If anything in the file or its sheet is wrong; carries all findings.

    Examples
    --------
    >>> run = read_run("examples/batch/run.yaml")
    >>> run.kind.value, run.broth[0].compound
    ('batch', 'biomass')
    """
    from yieldnet.reading.run_file import load_run

    run, findings = load_run(os.fspath(path))
    if run is None:
        raise InputError(findings.sorted())
    return run


def predict(
    case: Case | Path,
    *,
    engine: str = "glpk",
    fluxes: bool = False,
    proof: bool = False,
    order: Sequence[str] = (),
    level: float = 0.95,
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
    level : float
        Probability with which the test of the measured values passes correct ones [-].

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

    wanted = Wanted(fluxes=fluxes, proof=proof, order=tuple(order), level=level)
    return predict_case(_as_case(case), engine, wanted)


def balance(case: Case | Path, *, engine: str = "glpk", level: float = 0.95) -> Prediction:
    """Yield coefficients of a case by elements alone.

    Parameters
    ----------
    case : Case or path
        The question, or the path of its file; its network is left out.
    engine : {"glpk", "optlang"}
        Solver whose answer is proven in fractions.
    level : float
        Probability with which the test of the measured values passes correct ones [-].

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

    return balance_case(_as_case(case), engine, level)


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
    from dataclasses import replace

    from yieldnet.audit.audit import audit_network
    from yieldnet.foundation.findings import Findings
    from yieldnet.model.network import Network
    from yieldnet.reading.reproductions import load_reproducing_network

    if isinstance(network, Network):
        return audit_network(network, engine)
    written, _, doubts = load_reproducing_network(_network_path(network))
    if written is None:
        raise InputError(doubts.sorted())
    result = audit_network(written, engine)
    findings = Findings(list(doubts))
    findings.extend(result.findings)
    return replace(result, findings=findings.sorted())


def reproduce(network: Path, *, engine: str = "glpk") -> tuple[Reproduced, ...]:
    """Whether a network still gives the values that its file says it reproduces.

    Parameters
    ----------
    network : str or path
        Path of the network file, or the name of a shipped network.
    engine : {"glpk", "optlang"}
        Solver whose answer is proven in fractions.

    Returns
    -------
    tuple of Reproduced
        Expected and found value of each entry [its own unit], and whether they agree; infeasible
        and unbounded are told.

    Raises
    ------
    InputError
        If the file, or a case in it, must be refused; carries all findings.

    Examples
    --------
    >>> all(item.agrees for item in reproduce("lysine-coryneform"))
    True
    """
    from yieldnet.prediction.reproduce import reproduce_all

    _, reproductions = read_reproducing_network(network)
    return reproduce_all(reproductions, engine)


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


def rates(run: Cultivation | Path) -> RateResult:
    """Rates and yields of a cultivation run, with their full covariance.

    Parameters
    ----------
    run : Cultivation or path
        The run, or the path of its file.

    Returns
    -------
    RateResult
        For each state growth rate [1/h], specific rates [mol/g/h], volumetric rates [mol/L/h] and
        yields [mol/mol basis].

    Raises
    ------
    InputError
        If the files must be refused, or rates cannot be found; carries all findings.

    Examples
    --------
    >>> state = rates("examples/batch/run.yaml").states[0]
    >>> state.products
    ('biomass', 'succinate', 'formate', 'acetate', 'ethanol')
    """
    from yieldnet.model.cultivation import Cultivation
    from yieldnet.rates.rates import find_rates

    return find_rates(run if isinstance(run, Cultivation) else read_run(run))


def reconcile(
    case: Case | Path,
    *,
    elements: bool = False,
    level: float = 0.95,
    of: str = "",
    precision: float | Fraction = 0.05,
    draws: int = 400,
    engine: str = "glpk",
    tick: Callable[[int, int], None] | None = None,
) -> Reconciliation:
    """What the balances say of the measured values of a case, and what to measure next.

    Parameters
    ----------
    case : Case or path
        The question with its measured values, or the path of its file.
    elements : bool
        Whether the network of the case is left out.
    level : float
        Probability with which the test of the measured values passes correct ones [-].
    of : str
        Coefficient whose range the next measurement is to narrow; the aim if empty.
    precision : float or Fraction
        Standard deviation of the next measurement, as a share of its value [-].
    draws : int
        Sets of values drawn where there is no closed form [-].
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.
    tick : callable, optional
        Called with the sets drawn and the sets in all.

    Returns
    -------
    Reconciliation
        Tests, suspects, reconciled and calculated values [mol/mol basis].

    Raises
    ------
    InputError
        If the files must be refused, nothing is measured, or ``of`` is not in the equation.
    ValueError
        If the level or the precision is no share between 0 and 1, or fewer than two sets are
        drawn.

    Examples
    --------
    >>> result = reconcile("examples/succinate-from-xylose/case.yaml")
    >>> result.failed is None, result.next[0].compound
    (True, 'carbon dioxide')
    """
    from fractions import Fraction

    from yieldnet.prediction.reconcile import reconcile_case

    return reconcile_case(
        _as_case(case),
        network=not elements,
        level=level,
        of=of,
        precision=Fraction(str(precision)),
        draws=draws,
        engine=engine,
        tick=tick,
    )


def energetics(case: Case | Path, *, engine: str = "glpk") -> Energetics:
    """Heat and Gibbs energy of the predicted overall equation of a case.

    Parameters
    ----------
    case : Case or path
        The question, or the path of its file.
    engine : {"glpk", "optlang"}
        Solver whose answer is proven in fractions.

    Returns
    -------
    Energetics
        Closure, heat and Gibbs energy [kJ/mol basis], biomass yields [C-mol/mol basis]; what cannot
        be told is ``None`` with a finding.

    Raises
    ------
    InputError
        If the files must be refused; carries all findings.

    Examples
    --------
    >>> result = energetics("examples/energetics/case.yaml")
    >>> [item.closes for item in result.closures], result.heat.oxygen > 0
    ([True, True], True)
    """
    from yieldnet.prediction.energetics import energetics_case

    return energetics_case(_as_case(case), engine)


def growth(
    case: Case | Path, *, rates: Sequence[Fraction | float] = (), engine: str = "glpk"
) -> GrowthCurve:
    """Most biomass of a case at a series of growth rates, with true yield and maintenance.

    Parameters
    ----------
    case : Case or path
        The question, or the path of its file; its aim, growth rate and uptake are set aside.
    rates : sequence of Fraction or float
        Growth rates; a series round that of the case if empty [1/h].
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.

    Returns
    -------
    GrowthCurve
        Yields [mol/mol basis], straight pieces, yields on ATP [g/mol].

    Raises
    ------
    InputError
        If the files must be refused or the case does not grow; carries all findings.
    ValueError
        If a growth rate is not above zero.

    Examples
    --------
    >>> curve = growth("examples/succinate-from-xylose/case.yaml", rates=[0.08])
    >>> round(float(curve.points[0].y_atp), 2)
    9.69
    """
    from fractions import Fraction

    from yieldnet.prediction.growth import grow_case

    wanted = [Fraction(str(rate)) for rate in rates]
    return grow_case(_as_case(case), wanted, engine)


def biomass_from(
    line: str, *, monomers: str = "Escherichia coli", normalise: bool = False
) -> BiomassComposition:
    """Biomass put together from the shares of its macromolecules.

    Parameters
    ----------
    line : str
        Macromolecules with their shares of the dry weight, comma between, and ash [g/g].
    monomers : str
        Organism whose monomers are taken.
    normalise : bool
        Whether all shares are divided by their sum.

    Returns
    -------
    BiomassComposition
        Formula per mol of carbon and all that follows from it [mol/C-mol].

    Raises
    ------
    InputError
        If the line is not understood, or does not sum to 1; carries all findings.

    Examples
    --------
    >>> cell = biomass_from("protein 0.52, RNA 0.16, DNA 0.03, lipid 0.09, glycogen 0.15, ash 0.05")
    >>> round(float(cell.degree_of_reduction), 2)
    4.16
    """
    from yieldnet.reading.composition import read_composition_line

    composed, findings = read_composition_line(line, monomers, normalise=normalise)
    if composed is None:
        raise InputError(findings.sorted())
    return composed.composition


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


def plant(
    cases: Case | Path | Sequence[Case | Path], *, engine: str = "glpk"
) -> tuple[PlantSheet, ...]:
    """Plant sheet of each case: streams, base, oxygen, heat, vessels, raw materials.

    Parameters
    ----------
    cases : Case or path, or sequence of them
        Questions with a section ``plant``, or the paths of their files.
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.

    Returns
    -------
    tuple of PlantSheet
        One sheet a case, streams in kg/h and t/y; every figure with unit, formula and inputs.

    Raises
    ------
    InputError
        If the files must be refused, no sheet can be made, or two cases have prices in different
        currencies; carries all findings of all cases.
    ValueError
        If there is no case.

    Examples
    --------
    >>> (sheet,) = plant("examples/plant/case.yaml")
    >>> round(float(sheet.stream("glucose").t_per_y))
    23650
    """
    from yieldnet.model.case import Case
    from yieldnet.plant.plant import plant_cases

    several = [cases] if isinstance(cases, Case | str | os.PathLike) else cases
    if not several:
        raise ValueError("there is no case")
    read: list[Case] = []
    refused: list[Finding] = []
    for case in several:
        try:
            read.append(_as_case(case))
        except InputError as error:
            refused.extend(error.findings)
    if refused:
        raise InputError(refused)
    return plant_cases(read, engine)


def new(
    folder: Path,
    *,
    network: Path = "",
    substrate: str = "",
    product: str = "",
    plant: bool = True,
    own_network: bool = False,
    run: str = "",
    force: bool = False,
) -> NewStudy:
    """Files to start a study from: a commented case that has an answer as it stands.

    Parameters
    ----------
    folder : str or path
        Where they are written; the folder is made if it is not there.
    network : str or path
        Name of a shipped network, or path of a network file; if empty, the one shipped network
        that is meant for substrate and product.
    substrate, product : str
        What the case asks about, by name or synonym; if empty, the first that the network is meant
        for and that works.
    plant : bool
        Whether the case has a plant, in placeholders.
    own_network : bool
        Whether a copy of the network file is put beside the case.
    run : {"", "batch", "fed-batch", "chemostat"}
        Kind of a run file with its sheet, in placeholders; empty for none.
    force : bool
        Whether files that are there may be replaced.

    Returns
    -------
    NewStudy
        What was written, and the first answer [mol/mol basis].

    Raises
    ------
    InputError
        If no network or several fit, the product is not made of the substrate, or files are there
        already; nothing is written then.
    OSError
        If the folder cannot be written to.

    Examples
    --------
    >>> from tempfile import TemporaryDirectory
    >>> with TemporaryDirectory() as place:
    ...     study = new(f"{place}/lysine", network="lysine-coryneform")
    >>> study.files, study.product, study.best
    (('case.yaml',), 'L-lysine', Fraction(6, 7))
    """
    from pathlib import Path

    from yieldnet.reading.shipped import shipped_names
    from yieldnet.report.new_folder import write_study
    from yieldnet.studies.starting_case import start_case

    names = [os.fspath(network)] if os.fspath(network) else list(shipped_names())
    start = start_case([(name, read_network(name)) for name in names], substrate, product)
    return write_study(
        start, Path(folder), plant=plant, own_network=own_network, run=run, force=force
    )


def report(
    case: Path,
    *,
    out: Path | None = None,
    xlsx: Path | None = None,
    pictures: Path | None = None,
    date: str = "",
    force: bool = False,
    engine: str = "glpk",
) -> Study:
    """A feasibility study of a case, as a page, a workbook and pictures.

    Parameters
    ----------
    case : str or path
        Path of the case file; the report holds the file, so a case in memory is not enough.
    out : str or path, optional
        HTML file to write.
    xlsx : str or path, optional
        Workbook to write.
    pictures : str or path, optional
        Folder to write the pictures into, each as SVG and PNG.
    date : str
        Date to print; none if empty, so that the same input is the same file.
    force : bool
        Whether files that are there already may be replaced.
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.

    Returns
    -------
    Study
        All that was found [mol/mol basis], in the plant [kg/h] and [t/y].

    Raises
    ------
    InputError
        If the files must be refused; carries all findings.
    FileExistsError
        If a file is there already and ``force`` is not given.

    Examples
    --------
    >>> study = report("examples/plant/case.yaml")
    >>> float(study.plant.figure("vessels").value)
    16.0
    """
    from pathlib import Path

    from yieldnet.reading.study_inputs import case_of_inputs, read_inputs
    from yieldnet.report.study import study_of

    inputs, findings = read_inputs(os.fspath(case))
    if inputs is None:
        raise InputError(findings.sorted())
    # Made from the texts, as a repetition will make it.
    read, findings = case_of_inputs(inputs)
    if read is None:
        raise InputError(findings.sorted())
    study = study_of(read, inputs, engine, _versions())
    if out is not None:
        from yieldnet.report.html_page import save_page

        save_page(study, Path(out), date, force)
    if xlsx is not None:
        from yieldnet.report.workbook import save_workbook

        save_workbook(study, Path(xlsx), force)
    if pictures is not None:
        from yieldnet.report.study_pictures import save_study_pictures

        save_study_pictures(study, Path(pictures), force)
    return study


def verify(file: Path) -> Verification:
    """Whether a report still comes out of the inputs it holds.

    Parameters
    ----------
    file : str or path
        Path of the report.

    Returns
    -------
    Verification
        Every figure and word that differs.

    Raises
    ------
    InputError
        If the file is no report, or its inputs must be refused; carries all findings.

    Examples
    --------
    >>> from pathlib import Path
    >>> from tempfile import TemporaryDirectory
    >>> with TemporaryDirectory() as folder:
    ...     study = report("examples/lysine/case.yaml", out=Path(folder) / "study.html")
    ...     verify(Path(folder) / "study.html").same
    True
    """
    from yieldnet.reading.study_inputs import case_of_inputs, read_report
    from yieldnet.report.html_page import page_of
    from yieldnet.report.study import study_of
    from yieldnet.report.verify import compare_pages

    told, findings = read_report(os.fspath(file))
    if told is None:
        raise InputError(findings.sorted())
    case, findings = case_of_inputs(told.inputs)
    if case is None:
        raise InputError(findings.sorted())
    versions = _versions()
    page = page_of(study_of(case, told.inputs, told.engine, versions), told.date)
    return compare_pages(told, page, versions)


def _versions() -> tuple[tuple[str, str], ...]:
    """Programs whose versions a report names."""
    import platform
    from importlib.metadata import version

    names = ("yieldnet", "matplotlib", "numpy", "scipy", "swiglpk")
    return (("Python", platform.python_version()), *((name, version(name)) for name in names))


def _as_case(case: Case | Path) -> Case:
    from yieldnet.model.case import Case

    return case if isinstance(case, Case) else read_case(case)
