"""Views of a trade-off: its words, tables, JSON and CSV."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.model.network import Direction
from yieldnet.optimum.polygon import Shape
from yieldnet.optimum.ranges import Range
from yieldnet.report.figures import figure, range_text, with_sign
from yieldnet.report.json_form import FORMAT, findings_form
from yieldnet.report.table import Table
from yieldnet.studies.tradeoff import Change

if TYPE_CHECKING:
    from collections.abc import Iterator

    from yieldnet.foundation.findings import Finding
    from yieldnet.studies.tradeoff import Corner, Edge, Region, Switch, Tradeoff, TradeoffAxis

__all__ = [
    "axis_label",
    "corner_name",
    "edge_words",
    "region_headline",
    "region_letter",
    "region_notes",
    "region_tables",
    "switch_words",
    "tradeoff_findings",
    "tradeoff_form",
    "tradeoff_records",
    "tradeoff_title",
    "turn_words",
]


_WAY = {Direction.CONSUMED: " taken up", Direction.PRODUCED: "", Direction.EITHER: " given off"}


def tradeoff_title(result: Tradeoff) -> str:
    """What is shown against what."""
    return f"{result.y.name} against {result.x.name}, per mol {result.basis}"


def axis_label(result: Tradeoff, axis: TradeoffAxis) -> str:
    """Name of an axis with its unit, and the way that counts as positive where it is not plain."""
    if axis.unit == "1/h":
        return f"{axis.name} [{axis.unit}]"
    coefficient = result.regions[0].case.coefficient(axis.compound)
    assert coefficient is not None
    return f"{axis.name}{_WAY[coefficient.side]} [mol/mol {result.basis}]"


def region_letter(result: Tradeoff, region: int) -> str:
    """Letter of a case; empty if there is only one."""
    if len(result.regions) == 1:
        return ""
    return chr(ord("A") + region) if region < 26 else f"{region + 1}."


def corner_name(result: Tradeoff, region: int, corner: int) -> str:
    """Number of a corner, with the letter of its case if there are several."""
    return f"{region_letter(result, region)}{corner + 1}"


def region_headline(result: Tradeoff, region: int) -> str:
    """The ends of both axes in one line."""
    shown = result.regions[region]
    parts = [
        _most(shown, result.y, result.x, 1),
        _most(shown, result.x, result.y, 0),
    ]
    return "; ".join(parts)


def _most(region: Region, axis: TradeoffAxis, other: TradeoffAxis, place: int) -> str:
    """Most on one axis, with what the other can be there."""
    most = (region.polygon.x, region.polygon.y)[place].high
    if most is None:
        return f"{axis.name} unbounded"
    text = f"most {axis.name} {figure(most)} {axis.unit}"
    there = [at[1 - place] for at in region.polygon.corners if at[place] == most]
    level = any(ray[place] == 0 for ray in region.polygon.rays)
    if there and not level:
        text += f" ({other.name} {range_text(Range(min(there), max(there)))})"
    return text


def region_tables(result: Tradeoff, region: int) -> tuple[Table, ...]:
    """Corners, edges and the overall equation at each corner.

    Parameters
    ----------
    result : Tradeoff
        The trade-off.
    region : int
        Place of the case.

    Returns
    -------
    tuple of Table
        Empty tables left out.
    """
    shown = result.regions[region]
    tables = []
    if shown.corners:
        tables += [_corners(result, region), _equations(result, region)]
    if shown.edges:
        tables.append(_edges(result, region))
    return tuple(tables)


def _corners(result: Tradeoff, region: int) -> Table:
    shown = result.regions[region]
    columns, cells = ["corner"], []
    for place, axis in enumerate((result.x, result.y)):
        values = [(corner.x, corner.y)[place] for corner in shown.corners]
        columns.append(f"{axis.name}, {axis.unit}")
        cells.append([figure(value) for value in values])
        grams = _grams(shown, axis)
        if grams is not None:
            columns.append("g/g")
            cells.append([figure(value * grams) for value in values])
    names = [corner_name(result, region, place) for place in range(len(shown.corners))]
    bounded = shown.polygon.shape is not Shape.UNBOUNDED
    return Table(
        title="Corners, counter-clockwise" + (" from the lowest" if bounded else ""),
        columns=tuple(columns),
        rows=tuple(zip(names, *cells, strict=True)),
    )


def _grams(region: Region, axis: TradeoffAxis) -> Fraction | None:
    """g/g in one mol/mol; ``None`` where that means nothing."""
    mass = region.case.compound(axis.compound).weight.molar_mass
    basis = region.case.basis.weight.molar_mass
    return mass / basis if mass and basis and axis.unit == "mol/mol" else None


def _equations(result: Tradeoff, region: int) -> Table:
    shown = result.regions[region]
    return Table(
        title="Overall equation at each corner, mol/mol; a bracket where it is not unique",
        columns=("corner", ""),
        rows=tuple(
            (corner_name(result, region, place), _equation(shown, corner))
            for place, corner in enumerate(shown.corners)
        ),
    )


def _equation(region: Region, corner: Corner) -> str:
    left, right = [region.case.basis.name], list[str]()
    for item in region.case.coefficients:
        value = dict(corner.coefficients)[item.name]
        if value.single and value.low == 0:
            continue
        used = item.side is Direction.CONSUMED
        if item.side is Direction.EITHER and value.high is not None and value.high <= 0:
            used, value = True, value.turned()
        amount = range_text(value)
        if value.single:
            text = item.name if value.low == 1 else f"{amount} {item.name}"
        else:
            text = f"[{amount}] {item.name}"
        (left if used else right).append(text)
    return " + ".join(left) + " -> " + (" + ".join(right) or "nothing")


def _edges(result: Tradeoff, region: int) -> Table:
    shown = result.regions[region]
    unit = "mol/mol" if result.x.unit == "mol/mol" else "mol h/mol"
    return Table(
        title=f"Along the edges: {result.y.name} per {result.x.name}, {unit}, and what changes",
        columns=("from", "to", "slope", "what changes"),
        rows=tuple(
            (
                corner_name(result, region, edge.start),
                corner_name(result, region, edge.end),
                "upright" if edge.slope is None else with_sign(edge.slope),
                "; ".join(switch_words(result, shown, edge, item) for item in edge.switches),
            )
            for edge in shown.edges
        ),
        note="What appears is none at the first corner; what vanishes is none at the second.",
    )


def switch_words(result: Tradeoff, region: Region, edge: Edge, switch: Switch) -> str:
    """What becomes of a coefficient along an edge.

    Parameters
    ----------
    result : Tradeoff
        The trade-off.
    region : Region
        One of its cases.
    edge : Edge
        One of its edges.
    switch : Switch
        One of its switches.

    Returns
    -------
    str
        Words without a full stop.
    """
    if switch.change is not Change.TURNS:
        return f"{switch.compound} {_verb(switch.change, switch.certain)}"
    before = dict(region.corners[edge.start].coefficients)[switch.compound]
    taken_up = before.high is not None and before.high < 0
    ways = ("taken up", "given off") if taken_up else ("given off", "taken up")
    axis, place = (result.y, 1) if edge.slope is None else (result.x, 0)
    ends = sorted(at[place] for at in switch.places)
    where = range_text(Range(ends[0], ends[-1]))
    return f"{switch.compound} turns from {ways[0]} to {ways[1]} at {axis.name} {where}"


def _verb(change: Change, certain: bool, several: bool = False) -> str:
    word, ending = ("appear", "s") if change is Change.APPEARS else ("vanish", "es")
    if not certain:
        return f"may {word}"
    return word if several else word + ending


def edge_words(region: Region, edge: Edge) -> str:
    """What appears or vanishes along an edge, from left to right or, if upright, upwards.

    Parameters
    ----------
    region : Region
        One of the cases of a trade-off.
    edge : Edge
        One of its edges.

    Returns
    -------
    str
        A line for each kind of change; empty if nothing appears or vanishes.
    """
    backwards = _is_backwards(region, edge)
    other = {Change.APPEARS: Change.VANISHES, Change.VANISHES: Change.APPEARS}
    kinds: dict[tuple[Change, bool], list[str]] = {}
    for item in edge.switches:
        if item.change is Change.TURNS:
            continue
        change = other[item.change] if backwards else item.change
        kinds.setdefault((change, item.certain), []).append(item.compound)
    return "\n".join(
        f"{', '.join(names)} {_verb(*kind, len(names) > 1)}" for kind, names in kinds.items()
    )


def _is_backwards(region: Region, edge: Edge) -> bool:
    """Whether an edge goes from right to left or downwards."""
    here, there = region.corners[edge.start], region.corners[edge.end]
    return (here.x, here.y) > (there.x, there.y)


def turn_words(region: Region, edge: Edge, switch: Switch) -> str:
    """What becomes of a coefficient that turns, from left to right or upwards.

    Parameters
    ----------
    region : Region
        One of the cases of a trade-off.
    edge : Edge
        One of its edges.
    switch : Switch
        A switch of that edge that turns.

    Returns
    -------
    str
        Words that stand at the place where it turns.
    """
    later = region.corners[edge.start if _is_backwards(region, edge) else edge.end]
    value = dict(later.coefficients)[switch.compound]
    way = "given off" if value.low is not None and value.low > 0 else "taken up"
    return f"from here {switch.compound} {way}"


def region_notes(result: Tradeoff, region: int) -> tuple[str, ...]:
    """What runs away, and what was given up.

    Parameters
    ----------
    result : Tradeoff
        The trade-off.
    region : int
        Place of the case.

    Returns
    -------
    tuple of str
        Sentences.
    """
    shown = result.regions[region]
    notes = []
    rays, corners = shown.polygon.rays, shown.corners
    if rays and not corners:
        ways = " and ".join(_ray_words(result, ray) for ray in rays)
        notes.append(f"Unbounded, without a corner: runs away along {ways}.")
    elif rays:
        first, last = (corner_name(result, region, place) for place in (0, len(shown.corners) - 1))
        notes.append(
            f"Unbounded: from corner {first} along {_ray_words(result, rays[0])}, and from corner"
            f" {last} along {_ray_words(result, rays[1])}, without end."
        )
    if rays:
        notes.append("Measure, demand or close what runs away, and it gets an end.")
    if shown.given_up:
        notes.append("Given up, since it is on an axis: " + "; ".join(shown.given_up) + ".")
    return tuple(notes)


def _ray_words(result: Tradeoff, ray: tuple[Fraction, Fraction]) -> str:
    return f"{with_sign(ray[0])} {result.x.name} with {with_sign(ray[1])} {result.y.name}"


def tradeoff_findings(result: Tradeoff) -> tuple[Finding, ...]:
    """Findings of all cases, each once."""
    return tuple(dict.fromkeys(item for region in result.regions for item in region.findings))


def tradeoff_records(result: Tradeoff) -> tuple[tuple[str, ...], tuple[tuple[str, ...], ...]]:
    """Corners as a table of full numbers, one row a corner.

    Parameters
    ----------
    result : Tradeoff
        The trade-off.

    Returns
    -------
    tuple of (tuple of str, tuple of tuple of str)
        Headings and rows; cells are empty where a case has no such coefficient or no bound.
    """
    compounds = list(
        dict.fromkeys(item.name for region in result.regions for item in region.case.coefficients)
    )
    header = ["case", "corner"]
    header += [f"{axis.name} {axis.unit}" for axis in (result.x, result.y)]
    header += [f"exact {axis.name} {axis.unit}" for axis in (result.x, result.y)]
    header += [f"{name} {end} mol/mol" for name in compounds for end in ("low", "high")]
    rows = []
    for region in result.regions:
        for place, corner in enumerate(region.corners, 1):
            ranges = dict(corner.coefficients)
            cells = [region.case.title, str(place), str(float(corner.x)), str(float(corner.y))]
            cells += [str(corner.x), str(corner.y)]
            cells += [cell for name in compounds for cell in _ends(ranges.get(name))]
            rows.append(tuple(cells))
    return tuple(header), tuple(rows)


def _ends(value: Range | None) -> Iterator[str]:
    for end in (None, None) if value is None else (value.low, value.high):
        yield "" if end is None else str(float(end))


def tradeoff_form(result: Tradeoff) -> dict[str, Any]:
    """Form of a trade-off; yields in mol/mol, growth rates in 1/h.

    Parameters
    ----------
    result : Tradeoff
        The trade-off.

    Returns
    -------
    dict
        Keys of ``format: 1``; corners are counted from 1.
    """
    shapes = [region.polygon.shape for region in result.regions]
    return {
        "format": FORMAT,
        "status": "unbounded" if Shape.UNBOUNDED in shapes else "solved",
        "basis": {"compound": result.basis, "unit": "mol"},
        "x": _axis(result.x),
        "y": _axis(result.y),
        "cases": [_region(result, place) for place in range(len(result.regions))],
        "findings": findings_form(tradeoff_findings(result)),
    }


def _axis(axis: TradeoffAxis) -> dict[str, str]:
    return {"name": axis.name, "compound": axis.compound, "unit": axis.unit}


def _region(result: Tradeoff, place: int) -> dict[str, Any]:
    region = result.regions[place]
    sides = {item.name: item.side for item in region.case.coefficients}
    return {
        "case": region.case.title,
        "shape": str(region.polygon.shape),
        "x": _range(region.polygon.x),
        "y": _range(region.polygon.y),
        "corners": [
            {
                "corner": number,
                **_point((corner.x, corner.y)),
                "coefficients": [
                    {"compound": name, "side": str(sides[name]), **_range(value)}
                    for name, value in corner.coefficients
                ],
            }
            for number, corner in enumerate(region.corners, 1)
        ],
        "rays": [_point(ray) for ray in region.polygon.rays],
        "edges": [
            {
                "from": edge.start + 1,
                "to": edge.end + 1,
                "slope": None if edge.slope is None else float(edge.slope),
                "exact_slope": None if edge.slope is None else str(edge.slope),
                "switches": [
                    {
                        "compound": item.compound,
                        "change": str(item.change),
                        "certain": item.certain,
                        "places": [_point(at) for at in item.places],
                        "words": switch_words(result, region, edge, item),
                    }
                    for item in edge.switches
                ],
            }
            for edge in region.edges
        ],
        "given_up": list(region.given_up),
    }


def _point(at: tuple[Fraction, Fraction]) -> dict[str, Any]:
    return {"x": float(at[0]), "y": float(at[1]), "exact_x": str(at[0]), "exact_y": str(at[1])}


def _range(value: Range) -> dict[str, Any]:
    found: dict[str, Any] = {}
    for name, end in (("low", value.low), ("high", value.high)):
        found[name] = None if end is None else float(end)
        found[f"exact_{name}"] = None if end is None else str(end)
    return found
