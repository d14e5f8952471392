"""The text of a first case: every line explained, and what else could be written as offers.

In: a :class:`~yieldnet.studies.starting_case.StartingCase`. Out: the text of a case file. A line
that begins with ``#`` and a space explains; one that begins with ``#`` and no space is an offer,
which counts once the ``#`` is taken away. No number in it is data: placeholders say so.
"""

from __future__ import annotations

import textwrap
from pathlib import PurePosixPath
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import decimal_text
from yieldnet.model.network import BIOMASS

if TYPE_CHECKING:
    from fractions import Fraction

    from yieldnet.model.network import Network, Parameter
    from yieldnet.studies.starting_case import StartingCase

__all__ = ["GASES", "REPLACE", "case_lines", "equation_text", "explained", "title_of", "trailing"]

REPLACE = "replace this"
"""Mark of a placeholder."""
GASES = frozenset(
    {"carbon dioxide", "carbon monoxide", "hydrogen", "isoprene", "methane", "oxygen"}
)
"""Compounds that pass through a broth as gas, or leave it with the gas at 37 degC."""
_WIDTH = 100
_COMMENTS_AT = 34
"""Column of the remarks behind values."""


def explained(words: str, indent: str = "") -> list[str]:
    """Comment lines of a text.

    Examples
    --------
    >>> explained("Title of the case.", "  ")
    ['  # Title of the case.']
    """
    lead = f"{indent}# "
    return textwrap.wrap(
        words,
        _WIDTH,
        initial_indent=lead,
        subsequent_indent=lead,
        break_long_words=False,
        break_on_hyphens=False,
    )


def trailing(line: str, words: str) -> str:
    """A line with a remark behind it.

    Examples
    --------
    >>> trailing("  vessel: 100 m3", "volume")
    '  vessel: 100 m3                  # volume'
    """
    return f"{line.ljust(_COMMENTS_AT - 1)} # {words}"


def title_of(start: StartingCase) -> str:
    """Product and substrate as a title."""
    return f"{start.product[:1].upper()}{start.product[1:]} from {start.substrate}"


def equation_text(start: StartingCase) -> str:
    """The overall equation as a case file has it."""
    shape = start.shape
    left = " + ".join((shape.substrate, *(f"? {name}" for name in shape.fed)))
    return f"{left} -> {' + '.join(f'? {name}' for name in shape.made)}"


def case_lines(start: StartingCase, network: str, copied: bool) -> list[str]:
    """Lines of a case file without its plant.

    Parameters
    ----------
    start : StartingCase
        What it is made of.
    network : str
        Name or path of the network, as the case file says it.
    copied : bool
        Whether that is a copy beside the case.

    Returns
    -------
    list of str
        The lines.
    """
    return [
        *explained(
            f"A first case: what one mole of {start.substrate} can become in one network. It has an"
            " answer as it stands:"
        ),
        "# yieldnet predict case.yaml",
        *explained(
            "A # with a space behind it explains. A # without one is an offer: take it away, and"
            f" the line counts. Figures marked '{REPLACE}' are placeholders, no data."
        ),
        "",
        "# Title, shown above every answer.",
        f"case: {title_of(start)}, first estimate",
        "",
        *_network(start.network, network, copied),
        *_equation(start),
        *_statements(start),
        *_choices(start.network),
    ]


def _network(network: Network, written: str, copied: bool) -> list[str]:
    where = "Its file is yours: change what you know better."
    if copied:
        where = "This is a copy of it beside the case: change what you know better."
    elif not PurePosixPath(written).suffix:
        where = f"'yieldnet networks {written}' shows it in full."
    lines = [
        *explained(f"Network of the cell: {network.title}."),
        *explained(where),
        f"network: {written}",
    ]
    if network.strains:
        names = "; ".join(item.name for item in network.strains)
        lines += [
            "",
            *explained(
                "A strain switches reactions off. Without one all routes of the network are open at"
                f" once, so that the answer is an upper limit. There are: {names}."
            ),
            f"#strain: {network.strains[0].name}",
        ]
    if network.parameter_sets:
        names = "; ".join(item.name for item in network.parameter_sets)
        lines += [
            "",
            *explained(f"Values of parameters that go together. There are: {names}."),
            f"#parameter set: {network.parameter_sets[0].name}",
        ]
    return [*lines, ""]


