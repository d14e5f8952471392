"""What the columns and settings of a run must agree on: each rule looks at what was read."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

from yieldnet.model.cultivation import CultivationKind, Method, Reading
from yieldnet.model.network import BIOMASS
from yieldnet.reading.run_labels import Role
from yieldnet.reading.run_rules import Rules

if TYPE_CHECKING:
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.cultivation import Calibration
    from yieldnet.reading.run_settings import Content

__all__ = ["FEWEST_IN_WINDOW", "RunRules"]

FEWEST_IN_WINDOW = 3
"""Fewest samples of biomass in a window: two always lie on a line, and say nothing of it [-]."""
_FLOWS = (Role.FLOW_IN, Role.FLOW_OUT)


@dataclass(frozen=True, slots=True, kw_only=True)
class RunRules(Rules):
    """Rules over time, biomass, liquids and the window of one run.

    Parameters
    ----------
    kind : CultivationKind
        How the vessel was run.
    method : Method
        How rates will be found.
    window : tuple of (float, float) or None
        Chosen window [h].
    volume : Reading or None
        Constant volume [L].
    calibration : Calibration or None
        Dry weight of a signal.
    feed, base : tuple of Content
        Contents of feed and base from the run file.
    """

    kind: CultivationKind
    method: Method
    window: tuple[float, float] | None
    volume: Reading | None
    calibration: Calibration | None
    feed: tuple[Content, ...]
    base: tuple[Content, ...]

    def check(self) -> None:
        """Go through all rules."""
        self._times()
        self._needed_columns()
        self._biomass()
        self._liquids()
        self._volumes()
        self._window()

    # Time and kind -------------------------------------------------------------------------------

    def _times(self) -> None:
        if self.kind is CultivationKind.CHEMOSTAT:
            return
        if len(self.sheet.rows) < 2:
            self.findings.add(
                "YN134",
                f"a {self.kind} of {len(self.sheet.rows)} row has no course",
                self.sheet.rows[0][0].span,
                hint="Give at least the first and the last sample.",
            )
        for (_, before), (cell, after) in pairwise(self.columns.times):
            if after <= before:
                self.findings.add(
                    "YN129",
                    f"time {cell.text} does not come after the row before it",
                    cell.span,
                    hint="Sort the rows by time, and merge samples of one time into one row.",
                )

    def _needed_columns(self) -> None:
        has = self.columns.has
        if self.kind is CultivationKind.CHEMOSTAT:
            if not has(Role.DILUTION_RATE) and not (has(Role.FEED_RATE) and self._has_volume):
                self.missing(
                    "a chemostat needs its dilution rate",
                    "Add a column 'dilution rate [1/h]', or 'feed rate' and 'volume'.",
                )
            return
        if not has(Role.TIME):
            self.missing(f"a {self.kind} needs the time of each row", "Add a column 'time [h]'.")
        if self.kind is CultivationKind.FED_BATCH:
            if not has(Role.FED) and not has(Role.FEED_RATE):
                self.missing(
                    "a fed-batch needs what was fed",
                    "Add a column 'fed [L]' (since the start), or 'feed rate [L/h]'.",
                )
            if not has(Role.VOLUME):
                self.missing(
                    "a fed-batch needs the volume of each row",
                    "Add a column 'volume [L]': the volume of a fed-batch is not constant.",
                )

    @property
    def _has_volume(self) -> bool:
        return self.columns.has(Role.VOLUME) or self.fields.get("volume") is not None

    # Biomass -------------------------------------------------------------------------------------

    def _biomass(self) -> None:
        column = self.columns.found.get((Role.BROTH, BIOMASS))
        given = (Role.BROTH, BIOMASS) in self.columns.named
        exponential = self.kind is not CultivationKind.CHEMOSTAT and (
            self.method is Method.EXPONENTIAL
        )
        if exponential and not given:
            self.missing(
                "exponential growth needs biomass",
                "Add a column 'biomass [g/L]' or 'optical density', or write"
                " 'method: start and end'.",
            )
        calibrated = self.fields.get("dry weight") is not None
        if column is None:
            if not given:
                self.in_vain("dry weight", "turns no column into biomass", "Leave it out.")
            return
        if column.label.role is Role.BROTH:
            if calibrated:
                self.findings.add(
                    "YN141",
                    "the sheet has dry weight itself, so 'dry weight' has nothing to turn into it",
                    self.fields.span("dry weight"),
                    left=f"column {column.heading.text!r}",
                    hint="Leave 'dry weight' out, or list the column under 'ignore'.",
                )
            return
        signal = column.label.role.value
        if not calibrated:
            self.findings.add(
                "YN141",
                f"nothing says what dry weight one unit of {signal} is",
                column.heading.span,
                hint=f"Add 'dry weight: {{{signal}: ...}}' to the run file.",
            )
        elif self.calibration is not None and self.calibration.signal != signal:
            self.findings.add(
                "YN141",
                f"'dry weight' is for {self.calibration.signal}, and the sheet has {signal}",
                self.fields.span("dry weight"),
                hint="Give the calibration of what was measured.",
            )

    # Feed, base and volume -----------------------------------------------------------------------

    def _liquids(self) -> None:
        columns = self.columns
        if self.kind is CultivationKind.BATCH:
            self.in_vain("feed", "is not for a batch", "Check 'kind', or leave it out.")
        elif not columns.has(Role.FEED) and self.fields.get("feed") is None:
            self.missing(
                f"nothing says what the feed of this {self.kind} holds",
                "Add 'feed:' with its concentrations to the run file.",
            )
        self.twice(self.feed, Role.FEED, "feed")
        based = columns.has(Role.BASE_ADDED) or columns.has(Role.BASE_RATE)
        if not based:
            self.in_vain(
                "base",
                "is said, and the sheet has no base",
                "Add a column 'base added [L]' or 'base rate [L/h]', or leave it out.",
            )
        elif self.fields.get("base") is None:
            first = next(iter((*columns.of(Role.BASE_ADDED), *columns.of(Role.BASE_RATE))), None)
            self.missing(
                "nothing says what the base holds",
                "Add 'base: {ammonia: 5.0 ± 0.05 mol/L}', or 'base: none' if it holds no compound"
                " of the equation.",
                first.heading.span if first else None,
            )
        for added, rate in ((Role.FED, Role.FEED_RATE), (Role.BASE_ADDED, Role.BASE_RATE)):
            for column in columns.of(rate) if columns.has(added) else ():
                self.findings.add(
                    "YN127",
                    f"{column.heading.text!r} and {added.value!r} are two columns of one thing",
                    column.heading.span,
                    hint="Keep one, and list the other under 'ignore'.",
                )
        for role in (Role.FED, Role.BASE_ADDED):
            for column in columns.of(role):
                for (_, before), (cell, after) in pairwise(column.numbers):
                    if before is not None and after is not None and after < before:
                        self.findings.add(
                            "YN143",
                            f"{role} falls from {before:g} to {cell.text}",
                            cell.span,
                            hint="Give what was added since the start, not since the last row.",
                        )

    def _volumes(self) -> None:
        columns = self.columns
        if columns.has(Role.VOLUME) and self.fields.get("volume") is not None:
            self.findings.add(
                "YN144",
                "the volume stands in the run file and in the sheet",
                self.fields.span("volume"),
                hint="Keep it in one of them.",
            )
        needing = (*_FLOWS, Role.SAMPLED, Role.BASE_ADDED, Role.BASE_RATE, Role.FEED_RATE)
        users = [role for role in needing if columns.has(role)]
        whole = self.kind is not CultivationKind.FED_BATCH
        # A chemostat without a volume was told of already, by its dilution rate.
        told = not columns.has(Role.DILUTION_RATE) and self.kind is CultivationKind.CHEMOSTAT
        if users and whole and not told and not self._has_volume:
            self.missing(
                f"{users[0].value!r} needs the volume of the broth",
                "Add a column 'volume [L]', or 'volume:' in the run file.",
            )
        if self.volume is not None and self.volume.value == 0:
            self._empty(self.fields.span("volume"), "the volume is 0")
        series = columns.one(Role.VOLUME)
        volumes = series.readings if series else [self.volume] * len(self.sheet.rows)
        for reading in volumes if series else ():
            if reading is not None and reading.value == 0 and reading.span is not None:
                self._empty(reading.span, "the volume is 0")
        sampled = columns.one(Role.SAMPLED)
        drawn = 0.0
        for held, sample in zip(volumes, sampled.readings if sampled else (), strict=False):
            if held is None or sample is None or sample.span is None:
                continue
            # A constant volume is that of the start: all samples together come out of it.
            drawn = sample.value + (0.0 if series else drawn)
            if 0 < held.value <= drawn:
                self._empty(
                    sample.span, f"{drawn:g} L were drawn and only {held.value:g} L were there"
                )
                break

    def _empty(self, span: SourceSpan, what: str) -> None:
        self.findings.add(
            "YN138", what, span, hint="Correct the volume, or its unit: the vessel cannot be empty."
        )

    def _window(self) -> None:
        if self.kind is CultivationKind.CHEMOSTAT:
            self.in_vain("method", "is not for a chemostat", "Leave it out.")
            self.in_vain("window", "is not for a chemostat", "Leave it out.")
            return
        if self.method is Method.START_AND_END:
            self.in_vain("window", "is not for the method 'start and end'", "Leave it out.")
            return
        times = [time for _, time in self.columns.times]
        column = self.columns.found.get((Role.BROTH, BIOMASS))
        if not times or column is None or len(times) != len(self.sheet.rows):
            return
        low, high = self.window or (min(times), max(times))
        where = self.fields.span("window") if self.window else self.top
        if low < min(times) or high > max(times):
            self.findings.add(
                "YN135",
                f"the window goes from {low:g} to {high:g} h",
                where,
                left=f"data from {min(times):g} to {max(times):g} h",
                hint="Choose a window within the data.",
            )
            return
        inside = sum(
            reading is not None and low <= time <= high
            for time, reading in zip(times, column.series.readings, strict=True)
        )
        if inside < FEWEST_IN_WINDOW and len(times) >= 2:
            self.findings.add(
                "YN134",
                f"{inside} {'sample lies' if inside == 1 else 'samples lie'} in the window",
                where,
                left=f"expected {FEWEST_IN_WINDOW} or more with biomass",
                hint="Widen the window, or write 'method: start and end'.",
            )
