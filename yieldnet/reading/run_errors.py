"""The section ``errors`` of a run file: standard deviations of what has none of its own.

A rule is a standard deviation in a unit, ``2 % of value``, both, or ``exact``. A percent sign alone
is a share of the value, except where percent is the unit of the column itself.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from math import hypot
from typing import TYPE_CHECKING

from yieldnet.foundation.units import UnitError
from yieldnet.reading.fields import entries, text
from yieldnet.reading.measures import PERCENT, scale_of
from yieldnet.reading.run_quantities import PERCENT_UNITS, QuantityTextError, read_size

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.reading.nodes import Node
    from yieldnet.reading.run_labels import Label, LabelBook

__all__ = ["ErrorBook", "ErrorRule"]


@dataclass(slots=True, kw_only=True)
class ErrorRule:
    """Standard deviation that is stated for a whole column or for a setting.

    Parameters
    ----------
    absolute : float
        Part that does not depend on the value, in the unit of the run.
    relative : float
        Part that is a share of the value [-].
    bare_percent : bool
        Whether the absolute part is a percent sign alone, which is the unit only where the column
        is in percent as well.
    span : SourceSpan
        Where it was written.
    used : bool
        Whether anything took it.
    """

    absolute: float = 0.0
    relative: float = 0.0
    bare_percent: bool = False
    span: SourceSpan
    used: bool = False

    @property
    def exact(self) -> bool:
        """Whether the values are declared to have no error."""
        return not self.absolute and not self.relative

    def sd(self, value: float) -> float:
        """Standard deviation of a value; both parts are added as variances."""
        return hypot(self.absolute, self.relative * value)


@dataclass(slots=True, kw_only=True)
class ErrorBook:
    """The section ``errors`` of a run file.

    Parameters
    ----------
    findings : Findings
        Receives what is wrong.
    rules : dict of str to ErrorRule
        Rules by the name of the label; filled by :meth:`read`.
    broken : set of str
        Names whose rule could not be read, so that no more need be said.
    """

    findings: Findings
    rules: dict[str, ErrorRule] = field(default_factory=dict)
    broken: set[str] = field(default_factory=set)

    def read(self, node: Node | None, labels: LabelBook) -> None:
        """Take all rules of the section."""
        if node is None:
            return
        for key, value in entries(node, "'errors'", self.findings):
            label = labels.named(key.text, key.span)
            if label is None or label.name in {"time", "state"}:
                if label is None:
                    labels.refuse(key.text, "'errors':", key.span, self.findings)
                else:
                    self.findings.add(
                        "YN133",
                        f"'errors': {label.name!r} has no error here",
                        key.span,
                        hint="Leave it out: it is taken as written.",
                    )
                continue
            if label.name in self.rules:
                self.findings.add(
                    "YN305",
                    f"the error of {label.name!r} is stated twice",
                    key.span,
                    left=f"first at line {self.rules[label.name].span.line}",
                    hint="Keep one.",
                )
                continue
            written = text(value, f"the error of {key.text!r}", self.findings)
            rule = self._rule(written, label, value.span) if written is not None else None
            if rule is None:
                self.broken.add(label.name)
            else:
                self.rules[label.name] = rule

    def _rule(self, written: str, label: Label, span: SourceSpan) -> ErrorRule | None:
        rule = ErrorRule(span=span)
        if written == "exact":
            return rule
        try:
            for part in written.split(" and "):
                self._part(part, label, rule)
        except QuantityTextError as refused:
            self.findings.add(
                refused.code,
                f"error of {label.name!r}: {refused.reason}",
                span,
                hint=refused.hint,
            )
            return None
        except UnitError as error:
            self.findings.add(
                error.code, f"error of {label.name!r}: {error.reason}", span, hint=error.hint
            )
            return None
        return rule

    def _part(self, part: str, label: Label, rule: ErrorRule) -> None:
        words = part.replace("%", " % ").split()
        if not words:
            raise QuantityTextError(
                "a number is missing", "Write '0.05 g/L and 2 % of value'.", "YN201"
            )
        size, unit = read_size(words[0]), words[1:]
        relative = unit == ["%", "of", "value"]
        if unit == ["%"]:
            relative = label.measure not in PERCENT_UNITS
            rule.bare_percent = not relative
        if rule.relative if relative else rule.absolute:
            raise QuantityTextError(
                "one part is written twice", "Write '0.05 g/L and 2 %'.", "YN305"
            )
        if relative:
            rule.relative = size / 100
        else:
            scale = scale_of("".join(unit), label.measure, label.weight, label.multiple)
            rule.absolute = scale.sd(size)

    def rule(self, label: Label, unit: str, where: SourceSpan) -> ErrorRule | None:
        """Rule for a column or a setting, ``None`` with a finding if there is none.

        Parameters
        ----------
        label : Label
            What is measured.
        unit : str
            Unit in which its values are written.
        where : SourceSpan
            Place of the heading or the setting.

        Returns
        -------
        ErrorRule or None
            The rule.
        """
        found = self.rules.get(label.name)
        if found is None:
            if label.name not in self.broken:
                self.findings.add(
                    "YN131",
                    f"{label.name!r} has no standard deviation",
                    where,
                    hint=f"Add a column '{label.name} s.d.', or a line '{label.name}:' under"
                    " 'errors'; 'exact' must be said.",
                )
            return None
        found.used = True
        if found.bare_percent and unit not in PERCENT:
            self.findings.add(
                "YN146",
                f"error of {label.name!r}: the column is in {unit}, so % can be read in two ways",
                found.span,
                hint=f"Write '... {unit}', or '... % of value'.",
            )
            return None
        return found

    def sd_of(self, rule: ErrorRule, value: float, label: Label, span: SourceSpan) -> float | None:
        """Standard deviation of one value, ``None`` with a finding if a share of it is nothing."""
        sd = rule.sd(value)
        if sd == 0 and not rule.exact:
            self.findings.add(
                "YN131",
                f"{label.name!r} is 0 here, and a share of 0 is no standard deviation",
                span,
                left=f"errors, line {rule.span.line}",
                hint="Add a part in its unit: '0.02 g/L and 2 % of value'.",
            )
            return None
        return sd

    def unused(self) -> None:
        """Say which rules nothing took."""
        for name, rule in self.rules.items():
            if not rule.used:
                self.findings.add(
                    "YN133",
                    f"the error of {name!r} is stated in vain",
                    rule.span,
                    hint="It has a standard deviation of its own, or is not in the run:"
                    " leave the line out.",
                )
