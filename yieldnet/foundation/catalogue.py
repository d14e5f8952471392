"""The catalogue of finding codes: title, why it matters, what to do."""

from __future__ import annotations

from dataclasses import dataclass
from types import MappingProxyType
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = ["CATALOGUE", "CatalogueEntry"]


@dataclass(frozen=True, slots=True)
class CatalogueEntry:
    """What a code stands for.

    Parameters
    ----------
    code : str
        Stable code.
    title : str
        What is found.
    why : str
        Why it matters.
    way_out : str
        What to do.
    """

    code: str
    title: str
    why: str
    way_out: str


_ENTRIES = (
    # Files and YAML
    CatalogueEntry("YN101", "File cannot be read",
        "Nothing can be said about a file that does not open.",
        "Check the path and its spelling; a folder is not a file; check the permissions."),
    CatalogueEntry("YN102", "File is empty",
        "An empty file asks no question.",
        "Copy a shipped example and change it."),
    CatalogueEntry("YN103", "File is not plain UTF-8",
        "In another encoding the same bytes mean other letters: a ± or a name could change silently.",
        "Save the file as UTF-8 without a byte order mark."),
    CatalogueEntry("YN104", "File is not YAML",
        "What cannot be parsed is not guessed at.",
        "Look at the place named: indentation, a bracket, a quote, a colon inside a text."),
    CatalogueEntry("YN105", "Indented with a tab",
        "YAML does not allow tabs as indentation, since their width is not known.",
        "Replace each tab by spaces."),
    CatalogueEntry("YN106", "Carriage returns at line ends",
        "Place and text of every later finding would be off, and files would differ between machines.",
        "Save the file with Unix line ends (line feeds alone)."),
    CatalogueEntry("YN107", "Anchors and aliases",
        "They hide where a value comes from and can blow a small file up to a huge one.",
        "Write the value where it is needed."),
    CatalogueEntry("YN108", "File too large or nested too deep",
        "A case or a network is a short text; anything else is the wrong file.",
        "Check that it is the right file; write it flat."),
    CatalogueEntry("YN109", "Key written twice",
        "Only one of the two values could count, and nobody could see which.",
        "Keep one."),
    CatalogueEntry("YN110", "Unknown key",
        "A misspelled key would be ignored, and with it what it says.",
        "Use the near match shown, or one of the known keys."),
    CatalogueEntry("YN111", "Something is missing",
        "Without it the file is not complete.",
        "Add it as the hint says."),
    CatalogueEntry("YN112", "Wrong shape",
        "A text stands where a list belongs, or the reverse, or a word is not one of those allowed.",
        "Write it in the shape shown."),
    CatalogueEntry("YN113", "Case and network exchanged",
        "A case asks; a network describes the cell. They are read in different places.",
        "Give each file where it belongs."),
    CatalogueEntry("YN114", "Name split at its comma",
        "Inside [ ] and { } a comma ends an item, so 1,3-propanediol became two.",
        "Write one name a line with a dash before it, or put the name in quotes."),
    CatalogueEntry("YN115", "Text begins with a question mark",
        "In YAML a leading ? starts something else, so the equation would be lost.",
        "Put the equation in double quotes."),
    CatalogueEntry("YN116", "Reading stopped",
        "A file with hundreds of findings is another kind of file, or holds one slip many times.",
        "Mend the findings listed, then read it again."),
    # Numbers, units, formulas, equations
    CatalogueEntry("YN201", "Not a number",
        "Decimal commas, percentages and words can each be read in two ways.",
        "Write a plain number with a decimal point."),
    CatalogueEntry("YN202", "Number out of bounds",
        "Numbers stay exact here, so one with a million digits would fill the memory.",
        "Write it in a unit in which it is near 1."),
    CatalogueEntry("YN203", "Unit unknown or of the wrong kind",
        "A wrong unit makes a believable wrong yield.",
        "Use a unit of the kind that the hint names."),
    CatalogueEntry("YN204", "Formula not understood",
        "Every balance rests on the formulas.",
        "Write it as C6H12O6, CH1.8O0.5N0.2 or Ca(OH)2, charge at the end."),
    CatalogueEntry("YN205", "Formula with too many atoms",
        "It is a slip of the hand: no compound of metabolism is that large.",
        "Correct the number."),
    CatalogueEntry("YN206", "Expression not understood",
        "Expressions are parsed by a small grammar and never run as code.",
        "Use numbers, parameters, + - * / and parentheses."),
    CatalogueEntry("YN207", "Division by zero",
        "The coefficient has no value.",
        "Change the parameter or the expression."),
    CatalogueEntry("YN208", "Equation not understood",
        "A term that is read wrongly changes every balance.",
        "Write terms separated by ' + ' round one arrow: -> or <->."),
    CatalogueEntry("YN209", "Negative standard deviation",
        "A standard deviation is a size.",
        "Write it without a sign."),
    CatalogueEntry("YN210", "Value outside its meaning",
        "A growth rate of 0, an ash of 1 or a negative P/O has no meaning in the balances.",
        "Correct the value, or leave the entry out."),
    # Names
    CatalogueEntry("YN301", "Unknown compound",
        "Without a formula it is in no balance.",
        "Use the near match, or define the compound with its formula."),
    CatalogueEntry("YN302", "Unknown reaction, group, strain, parameter or carrier",
        "What is switched off or changed must exist, else the answer is to another question.",
        "Use the near match, or a name of the network file."),
    CatalogueEntry("YN303", "One compound under two names",
        "Two names in one file are mostly one slip, and a reader takes them for two compounds.",
        "Use one name throughout the file."),
    CatalogueEntry("YN304", "Another formula than the library's",
        "One of the two is wrong, or the name means something else here.",
        "Leave the formula out, or choose another name."),
    CatalogueEntry("YN305", "Defined twice",
        "Two definitions of one thing contradict each other sooner or later.",
        "Keep one."),
    # Networks
    CatalogueEntry("YN401", "Reaction does not close",
        "A reaction that makes or loses an element makes yields that do not exist.",
        "Correct the number shown, or write ? before the compound that would mend it."),
    CatalogueEntry("YN402", "? has no solution",
        "No value of the unknown coefficients closes the reaction.",
        "Give another compound a ?, or correct the numbers of the element blamed."),
    CatalogueEntry("YN403", "? is not determined",
        "More than one set of values closes the reaction, or the compound has no elements.",
        "Write a number for one of the unknowns."),
    CatalogueEntry("YN404", "? came out negative",
        "The compound stands on the other side than written.",
        "Move it in the file, or check that this is what you mean."),
    CatalogueEntry("YN405", "Growth does not close exactly",
        "Within the written digits this is rounding; the residual is charged to biomass everywhere.",
        "Put ? before ammonia, carbon dioxide, water and a redox carrier to close it exactly."),
    CatalogueEntry("YN406", "Compound only made or only used",
        "Every reaction with it stands still, which is mostly a missing reaction.",
        "Add the reaction that uses or makes it, or let it cross the boundary."),
    CatalogueEntry("YN407", "Reaction can never carry flux",
        "It looks like a possibility of the network and is none.",
        "Add what it lacks, or delete it."),
    CatalogueEntry("YN408", "Energy from nothing",
        "A loop that makes ATP without substrate pays for everything: every yield is then wrong.",
        "Make one of the reactions of the loop one-way, or correct its ATP."),
    CatalogueEntry("YN409", "Reaction written twice",
        "A knock-out of one leaves the other, so the idea is not tested.",
        "Keep one, or switch off their common group."),
    CatalogueEntry("YN410", "Crossing compound that no reaction touches",
        "Its coefficient can only be zero.",
        "Add a reaction, or take it out of 'crossing'."),
    CatalogueEntry("YN411", "Parameter is not used",
        "Changing it changes nothing, which surprises.",
        "Use it in an equation, or delete it."),
    CatalogueEntry("YN412", "Parameter outside its own range",
        "The value contradicts the low and high written beside it.",
        "Correct one of the three."),
    CatalogueEntry("YN413", "Biomass with phosphorus",
        "Phosphate is left out of networks of the short style, so phosphorus has no source.",
        "Leave P out of the biomass formula; count its mass in the ash."),
    CatalogueEntry("YN414", "Growth equation makes no biomass",
        "Growth must make 'biomass' once, with coefficient 1.",
        "End the equation with '-> biomass'."),
    CatalogueEntry("YN415", "Energy carrier with elements",
        "Freeing the energy balance would then create matter.",
        "Leave its formula out: an energy carrier is a token."),
    CatalogueEntry("YN416", "What growth costs in ATP",
        "Shown so that it can be compared with published growth yields on ATP.",
        "Nothing, if the numbers are what you meant."),
    CatalogueEntry("YN417", "Energy spent for nothing",
        "A loop that only spends ATP lets any surplus vanish, so 'energy surplus: none' says nothing.",
        "Knock one of its reactions out in the case where that matters."),
    CatalogueEntry("YN418", "Redox carriers tied to each other",
        "Where carriers turn into each other, keeping them apart in 'redox' costs little or nothing.",
        "Nothing, if that is what the cell does; else make a reaction between them one-way."),
    # Cases
    CatalogueEntry("YN501", "Basis not clear",
        "Every yield is told per mol of the basis, the first compound on the left.",
        "Give it the coefficient 1 or none, and list it once."),
    CatalogueEntry("YN502", "Aim is the basis",
        "Its coefficient is 1 whatever the cell does.",
        "Aim at another coefficient, or change the basis."),
    CatalogueEntry("YN503", "Statement about a coefficient that is not there",
        "It would have no effect.",
        "Add the compound to the overall equation, or leave the statement out."),
    CatalogueEntry("YN504", "One coefficient stated twice",
        "The two could contradict each other.",
        "Keep one, or give the weighted mean."),
    CatalogueEntry("YN505", "Compound cannot cross that way",
        "A case may narrow what the network lets through, never widen it.",
        "Change the side in the case, or 'crossing' in the network."),
    CatalogueEntry("YN506", "C-mol of a compound without carbon",
        "A C-mol counts carbon atoms.",
        "Use mol or g."),
    CatalogueEntry("YN507", "A compound is missing from the equation",
        "Without it an element has no source or no way out, and a coefficient is forced to zero.",
        "Add the line that the hint shows."),
    CatalogueEntry("YN508", "No reaction left",
        "Everything is knocked out.",
        "Take some knock-outs out of the list."),
    CatalogueEntry("YN509", "Switching off changes nothing",
        "The reactions could not carry flux in this case anyway, so the idea is not tested.",
        "Check that you meant these reactions, or leave the entry out."),
    CatalogueEntry("YN510", "Growth rate without growth",
        "A growth rate ties biomass to uptake and maintenance; without growth it means nothing.",
        "Add growth to the network and biomass to the equation, or leave the growth rate out."),
    CatalogueEntry("YN511", "Low end above high end",
        "No value lies between them.",
        "Exchange the two."),
    CatalogueEntry("YN512", "No network",
        "The prediction needs one; elements alone need none.",
        "Add 'network:' to the case, or run 'yieldnet balance'."),
    CatalogueEntry("YN513", "Network not found",
        "The case names a network that is neither a file nor shipped.",
        "Check the path, which counts from the folder of the case, or take a shipped name."),
    CatalogueEntry("YN514", "Order of rungs not possible",
        "Every rung below 'elements' must be added once, else values would not be comparable.",
        "Name each rung that the case has exactly once."),
    CatalogueEntry("YN515", "Aim contradicts the energy surplus",
        "The aim asks for spare ATP, and the case says that none is spare.",
        "Leave 'energy surplus' out, or take another aim."),
    # Answers
    CatalogueEntry("YN601", "Infeasible",
        "The statements of the case cannot all be true together.",
        "Look at the rung that is named: what it adds contradicts what stands above it."),
    CatalogueEntry("YN602", "Unbounded",
        "Something that costs nothing runs away, so there is no best value.",
        "Bound what runs away: list or measure the compound that is named."),
    CatalogueEntry("YN603", "The network moved a measured value",
        "The elements alone would have accepted the measurement; the network does not.",
        "Check the measurement, or the reactions and parameters of the network."),
    CatalogueEntry("YN605", "Too large to prove",
        "Every printed number is proven in fractions; this problem is too large for that.",
        "Take a smaller network."),
    CatalogueEntry("YN604", "A measured value was moved",
        "The balances over the cell do not allow all measured values together.",
        "Check the measurement that moved furthest in standard deviations."),
)

CATALOGUE: Mapping[str, CatalogueEntry] = MappingProxyType(
    {entry.code: entry for entry in _ENTRIES}
)
"""All codes."""
if len(CATALOGUE) != len(_ENTRIES):
    raise ValueError("a finding code is registered twice")
