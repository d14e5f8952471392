"""Best yields that a network sets: rows A1.1 to A1.10, A1.12, A1.20, A1.24, A1.26, A3.1, A3.3."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from tests.reference.rows import (
    Ladder,
    Printed,
    Question,
    Row,
    Status,
    best,
    made,
    number,
    rung,
    taken_up,
)

__all__ = ["LADDERS", "NETWORK_ROWS"]

CHENG = (
    "Cheng, Wang, Zeng and Zhang 2013, BioMed Research International 2013:538790, Table 2: "
    "printed 1.0, 1.33, 1.2, 1.71 without air, 1.0 with"
)
CHEN = (
    "Chen, Liu, Zhang and Liu 2010, Journal of Biomedicine and Biotechnology 2010:518743, abstract"
)
SCHUSTER = "Schuster and von Kamp, poster, University of Jena: 3/4 mol/mol"
VILLADSEN = (
    "Villadsen, Nielsen and Liden 2003, Bioreaction Engineering Principles, 2nd ed., p. 77: "
    "0.75, the true limit of the pathways"
)
THAUER = (
    "review that quotes Thauer, Jungermann and Decker 1977, Bacteriological Reviews 41:100 "
    "(author list and page from memory)"
)
TECH = "tech4biowaste.eu, Lactic acid fermentation"
TRINH = "Trinh, Unrean and Srienc 2008, Applied and Environmental Microbiology 74:3634, Table 3"

MOL = "mol/mol"
MIXED = "? succinate + ? acetate + ? ethanol + ? lactate"
PTS, GK = "phosphotransferase uptake", "glucokinase uptake"
SHUNT = "with glyoxylate shunt"
PENTOSE = "glucokinase uptake with oxidative pentose path"


def _four_carbon(strain: str, equation: str = f"glucose -> {MIXED}") -> Question:
    return Question(equation=equation, network="four-carbon", strain=strain, aim="most succinate")


AIR = f"glucose + ? oxygen -> {MIXED}"
# Both branches of the citric acid cycle open: no strain has that, so the reactions are named.
BOTH_BRANCHES = ("glyoxylate shunt", "oxidative pentose path", "transhydrogenase", "formate route")
WITH_FORMATE = replace(
    _four_carbon(f"{PTS} {SHUNT} and formate"), equation=f"glucose -> {MIXED} + ? formate"
)


def _succinate(
    row: str, value: Fraction, conditions: str, question: Question, source: str, status: Status
) -> Row:
    return Row(
        row=row,
        what="succinate / substrate",
        value=value,
        unit=MOL,
        conditions=conditions,
        source=source,
        status=status,
        question=question,
        read=best,
    )


_SUCCINATE = [
    _succinate("A1.1", Fraction(1), "PTS uptake, no air", _four_carbon(PTS), CHENG, "S"),
    _succinate("A1.2", Fraction(4, 3), "glucokinase, no air", _four_carbon(GK), CHENG, "S"),
    _succinate(
        "A1.2",
        Fraction(12, 7),
        "as A1.2 with the oxidative branch open: 2-oxoglutarate to succinate keeps every electron",
        _four_carbon("glucokinase uptake with oxidative branch"),
        "derived by hand: equals the electron limit 24/14",
        "derived by hand",
    ),
    _succinate(
        "A1.2",
        Fraction(12, 7),
        "as A1.2 with the oxidative pentose path, NADPH exchangeable with NADH",
        _four_carbon(f"{PENTOSE} and transhydrogenase"),
        "derived by hand: equals the electron limit 24/14",
        "derived by hand",
    ),
    _succinate(
        "A1.2",
        Fraction(4, 3),
        "as A1.2 with the oxidative pentose path and no exchange: nothing takes the NADPH",
        _four_carbon(PENTOSE),
        "derived by hand: the path must stand still, which leaves A1.2",
        "derived by hand",
    ),
    _succinate(
        "A1.2 xylose",
        Fraction(10, 7),
        "as A1.2 on xylose, NADPH exchangeable with NADH",
        _four_carbon(f"{PENTOSE} and transhydrogenase", f"xylose -> {MIXED}"),
        "derived by hand: equals the electron limit 20/14",
        "derived by hand",
    ),
    _succinate(
        "A1.2 xylose",
        Fraction(10, 9),
        "as A1.2 on xylose, no exchange: 5/3 pyruvate or PEP with 5/3 NADH; of these b become "
        "succinate (2 NADH each) and a acetate (1 NADH made): a + b = 5/3, 5/3 + a = 2 b",
        _four_carbon(PENTOSE, f"xylose -> {MIXED}"),
        "derived by hand",
        "derived by hand",
    ),
    _succinate(
        "A1.3",
        Fraction(6, 5),
        "PTS uptake with glyoxylate shunt, no air, pyruvate oxidised with NADH",
        _four_carbon(f"{PTS} {SHUNT}"),
        CHENG,
        "S",
    ),
    _succinate(
        "A1.3",
        Fraction(7, 5),
        "as A1.3 with pyruvate-formate lyase and formate allowed out",
        WITH_FORMATE,
        "derived by hand: acetyl-CoA 1 = 2 g + e and NADH 2 = 2 - g + 2 e, with g turns of the "
        "shunt and e ethanol; succinate 1 + g",
        "derived by hand",
    ),
    _succinate(
        "A1.4",
        Fraction(12, 7),
        "glucokinase with glyoxylate shunt, no air",
        _four_carbon(f"{GK} {SHUNT}"),
        CHENG,
        "S",
    ),
    *(
        _succinate(
            "A1.5",
            Fraction(1),
            f"{uptake} under air, oxidative branch only, no succinate dehydrogenase",
            _four_carbon(f"{uptake} under air", AIR),
            CHENG,
            "S",
        )
        for uptake in (PTS, GK, f"{PTS} {SHUNT}", f"{GK} {SHUNT}")
    ),
    _succinate(
        "A1.5",
        Fraction(1),
        "PTS uptake, air and the reductive branch, no glyoxylate shunt",
        _four_carbon(PTS, AIR),
        "derived by hand: one phosphoenolpyruvate is left, as in A1.1",
        "derived by hand",
    ),
    _succinate(
        "A1.5",
        Fraction(1),
        "PTS uptake, air and both branches, no glyoxylate shunt",
        replace(_four_carbon("", AIR), knock_outs=("glucokinase", *BOTH_BRANCHES)),
        "derived by hand: each succinate costs one phosphoenolpyruvate, by either branch",
        "derived by hand",
    ),
    _succinate(
        "A1.5",
        Fraction(3, 2),
        "PTS uptake with glyoxylate shunt, air and the reductive branch",
        _four_carbon(f"{PTS} {SHUNT}", AIR),
        "derived by hand: 1 from phosphoenolpyruvate, 1/2 from the acetyl-CoA of the pyruvate",
        "derived by hand",
    ),
    _succinate(
        "A1.5",
        Fraction(12, 7),
        "glucokinase with glyoxylate shunt, air and the reductive branch",
        _four_carbon(f"{GK} {SHUNT}", AIR),
        "derived by hand: the electron limit 24/14, so no oxygen is used",
        "derived by hand",
    ),
    _succinate(
        "A1.5",
        Fraction(12, 7),
        "glucokinase, air and both branches, no glyoxylate shunt",
        replace(
            _four_carbon("", AIR),
            knock_outs=("glucose phosphotransferase system", *BOTH_BRANCHES),
        ),
        "derived by hand: the electron limit 24/14, so no oxygen is used",
        "derived by hand",
    ),
]


def _printed_digits(row: str, text: str, strain: str) -> Row:
    return replace(
        _succinate(row, Fraction(0), "as printed", _four_carbon(strain), CHENG, "S"),
        value=Printed(text),
    )


_SUCCINATE += [
    _printed_digits("A1.2", "1.33", GK),
    _printed_digits("A1.4", "1.71", f"{GK} {SHUNT}"),
    Row(
        row="A1.3",
        what="formate / glucose at the best succinate",
        value=Fraction(1),
        unit=MOL,
        conditions="pyruvate-formate lyase and formate allowed out",
        source="derived by hand: one pyruvate, that of the PTS, is split without making NADH",
        status="derived by hand",
        question=WITH_FORMATE,
        read=made("formate"),
    ),
    Row(
        row="A1.3",
        what="ethanol / glucose at the best succinate",
        value=Fraction(1, 5),
        unit=MOL,
        conditions="pyruvate-formate lyase and formate allowed out",
        source="derived by hand: e = 1/5 in the equations of the best succinate",
        status="derived by hand",
        question=WITH_FORMATE,
        read=made("ethanol"),
    ),
]

_GLYCEROL_AIR = Question(
    equation="glycerol + ? oxygen -> ? succinate + ? acetate + ? ethanol + ? lactate + ? formate",
    network="glycerol-four-carbon",
    aim="most succinate",
)
_GLYCEROL = replace(_GLYCEROL_AIR, equation=_GLYCEROL_AIR.equation.replace(" + ? oxygen", ""))
_SUCCINATE += [
    _succinate("A1.6", Fraction(1), "on glycerol, no air", _GLYCEROL, CHEN, "S"),
    _succinate("A1.6", Fraction(1), "on glycerol, air", _GLYCEROL_AIR, CHEN, "S"),
    *(
        Row(
            row="A1.6",
            what="carbon dioxide fixed / glycerol at the best succinate",
            value=Fraction(1),
            unit=MOL,
            conditions=f"on glycerol, {air}",
            source=CHEN,
            status="S",
            question=question,
            read=taken_up("carbon dioxide"),
        )
        for air, question in (("no air", _GLYCEROL), ("air", _GLYCEROL_AIR))
    ),
    Row(
        row="A1.6",
        what="oxygen taken up / glycerol at the best succinate",
        value=Fraction(0),
        unit=MOL,
        conditions="on glycerol, air allowed",
        source="derived by hand: succinate holds all 14 electrons of glycerol",
        status="derived by hand",
        question=_GLYCEROL_AIR,
        read=taken_up("oxygen"),
    ),
]


def _lysine(strain: str) -> Question:
    return Question(
        equation="glucose + ? ammonia + ? oxygen -> ? L-lysine",
        network="lysine-coryneform",
        strain=strain,
        aim="most L-lysine",
    )


def _lysine_row(
    row: str,
    value: Fraction | Printed,
    conditions: str,
    strain: str,
    source: str,
    status: Status,
) -> Row:
    return Row(
        row=row,
        what="L-lysine / glucose",
        value=value,
        unit=MOL,
        conditions=conditions,
        source=source,
        status=status,
        question=_lysine(strain),
        read=best,
    )


NO_PHOSPHORYLATION = "no oxidative phosphorylation"
BY_LP = "derived by hand: linear problem solved beside the reference"
_LYSINE = [
    _lysine_row("A1.9", Fraction(3, 4), "network of A1.10", NO_PHOSPHORYLATION, VILLADSEN, "S"),
    _lysine_row(
        "A1.10",
        Fraction(3, 4),
        "PTS, ATP and NADPH balanced, no oxidative phosphorylation",
        NO_PHOSPHORYLATION,
        SCHUSTER,
        "S",
    ),
    replace(
        _lysine_row(
            "A1.10",
            Fraction(6, 7),
            "ATP not balanced",
            NO_PHOSPHORYLATION,
            BY_LP,
            "derived by hand",
        ),
        read=rung("redox"),
    ),
    _lysine_row(
        "A1.10",
        Fraction(30, 37),
        "oxidative phosphorylation at P/O 1.5, malic enzyme, no transhydrogenase",
        "no transhydrogenase",
        BY_LP,
        "derived by hand",
    ),
    _lysine_row(
        "A1.10",
        Printed("0.811"),
        "oxidative phosphorylation at P/O 1.5, malic enzyme, no transhydrogenase",
        "no transhydrogenase",
        BY_LP,
        "derived by hand",
    ),
    _lysine_row(
        "A1.10",
        Fraction(3, 4),
        "as before without malic enzyme: nothing turns NADH into NADPH",
        "no transhydrogenase and no malic enzyme",
        BY_LP,
        "derived by hand",
    ),
    _lysine_row(
        "A1.10",
        Fraction(6, 7),
        "as before with malic enzyme and transhydrogenase: the electron limit 24/28",
        "",
        BY_LP,
        "derived by hand",
    ),
]

_HYDROGEN = Question(
    equation="glucose -> ? hydrogen + ? acetate",
    network="hydrogen",
    aim="most hydrogen",
)
_HYDROGEN_ACIDS = Question(
    equation="glucose -> ? hydrogen + ? acetate + ? ethanol + ? butyrate + ? lactate",
    network="hydrogen",
    strain="hydrogen from ferredoxin alone",
    aim="most hydrogen",
)
_FERMENTS = "? lactate + ? ethanol + ? acetate"


def _ferment(strain: str, equation: str = f"glucose -> {_FERMENTS}") -> Question:
    return Question(equation=equation, network="fermentations", strain=strain, aim="most ATP")


_MANNITOL = _ferment("heterolactic", f"glucose + ? fructose -> {_FERMENTS} + ? mannitol")
_MIXED_ACID = _ferment("mixed acid", "glucose -> ? acetate + ? ethanol + ? formate")


HYDROGEN_BY_HAND = "derived by hand in networks/hydrogen.yaml"
FERMENT_BY_HAND = "derived by hand in networks/fermentations.yaml"
PROPANEDIOL_BY_HAND = "derived by hand in networks/propanediol.yaml"
ORTH = (
    "Orth, Fleming and Palsson 2010, EcoSal chapter on the core network of Escherichia coli; "
    "by hand 10 NADH * 1.25 + 2 quinol * 0.5 + 4 = 17.5"
)
MIXED_BY_HAND = "derived by hand in networks/fermentations.yaml: ATP = 2 + acetate"
_RESPIRED = Question(
    equation="glucose + ? oxygen -> ? carbon dioxide + ? water",
    either=(),
    network="facultative-succinate",
    strain="phosphotransferase uptake",
    aim="most ATP",
)

_REST = [
    number("A1.12", "ethanol / glucose", Fraction(2), TRINH, "S", _ferment("alcoholic"), "ethanol"),
    number(
        "A1.12",
        "carbon dioxide / glucose",
        Fraction(2),
        TRINH,
        "S",
        _ferment("alcoholic"),
        "carbon dioxide",
    ),
    number("A1.12", "ATP / glucose", Fraction(2), TRINH, "S", _ferment("alcoholic")),
    number(
        "A1.12",
        "ethanol / glucose",
        Printed("0.51"),
        TRINH,
        "S",
        _ferment("alcoholic"),
        "ethanol",
        unit="g/g",
    ),
    number(
        "A1.20",
        "hydrogen / glucose",
        Fraction(4),
        THAUER,
        "S2",
        _HYDROGEN,
        conditions="acetate the only other product",
    ),
    number("A1.20", "acetate / glucose", Fraction(2), THAUER, "S2", _HYDROGEN, "acetate"),
    number(
        "A1.20", "carbon dioxide / glucose", Fraction(2), THAUER, "S2", _HYDROGEN, "carbon dioxide"
    ),
    number(
        "A1.20",
        "hydrogen / glucose",
        Fraction(2),
        f"{THAUER}: about 2 with other acids and alcohols; exactly 2, {HYDROGEN_BY_HAND}",
        "S2",
        _HYDROGEN_ACIDS,
        conditions="hydrogen from ferredoxin alone, NADH into ethanol or butyrate",
    ),
    replace(
        number(
            "A1.20",
            "hydrogen / glucose, electron limit",
            Fraction(12),
            "derived by hand: 24 e / 2 e",
            "derived by hand",
            _HYDROGEN,
        ),
        read=rung("elements"),
    ),
    number("A1.24", "ATP / glucose", Fraction(2), TECH, "S2", _ferment("homolactic")),
    number(
        "A1.24", "lactate / glucose", Fraction(2), TECH, "S2", _ferment("homolactic"), "lactate"
    ),
    number("A1.24", "ATP / glucose", Fraction(1), TECH, "S2", _ferment("heterolactic")),
    *(
        number(
            "A1.24",
            f"{name} / glucose",
            Fraction(1),
            TECH,
            "S2",
            _ferment("heterolactic"),
            name,
        )
        for name in ("lactate", "ethanol", "carbon dioxide")
    ),
    number(
        "A1.24",
        "ATP / glucose",
        Fraction(2),
        FERMENT_BY_HAND,
        "derived by hand",
        _MANNITOL,
        conditions="heterolactic with fructose as electron acceptor",
    ),
    number(
        "A1.24",
        "mannitol / glucose",
        Fraction(2),
        FERMENT_BY_HAND,
        "derived by hand",
        _MANNITOL,
        "mannitol",
        conditions="heterolactic with fructose as electron acceptor",
    ),
    number(
        "A1.26",
        "ATP / glucose",
        Fraction(3),
        MIXED_BY_HAND,
        "derived by hand",
        _MIXED_ACID,
        conditions="mixed acids, acetate and ethanol 1:1",
    ),
    number(
        "A1.26",
        "ATP / glucose",
        Fraction(5, 2),
        f"encyclopedia page, Mixed acid fermentation: about 2.5; exact, {MIXED_BY_HAND}",
        "S",
        replace(
            _MIXED_ACID,
            equation="glucose -> 1/2 acetate + ? ethanol + ? formate + ? lactate",
        ),
        conditions="mixed acids, half an acetate per glucose",
    ),
    *(
        number(
            "A3.1",
            "1,3-propanediol / glycerol",
            value,
            PROPANEDIOL_BY_HAND,
            "derived by hand",
            Question(
                equation="glycerol -> ? 1,3-propanediol + ? acetate + ? formate + ? hydrogen",
                network="propanediol",
                strain=strain,
                aim="most 1,3-propanediol",
            ),
        )
        for strain, value in (
            ("formate route", Fraction(2, 3)),
            ("pyruvate dehydrogenase to acetate", Fraction(3, 4)),
            ("citric acid cycle open", Fraction(7, 8)),
        )
    ),
    number(
        "A3.3",
        "ATP / glucose",
        Fraction(35, 2),
        ORTH,
        "from memory",
        _RESPIRED,
        conditions="PTS uptake, full respiration at 1.25 ATP per NADH and 0.5 per quinol",
    ),
]

NETWORK_ROWS: tuple[Row, ...] = (*_SUCCINATE, *_LYSINE, *_REST)


def _ladder(
    row: str, values: tuple[str, str, str, str], source: str, status: Status, question: Question
) -> Ladder:
    names = ("elements", "pathways", "redox", "energy")
    rungs = tuple((name, Fraction(value)) for name, value in zip(names, values, strict=True))
    return Ladder(row=row, rungs=rungs, source=source, status=status, question=question)


ENERGY_IDLE = "derived by hand: ATP moves no cell of the published table"
LADDERS: tuple[Ladder, ...] = (
    _ladder("A1.1", ("12/7", "1", "1", "1"), CHENG, "S", _four_carbon(PTS)),
    _ladder("A1.2", ("12/7", "4/3", "4/3", "4/3"), CHENG, "S", _four_carbon(GK)),
    _ladder(
        "A1.2",
        ("12/7", "12/7", "4/3", "4/3"),
        "derived by hand: keeping NADPH apart from NADH is what costs",
        "derived by hand",
        _four_carbon(PENTOSE),
    ),
    _ladder(
        "A1.2 xylose",
        ("10/7", "10/7", "10/9", "10/9"),
        "derived by hand: keeping NADPH apart from NADH is what costs",
        "derived by hand",
        _four_carbon(PENTOSE, f"xylose -> {MIXED}"),
    ),
    _ladder("A1.3", ("12/7", "6/5", "6/5", "6/5"), CHENG, "S", _four_carbon(f"{PTS} {SHUNT}")),
    _ladder("A1.3", ("12/7", "7/5", "7/5", "7/5"), ENERGY_IDLE, "derived by hand", WITH_FORMATE),
    _ladder("A1.4", ("12/7",) * 4, CHENG, "S", _four_carbon(f"{GK} {SHUNT}")),
    *(
        _ladder(
            "A1.5",
            ("12/7", "1", "1", "1"),
            CHENG,
            "S",
            _four_carbon(f"{uptake} under air", AIR),
        )
        for uptake in (PTS, GK, f"{PTS} {SHUNT}", f"{GK} {SHUNT}")
    ),
    _ladder("A1.6", ("1",) * 4, CHEN, "S", _GLYCEROL),
    _ladder("A1.10", ("6/7", "6/7", "6/7", "3/4"), SCHUSTER, "S", _lysine(NO_PHOSPHORYLATION)),
    _ladder(
        "A1.10",
        ("6/7", "6/7", "6/7", "30/37"),
        BY_LP,
        "derived by hand",
        _lysine("no transhydrogenase"),
    ),
    _ladder(
        "A1.10",
        ("6/7", "6/7", "3/4", "3/4"),
        BY_LP,
        "derived by hand",
        _lysine("no transhydrogenase and no malic enzyme"),
    ),
    _ladder("A1.10", ("6/7",) * 4, BY_LP, "derived by hand", _lysine("")),
    _ladder("A1.20", ("12", "4", "4", "4"), THAUER, "S2", _HYDROGEN),
    _ladder("A1.20", ("12", "4", "2", "2"), HYDROGEN_BY_HAND, "derived by hand", _HYDROGEN_ACIDS),
)
