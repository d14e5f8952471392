"""Recoveries: how much of each element and of the electrons the measured values find again."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import side_sign
from yieldnet.foundation.exact import root_of_square

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.balance.covariance import Pooled
    from yieldnet.model.case import Case

__all__ = ["MeasuredRecovery", "measured_recoveries"]

_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class MeasuredRecovery:
    """What comes out of one element, or of the electrons, over what goes in, as measured.

    Parameters
    ----------
    quantity : str
        ``carbon``, ``electrons``, ``nitrogen`` and so on.
    supplied, found : Fraction
        Taken up and given off by the compounds that are measured or known [mol/mol basis].
    sd : Fraction
        Standard deviation of their ratio [-].
    left_out : tuple of str
        Compounds that hold some of it and are not measured.
    """

    quantity: str
    supplied: Fraction
    found: Fraction
    sd: Fraction
    left_out: tuple[str, ...]

    @property
    def ratio(self) -> Fraction:
        """Found over supplied; 1 where the measured values close [-]."""
        return self.found / self.supplied


def measured_recoveries(
    case: Case,
    contents: Mapping[str, Mapping[str, Fraction]],
    pooled: Pooled,
    exact: Mapping[str, Fraction],
) -> tuple[MeasuredRecovery, ...]:
    """Recovery of each element and of the electrons at the values as measured.

    Parameters
    ----------
    case : Case
        The overall equation.
    contents : mapping of str to mapping
        What a mol of each compound holds, by the name of the quantity.
    pooled : Pooled
        Measured values with their covariance.
    exact : mapping of str to Fraction
        Coefficients that are known without an error [mol/mol basis].

    Returns
    -------
    tuple of MeasuredRecovery
        One for each quantity of which something known goes in.

    Notes
    -----
    A compound that is taken up with a negative content carries off what is given to it: oxygen
    takes up -4 electrons, which counts as found. To first order the variance of the ratio
    found/supplied is that of (found - ratio supplied)/supplied.
    """
    values = {**dict(zip(pooled.names, pooled.values, strict=True)), **exact}
    signs = {item.name: side_sign(item.side) for item in case.coefficients}
    rows = []
    for quantity, content in contents.items():
        supplied, found = _ZERO, _ZERO
        flows = {case.basis.name: -content.get(case.basis.name, _ZERO)}
        flows |= {
            name: signs[name] * value * content.get(name, _ZERO) for name, value in values.items()
        }
        for flow in flows.values():
            supplied, found = (supplied - flow, found) if flow < 0 else (supplied, found + flow)
        if not supplied:
            continue
        ratio = found / supplied
        slopes = [
            signs[name] * content.get(name, _ZERO) * (ratio if flows[name] < 0 else 1) / supplied
            for name in pooled.names
        ]
        variance = sum(
            (
                a * b * entry
                for a, line in zip(slopes, pooled.covariance, strict=True)
                for b, entry in zip(slopes, line, strict=True)
            ),
            _ZERO,
        )
        rows.append(
            MeasuredRecovery(
                quantity=quantity,
                supplied=supplied,
                found=found,
                sd=root_of_square(variance),
                left_out=tuple(
                    item.name
                    for item in case.coefficients
                    if item.name not in values and content.get(item.name)
                ),
            )
        )
    return tuple(rows)
