"""The glossary: words, statuses and rungs, as ``yieldnet explain`` prints them."""

from __future__ import annotations

from types import MappingProxyType
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = ["GLOSSARY"]

_WORDS = {
    # Words
    "compound": "Anything with a formula. Inside the cell its net rate is zero; crossing compounds"
    " enter or leave the cell and have yields.",
    "carrier": "An inside compound that moves energy or reducing equivalents: ATP, NADH, NADPH, a"
    " quinol.",
    "reaction": "A balanced equation with a name.",
    "network": "Reactions with their compounds, carriers, parameters and growth, in one file.",
    "overall equation": "The equation over the whole cell; ? marks an unknown coefficient.",
    "coefficient": "Amount of a crossing compound per amount of the basis substrate, also called"
    " yield Y; positive on its declared side.",
    "basis": "The first compound on the left of the overall equation; all yields are told per mol"
    " of it.",
    "case": "One question: an overall equation, a network, conditions, measurements, demands,"
    " perhaps an aim.",
    "statement": "Anything in a case that could be given up: a measured value, a written"
    " coefficient, a demand, a condition, a side, a closed compound, a knock-out.",
    "aim": "What is to be most or least: a coefficient, or the ATP left over.",
    "layer": "A set of constraints: elements, measured values, demands, pathways, redox, energy,"
    " maintenance.",
    "rung": "A layer as a step of the ladder, with the best value of the aim once it is added.",
    "ladder": "The descent of the best value from elements alone to everything.",
    "loss": "What a rung costs the aim, given those above it. It depends on the order of the rungs;"
    " the share does not.",
    "share": "The loss of a layer averaged over all orders in which the layers could be added"
    " (Shapley value). The shares sum to the whole loss.",
    "relaxation": "The final problem with one thing given back, and what the aim gains by it.",
    "limit": "How the best value changes as a balance or a statement is moved by a little: gain as"
    " there is more of it, cost as there is less, over all optimal duals.",
    "conflict": "In an infeasible case, the fewest statements that cannot hold together.",
    "range": "Lowest and highest value that a coefficient can take.",
    "band": "Two standard deviations to either side of a measured value.",
    "reconciled point": "Of all points that keep every balance and demand with each measured value"
    " in its band, the one nearest to the measurements in standard deviations.",
    "percent": "Best with the network over best without it. For the aim: last rung over the last"
    " rung before 'pathways'; for others: highest by network over highest by elements.",
    "freedom": "How many coefficients could still be chosen. 'free' counts what equalities leave,"
    " 'free in fact' also counts equalities that signs force.",
    "proof": "Worths of compounds under which no allowed reaction makes worth: one line of"
    " arithmetic then bounds the aim.",
    "worth": "In a proof, what one mol of a compound could bring at most, in mol of the aim.",
    "finding": "Something wrong or doubtful in a file: code, severity, place, both sides, way out.",
    "knock-out": "A reaction or group switched off in a case.",
    "parameter set": "Named values of some parameters of a network, which a case chooses together.",
    "meant for": "Substrates and products that a network was written for; an answer beyond them"
    " carries a warning.",
    "reproduces": "Small cases in a network file, each with the best value that must come out and"
    " its source.",
    "strain": "A named preset of a network: reactions or groups switched off.",
    "maintenance": "ATP spent on staying alive, per g dry weight and h.",
    "true yield": "Yield that growth would have without maintenance: 1/Y = 1/Y_true + m_S/mu, for a"
    " range of growth rates in which no limit changes.",
    "maintenance coefficient": "Substrate that maintenance takes, m_S, per g dry weight and h.",
    "Y_ATP": "Dry weight made per ATP that the growth equation and maintenance spend, in g/mol.",
    "macromolecule": "What biomass is put together from: protein, RNA, DNA, lipid, carbohydrate and"
    " others, each with its share of the dry weight.",
    "monomer": "Building block of a macromolecule: an amino acid, a nucleotide, a lipid.",
    "degree of reduction": "Available electrons of a compound, with its nitrogen source, sulfate"
    " and phosphate counted as zero.",
    "P/O ratio": "ATP made per pair of electrons passed to oxygen.",
    "C-mol": "Amount of a compound that holds one mol of carbon.",
    "recovery": "Share of the carbon, or of the available electrons, of what goes in that is found"
    " in what comes out.",
    "heat of combustion": "Heat given off as a compound burns to carbon dioxide gas, liquid water"
    " and nitrogen gas; to ammonia it is less by 383 kJ for each nitrogen.",
    "oxygen rule": "Heat from the oxygen taken up: 440 kJ per mol by calorimetry, 460 in"
    " textbooks.",
    "Gibbs energy": "Energy that a reaction can give off as work at its pH, temperature and"
    " concentrations; negative runs by itself, positive runs uphill.",
    "dissipation": "Gibbs energy that growth gives off per C-mol of biomass.",
    "RQ": "Respiratory quotient: carbon dioxide given off per oxygen taken up.",
    "titre": "Product in the broth at harvest [g/L].",
    "kLa": "How fast a vessel passes oxygen on, per driving force [1/h].",
    "cooling duty": "Heat that must be taken off: of the cells, of neutralisation and of the"
    " stirrer, less evaporation.",
    "break-even yield": "Yield at which raw materials cost as much as the product brings.",
    "ash": "Mineral part of the dry weight, as a fraction of the whole dry weight.",
    "guaranteed product": "The least product at most growth: what the cell must make if it grows as"
    " well as it can.",
    "coupling": "Whether growth makes product: none, only at high growth, or always.",
    "chain": "Reactions that run or stand still together; a screen counts them once.",
    "candidate": "A reaction or group that a network lacks and that an addition tries.",
    "trade-off": "All that is possible in two coefficients together; a polygon with corners.",
    # What users say instead
    "maximum theoretical yield": "The best value of the aim; say which rung: of elements alone, or"
    " of the network with energy.",
    "co-substrate": "A second compound on the left side, told per mol of the basis.",
    "CDW": "Cell dry weight. All g of biomass here are dry weight with ash.",
    # Statuses
    "reconciled": "Status: measured, and the balances of some layer tell the value a second time.",
    "measured": "Status: measured, and nothing else tells the value. Rung: measured values, written"
    " decimals, growth rate over uptake.",
    "fixed by elements": "Status: follows from element and charge balances and measured values.",
    "fixed by network": "Status: the network leaves one value only, at the reconciled point.",
    "bracketed": "Status: only a lowest and a highest value are known.",
    "open": "Status: without a bound on at least one side.",
    # Rungs
    "elements": "Rung: every element of the listed compounds, charge where it counts, declared"
    " sides, exact coefficients. The total electron balance is already in it.",
    "demands": "Rung: the bounds that the case demands.",
    "pathways": "Rung: steady state of inside compounds, directions, strain and knock-outs;"
    " ATP free and redox carriers exchangeable with each other.",
    "redox": "Rung: NADH, NADPH and quinol each balanced on its own.",
    "energy": "Rung: ATP made covers ATP used.",
    # Outcomes
    "solved": "Outcome: every statement can hold, and the aim, if any, has a best value.",
    "infeasible": "Outcome: the statements cannot all hold; see conflict.",
    "unbounded": "Outcome: the aim has no best value, since something can grow without limit.",
    "refused": "Outcome: a file has an error, so nothing was computed.",
}

GLOSSARY: Mapping[str, str] = MappingProxyType(_WORDS)
"""Meaning by word."""
