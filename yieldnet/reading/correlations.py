"""The section ``correlations`` of a case file: errors of measured values that are not independent.

Values that share a measurement, such as yields on one substrate, are wrong together. The section
names each pair once, the correlation coefficient of their errors behind it.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import is_positive_definite
from yieldnet.foundation.findings import near
from yieldnet.model.case import Correlation
from yieldnet.reading.fields import number, unsplit_pairs

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.model.case import Measurement
    from yieldnet.reading.nodes import Node

__all__ = ["read_correlations"]


def read_correlations(
    node: Node | None,
    measured: Mapping[str, Measurement],
    resolve: Callable[[str, SourceSpan], str | None],
    findings: Findings,
) -> tuple[Correlation, ...]:
    """Correlations of measured values, with a finding for each that cannot be.

    Parameters
    ----------
    node : Node or None
        The section.
    measured : mapping of str to Measurement
        Measured values by compound.
    resolve : callable
        Name of a compound, or ``None`` with a finding.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    tuple of Correlation
        Each pair once, in written order.
    """
    if node is None:
        return ()
    found: dict[frozenset[str], Correlation] = {}
    known = tuple(measured)
    for key, inner in unsplit_pairs(node, "'correlations'", findings, known):
        first = _measured_name(key, measured, resolve, findings)
        for other, value in unsplit_pairs(inner, f"correlations of {key.text!r}", findings, known):
            second = _measured_name(other, measured, resolve, findings)
            written = number(value, f"correlation of {key.text} and {other.text}", findings)
            if first is None or second is None or written is None:
                continue
            pair = frozenset((first, second))
            if len(pair) < 2:
                findings.add(
                    "YN210",
                    f"{key.text!r} is set against itself",
                    other.span,
                    hint="A value is always fully correlated with itself: leave the line out.",
                )
            elif not -1 < written.value < 1:
                findings.add(
                    "YN210",
                    f"correlation {written.text} of {key.text} and {other.text}",
                    value.span,
                    left="expected a number between -1 and 1",
                    hint="At 1 or -1 the two would be one measurement: keep one of them."
                    if abs(written.value) == 1
                    else "Write the correlation coefficient, such as 0.4.",
                )
            elif pair in found:
                findings.add(
                    "YN504",
                    f"the correlation of {key.text} and {other.text} is written twice",
                    other.span,
                    hint="Write each pair once.",
                )
            else:
                found[pair] = Correlation(
                    first=first, second=second, value=written.value, span=value.span
                )
    correlations = tuple(found.values())
    _check_possible(correlations, node, findings)
    return correlations


def _measured_name(
    key: Node,
    measured: Mapping[str, Measurement],
    resolve: Callable[[str, SourceSpan], str | None],
    findings: Findings,
) -> str | None:
    name = resolve(key.text, key.span)
    if name is None:
        return None
    item = measured.get(name)
    if item is None or item.sd is None:
        reason = "is not measured" if item is None else "has no error that could be correlated"
        way_out = "Write it with its error under 'measured', or leave the correlation out."
        findings.add(
            "YN503",
            f"correlation of {key.text!r}, which {reason}",
            key.span,
            hint=(near(key.text, measured) if item is None else "") or way_out,
        )
        return None
    return name


def _check_possible(correlations: tuple[Correlation, ...], node: Node, findings: Findings) -> None:
    """A finding if no errors could have these correlations."""
    names = tuple(
        dict.fromkeys(name for item in correlations for name in (item.first, item.second))
    )
    values = {frozenset((item.first, item.second)): item.value for item in correlations}

    def possible(some: tuple[str, ...]) -> bool:
        one = Fraction(1)
        return is_positive_definite(
            [
                [one if a == b else values.get(frozenset((a, b)), Fraction(0)) for b in some]
                for a in some
            ]
        )

    if possible(names):
        return
    # Only those that contradict each other are named, so that there is something to mend: what is
    # left out of a possible set stays possible, so one pass finds a set that needs all its members.
    least = names
    for name in names:
        others = tuple(other for other in least if other != name)
        if not possible(others):
            least = others
    findings.add(
        "YN810",
        f"no errors can have these correlations: {', '.join(least)}",
        node.span,
        left="the covariance of the measured values is not positive definite",
        hint="Correct one of them, or write more digits.",
    )