def _equation(start: StartingCase) -> list[str]:
    shape = start.shape
    lines = explained(
        f"The overall equation, per mol of {shape.substrate}, which stands first and is the basis."
        " A ? is a number to be found. What is not listed is neither fed nor made."
    )
    for name in shape.fed:
        lines += explained(f"- {name}: {_why_fed(name, shape.nitrogen)}")
    lines += explained(f"- {start.product}: the product")
    rest = [name for name in shape.made if name != start.product]
    if BIOMASS in rest:
        lines += explained("- biomass: the cells that grow")
    others = [name for name in rest if name != BIOMASS]
    if others:
        lines += explained(
            f"- {', '.join(others)}: by-products of the network; take out what your cells do not"
            " make"
        )
    if shape.left_out:
        lines += explained(
            f"The network could also take up {', '.join(shape.left_out)}: add '+ ? ...' on the left"
            " where it is fed."
        )
    lines += [f"equation: {equation_text(start)}", ""]
    if shape.either:
        lines += [
            "# Taken up or given off, as the balances want; the answer says which.",
            "either side:",
            *(f"  - {name}" for name in shape.either),
            "",
        ]
    return lines


def _why_fed(name: str, nitrogen: str) -> str:
    if name == nitrogen:
        return "the nitrogen source"
    if name == "oxygen":
        return "for respiration, without limit here; take it out for a process without air"
    return "taken up if it helps"


def _statements(start: StartingCase) -> list[str]:
    """Aim, and offers of what could be stated."""
    shape = start.shape
    grows = BIOMASS in shape.made
    lines = [
        *explained(
            f"What is to be most; 'least' works too, and so does 'most ATP'. {_hint(start)}"
        ),
        f"aim: most {start.product}",
        "",
        "# Conditions: with the uptake, cells at rest are charged what keeps them alive.",
        "#conditions:",
        trailing("  #substrate uptake: 5.0 ± 0.3 mmol/g/h", f"per g dry weight; {REPLACE}"),
    ]
    seen = BIOMASS if grows and start.product != BIOMASS else _by_product(start)
    unit = " g/g" if seen == BIOMASS else ""
    lines += [
        "",
        "# What was measured, with its standard deviation behind ±, in mol/mol unless g/g is said.",
        "#measured:",
        trailing(f"  #{seen}: 0.10 ± 0.01{unit}", REPLACE),
        "",
        "# Bounds that the answer must keep: at least, at most, or 0.1 to 0.3.",
        "#demands:",
    ]
    if "oxygen" in shape.fed:
        lines.append(trailing("  #oxygen: at most 2", f"what the vessel can bring; {REPLACE}"))
    else:
        lines.append(trailing(f"  #{start.product}: at least 0.01", REPLACE))
    return [
        *lines,
        "",
        "# ATP that is left over is lost unless this line says that growth and upkeep use it all.",
        "#energy surplus: none",
        "",
    ]


def _hint(start: StartingCase) -> str:
    """Why the best point does not grow."""
    if start.product == BIOMASS or BIOMASS not in start.shape.made:
        return ""
    return (
        f"The most {start.product} is mostly made by cells that do not grow: measure biomass, or"
        " demand some."
    )


def _by_product(start: StartingCase) -> str:
    others = (name for name in start.shape.made if name not in (start.product, BIOMASS))
    return next(others, start.product)


def _choices(network: Network) -> list[str]:
    """Offers of what could be changed in the network."""
    groups = network.groups()
    first = groups[0] if groups else network.reactions[0].name
    known = f" Groups: {', '.join(groups)}." if groups else ""
    lines = [
        *explained(f"Reactions or groups that are switched off.{known}"),
        "#knock-outs:",
        f"  #- {first}",
    ]
    if network.parameters:
        lines += ["", "# Other values of the parameters of the network.", "#parameters:"]
        lines += [
            trailing(f"  #{item.name}: {_number(item.value)}", _range(item))
            for item in network.parameters
        ]
    return lines


def _number(value: Fraction) -> str:
    return decimal_text(value) or str(value)


def _range(item: Parameter) -> str:
    ends = [_number(end) for end in (item.low, item.high) if end is not None]
    unit = item.unit or "without unit"
    return f"{' to '.join(ends)} {unit}" if ends else unit
