"""Measured values that stand in the run file itself, in the units of the run."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from yieldnet.foundation.units import UnitError
from yieldnet.model.cultivation import Reading
from yieldnet.reading.fields import text
from yieldnet.reading.measures import Measure, scale_of
from yieldnet.reading.run_quantities import Written, check_value, read_written

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings
    from yieldnet.model.network import Compound
    from yieldnet.reading.nodes import Node
    from yieldnet.reading.run_errors import ErrorBook
    from yieldnet.reading.run_labels import Label

__all__ = ["SettingReader"]


@dataclass(slots=True, kw_only=True)
class SettingReader:
    """Reads the measured values that stand in the run file itself.

    Parameters
    ----------
    findings : Findings
        Receives what is wrong.
    errors : ErrorBook
        Errors of settings without their own.
    """

    findings: Findings
    errors: ErrorBook

    def labelled(self, node: Node, label: Label) -> Reading | None:
        """Value of a setting whose error may stand under ``errors``."""
        found = self._read(node, repr(label.name), label.measure, label.weight, label.multiple)
        if found is None:
            return None
        written, reading = found
        if written.sd is not None:
            return reading
        rule = self.errors.rule(label, written.unit, node.span)
        sd = self.errors.sd_of(rule, reading.value, label, node.span) if rule else None
        return replace(reading, sd=sd) if sd is not None else None

    def measured(self, node: Node, name: str, measure: Measure) -> Reading | None:
        """Value that carries its own error."""
        found = self._read(node, name, measure, None, 1)
        if found is None:
            return None
        if found[0].sd is None:
            self.findings.add(
                "YN131",
                f"{name} has no standard deviation",
                node.span,
                hint="Write number ± standard deviation unit, or the word exact in its place.",
            )
            return None
        return found[1]

    def plain(self, node: Node, name: str, measure: Measure) -> float | None:
        """Value that is taken as it stands, in the unit of the run."""
        found = self._read(node, name, measure, None, 1)
        if found is None:
            return None
        if found[0].sd:
            self.findings.add(
                "YN133",
                f"{name} has no error here",
                node.span,
                hint="It is taken as written: leave the error out.",
            )
            return None
        return found[1].value

    def _read(
        self, node: Node, name: str, measure: Measure, weight: Compound | None, multiple: int
    ) -> tuple[Written, Reading] | None:
        words = text(node, name, self.findings)
        if words is None:
            return None
        written = read_written(words, measure, node.span, name, self.findings)
        if written is None:
            return None
        try:
            scale = scale_of(written.unit, measure, weight, multiple)
        except UnitError as error:
            self.findings.add(error.code, f"{name}: {error.reason}", node.span, hint=error.hint)
            return None
        value = scale.value(written.number)
        if not check_value(value, measure, node.span, name, self.findings, words):
            return None
        sd = written.sd or 0.0
        sd = sd * abs(value) if written.relative else scale.sd(sd)
        if sd == 0 and written.sd:
            self.findings.add(
                "YN131",
                f"{name} is 0, and a share of 0 is no standard deviation",
                node.span,
                hint="Write the standard deviation in the unit.",
            )
            return None
        return written, Reading(value=value, sd=sd, span=node.span)
