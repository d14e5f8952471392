"""Degree of reduction and mass of biomass per C-mol: rows C1 to C13 and C15."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from tests.reference.rows import Printed

if TYPE_CHECKING:
    from tests.reference.rows import Status

__all__ = ["COMPOSITIONS", "Composition"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Composition:
    """A biomass composition with its printed numbers, both per C-mol.

    Parameters
    ----------
    row : str
        Row of the table of published values.
    formula : str
        Formula as printed.
    reduction : Printed
        Degree of reduction [mol e/C-mol].
    mass : Printed or None
        Mass without ash [g/C-mol]; ``None`` where the table gives none.
    library : str
        Name in the biomass library; empty if it is not there.
    nitrogen : str
        Nitrogen source that counts as zero.
    source : str
        Where it stands.
    status : Status
        How it was come by.
    """

    row: str
    formula: str
    reduction: Printed
    mass: Printed | None
    library: str
    source: str
    status: Status
    nitrogen: str = "ammonia"


EXACT = Fraction(0)


def _exactly(text: str) -> Printed:
    """A printed degree of reduction that its formula gives without rounding."""
    return Printed(text, EXACT, "the formula gives the printed digits exactly")


TABLE = "Doran, Bioprocess Engineering Principles, Table 4.3"
AFTER = f"{TABLE} (after Roels and Stouthamer)"
LANGE = "Lange and Heijnen 2001, Biotechnology and Bioengineering 75:334"


def _table_4_3(formula: str, reduction: str, mass: str, library: str) -> Composition:
    return Composition(
        row="C13",
        formula=formula,
        reduction=_exactly(reduction),
        mass=Printed(mass),
        library=library,
        source=AFTER,
        status="from memory",
    )


NIELSEN = "Nielsen and Villadsen 1994, Bioreaction Engineering Principles"
GROBBELAAR = "Grobbelaar 2004, Handbook of Microalgal Culture"


def _remembered(formula: str, reduction: str, library: str, source: str) -> Composition:
    """A formula from memory; its degree of reduction was worked by hand."""
    return Composition(
        row="further",
        formula=formula,
        reduction=_exactly(reduction),
        mass=None,
        library=library,
        source=source,
        status="from memory",
    )


COMPOSITIONS: tuple[Composition, ...] = (
    Composition(
        row="C1",
        formula="CH1.8O0.5N0.2",
        reduction=_exactly("4.20"),
        mass=Printed("24.63"),
        library="generic biomass",
        source="Roels 1983; used by Heijnen and by Villadsen, Nielsen and Liden 2003",
        status="S",
    ),
    Composition(
        row="C2",
        formula="CH1.77O0.49N0.24",
        reduction=_exactly("4.07"),
        mass=Printed("25.00"),
        library="Escherichia coli",
        source=f"Applied and Environmental Microbiology, highwire table 9352; {TABLE}",
        status="S",
    ),
    Composition(
        row="C3",
        formula="CH1.76O0.56N0.168",
        reduction=_exactly("4.136"),
        mass=Printed("25.10"),
        library="Saccharomyces cerevisiae, anaerobic",
        source="S. A. Wahl, TU Delft course exercise 2015/16",
        status="S",
    ),
    Composition(
        row="C4",
        formula="CH1.79O0.56N0.17",
        reduction=_exactly("4.16"),
        mass=Printed("25.16"),
        library="yeast",
        source="Doran, Bioprocess Engineering Principles, problem 4.11",
        status="S",
    ),
    Composition(
        row="C5",
        formula="CH1.64O0.52N0.16",
        reduction=_exactly("4.12"),
        mass=Printed("24.22"),
        library="Saccharomyces cerevisiae",
        source=f"{TABLE}, as quoted on a secondary page",
        status="S2",
    ),
    Composition(
        row="C6",
        formula="CH1.84O0.55N0.2",
        reduction=_exactly("4.14"),
        mass=Printed("25.47"),
        library="Candida utilis",
        source="Doran, Bioprocess Engineering Principles, exercise",
        status="S",
    ),
    Composition(
        row="C7",
        formula="CH1.66O0.27N0.20",
        reduction=_exactly("4.52"),
        mass=Printed("20.8"),
        library="single-cell protein on hydrocarbon",
        source="Doran, Bioprocess Engineering Principles, exercise",
        status="S",
    ),
    Composition(
        row="C8",
        formula="CH1.63O0.80N0.13",
        reduction=_exactly("3.64"),
        mass=Printed("28.27"),
        library="plant cells",
        source="Doran, Bioprocess Engineering Principles, exercise",
        status="S",
    ),
    Composition(
        row="C9",
        formula="CH1.4O0.40N0.20",
        reduction=_exactly("4.00"),
        mass=Printed("22.6"),
        library="methane bacteria",
        source="Doran, Bioprocess Engineering Principles, problem 4.8",
        status="S",
    ),
    Composition(
        row="C10",
        formula="C5H8O2N",
        reduction=_exactly("4.20"),
        mass=Printed("22.8"),
        library="Clostridium thermocellum",
        source="PNAS 2016 113:13180, Table S1",
        status="S",
    ),
    Composition(
        row="C11",
        formula="CH1.581O0.318N0.275S0.003",
        reduction=_exactly("4.138"),
        mass=None,
        library="",
        source=f"{LANGE}, Table IV; derived by hand with sulphate as the sulphur reference",
        status="derived by hand",
    ),
    Composition(
        row="C11",
        formula="CH1.581O0.318N0.275",
        reduction=_exactly("4.12"),
        mass=None,
        library="",
        source=f"{LANGE}, Table IV; the printed number leaves sulphur out",
        status="S2",
    ),
    Composition(
        row="C12",
        formula="CH1.748O0.596N0.148",
        reduction=Printed("4.11"),
        mass=Printed("25.38"),
        library="Saccharomyces cerevisiae, reconciled composition",
        source=LANGE,
        status="from memory",
    ),
    _table_4_3("CH1.83O0.55N0.25", "3.98", "26.16", "Aerobacter aerogenes"),
    _table_4_3("CH1.75O0.43N0.22", "4.23", "23.74", "Klebsiella aerogenes, 0.22 N per C"),
    _table_4_3("CH1.73O0.43N0.24", "4.15", "24.00", "Klebsiella aerogenes, 0.24 N per C"),
    _table_4_3("CH2.00O0.52N0.23", "4.27", "25.57", "Pseudomonas C12B"),
    _table_4_3("CH1.83O0.54N0.10", "4.45", "23.90", "Candida utilis, 0.10 N per C"),
    _table_4_3("CH1.87O0.56N0.20", "4.15", "25.66", "Candida utilis, 0.20 N per C"),
    _table_4_3("CH1.83O0.46N0.19", "4.34", "23.88", "Candida utilis, 0.19 N per C"),
    _table_4_3("CH1.83O0.56N0.17", "4.20", "25.20", "Saccharomyces cerevisiae, 0.56 O per C"),
    _table_4_3("CH1.81O0.51N0.17", "4.28", "24.38", "Saccharomyces cerevisiae, 0.51 O per C"),
    Composition(
        row="C15",
        formula="CH1.8O0.5N0.2",
        reduction=_exactly("5.8"),
        mass=Printed("24.63"),
        library="generic biomass",
        source="Heijnen, Encyclopedia of Bioprocess Technology",
        status="S",
        nitrogen="nitrate",
    ),
    Composition(
        row="C13",
        formula="CH1.81O0.51N0.20",
        reduction=_exactly("4.19"),
        mass=Printed("24.8"),
        library="Paracoccus denitrificans",
        source=AFTER,
        status="from memory",
    ),
    Composition(
        row="E10",
        formula="CH1.8O0.5N0.2",
        reduction=_exactly("4.20"),
        mass=Printed("24.63"),
        library="Zymomonas mobilis",
        source="Doran, Bioprocess Engineering Principles, problem 4.10",
        status="S",
    ),
    _remembered("CH1.70O0.58N0.15", "4.09", "Penicillium chrysogenum", NIELSEN),
    _remembered("CH1.72O0.55N0.17", "4.11", "Aspergillus niger", NIELSEN),
    _remembered("CH1.93O0.55N0.25", "4.08", "Pseudomonas fluorescens", NIELSEN),
    _remembered("CH1.83O0.48N0.11", "4.54", "Chlorella", GROBBELAAR),
)
