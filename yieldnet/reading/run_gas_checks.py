"""What gas flows, fractions and settings of a run must agree on."""

from __future__ import annotations

from dataclasses import dataclass
from math import hypot
from typing import TYPE_CHECKING

from yieldnet.reading.measures import PERCENT
from yieldnet.reading.run_labels import INERT, Role
from yieldnet.reading.run_rules import Rules

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.cultivation import Reading
    from yieldnet.reading.cells import Cell
    from yieldnet.reading.run_columns import Column
    from yieldnet.reading.run_settings import Content, GasSettings

__all__ = ["SUM_BAND", "GasRules"]

SUM_BAND = 4
"""Standard deviations by which the fractions of a gas may miss their sum of 1: by chance alone one
row in 16,000 does [-]."""
_AIR_LIKE = 0.1
"""Oxygen or nitrogen beyond which an inlet is no trace [mol/mol]."""
_GASES = (Role.GAS_IN, Role.GAS_OUT)
_FLOWS = (Role.FLOW_IN, Role.FLOW_OUT)


@dataclass(frozen=True, slots=True, kw_only=True)
class GasRules(Rules):
    """Rules over the gas of one run.

    Parameters
    ----------
    gas : GasSettings or None
        What is said of the gas.
    """

    gas: GasSettings | None

    def check(self) -> None:
        """Go through all rules."""
        self._gas_settings()
        self._gas_fractions()

    def _gas_settings(self) -> None:
        columns = self.columns
        gases = [role for role in (*_GASES, *_FLOWS) if columns.has(role)]
        if not gases:
            self.in_vain(
                "gas", "is said, and the sheet has no gas", "Add gas columns, or leave it out."
            )
            return
        if self.fields.get("gas") is None:
            self.missing(
                "nothing says at which conditions the gas flow is told",
                "Add 'gas:' with 'normal conditions' and 'moisture' to the run file.",
            )
        if not any(columns.has(role) for role in _FLOWS):
            self.missing(
                "gas fractions need a gas flow", "Add a column 'gas flow in' or 'gas flow out'."
            )
        if not any(columns.has(role) for role in _GASES):
            self.missing(
                "a gas flow needs gas fractions",
                "Add columns such as 'oxygen out [%]', or list the flow under 'ignore'.",
            )
        if self.gas is None:
            return
        self.twice(self.gas.inlet, Role.GAS_IN, "inlet")
        inlet = {compound for role, compound in columns.named if role is Role.GAS_IN}
        inlet |= {content.label.compound for content in self.gas.inlet}
        outlet = {compound for role, compound in columns.named if role is Role.GAS_OUT}
        for name in sorted(inlet ^ outlet):
            missing, given = ("in", "out") if name in outlet else ("out", "in")
            self.missing(
                f"{name!r} is told in the gas {given}, not in the gas {missing}",
                f"Add a column '{name} {missing} [%]'"
                + (" or a line under 'inlet'" if missing == "in" else "")
                + "; write 0 with its standard deviation if there was none.",
            )

    def _gas_fractions(self) -> None:
        settings = {item.label.compound: item for item in self.gas.inlet} if self.gas else {}
        for role in _GASES:
            columns = {column.label.compound: column for column in self.columns.of(role)}
            for name, column in columns.items():
                self._percent(name, column)
            self._sums(role, columns, settings if role is Role.GAS_IN else {})
        for name, content in settings.items():
            # More than a tenth of a percent, and still below one.
            trace = not 0.001 < content.reading.value < 0.01
            if name in {"oxygen", INERT} and content.in_percent and not trace:
                self._exchanged(f"{name} in", content.key.span)

    def _percent(self, name: str, column: Column) -> None:
        """Fractions of 1 under a percent sign: a main gas of air below 1 %."""
        if column.unit not in PERCENT:
            return
        role = column.label.role
        inlet = self._inlet_values(name) if role is Role.GAS_OUT else ()
        for place, (cell, number) in enumerate(column.numbers):
            if number is None or not 0 < number < 1:
                continue
            if role is Role.GAS_IN:
                small = name in {"oxygen", INERT} and number > 0.1
            else:
                small = place < len(inlet) and (inlet[place] or 0.0) > _AIR_LIKE
            if small:
                self._exchanged(column.label.name, cell.span)
                return

    def _inlet_values(self, name: str) -> tuple[float | None, ...]:
        column = self.columns.found.get((Role.GAS_IN, name))
        if column is not None:
            return tuple(item.value if item else None for item in column.series.readings)
        for content in self.gas.inlet if self.gas else ():
            if content.label.compound == name:
                return (content.reading.value,) * len(self.sheet.rows)
        return ()

    def _exchanged(self, name: str, span: SourceSpan) -> None:
        self.findings.add(
            "YN137",
            f"{name!r} is below 1 %, which looks like a fraction of 1",
            span,
            hint="Write mol/mol as the unit; if it is a trace indeed, write it in ppm.",
        )

    def _sums(
        self, role: Role, columns: Mapping[str, Column], settings: Mapping[str, Content]
    ) -> None:
        shared = [item.reading for name, item in settings.items() if name not in columns]
        names = {*columns, *settings}
        if not names:
            return
        dried = self.gas is not None and self.gas.moisture is None
        for cell, readings in self._rows(columns, shared):
            total = sum(item.value for item in readings)
            spread = hypot(*(item.sd for item in readings))
            above = total > 1 + SUM_BAND * spread
            below = INERT in names and dried and total < 1 - SUM_BAND * spread
            if above or below:
                self.findings.add(
                    "YN136",
                    f"the fractions of the gas {role} add up to {total:.4g}",
                    cell,
                    left=f"expected {'at most ' if above else ''}1",
                    right=f"standard deviation of the sum {spread:.2g}",
                    hint="Check the units; count argon, 0.93 % of air, with nitrogen."
                    if below
                    else "Check the units and the calibration of the analyser.",
                )
                if not columns:
                    return

    def _rows(
        self, columns: Mapping[str, Column], shared: list[Reading]
    ) -> Iterator[tuple[SourceSpan, list[Reading]]]:
        """Place and all fractions of each row in which every one was measured."""
        first: Cell
        for place, row in enumerate(self.sheet.rows):
            own = [column.series.readings[place] for column in columns.values()]
            found = [item for item in own if item is not None]
            if len(found) == len(own):
                first = next((c.numbers[place][0] for c in columns.values()), row[0])
                span = first.span if columns else self.fields.span("gas")
                yield span, [*found, *shared]
