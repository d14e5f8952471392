"""The settings of a run file: salts, dry weight, feed and base, window, gas."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import library_names
from yieldnet.foundation.exact import NumberTextError, read_number
from yieldnet.foundation.units import UnitError
from yieldnet.model.cultivation import Calibration, DissolvedCarbonDioxide, Moisture
from yieldnet.model.network import Compound
from yieldnet.reading.fields import Fields, entries, formula, text, unsplit_pairs
from yieldnet.reading.measures import PERCENT, Measure, scale_of
from yieldnet.reading.nodes import Kind, Node
from yieldnet.reading.run_labels import Label, LabelBook, Role, Salt

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings
    from yieldnet.model.cultivation import Reading
    from yieldnet.reading.run_values import SettingReader

__all__ = [
    "DISSOLVED_KEYS",
    "GAS_KEYS",
    "MOISTURE_KEYS",
    "SIGNALS",
    "Content",
    "GasSettings",
    "SettingsReader",
]

GAS_KEYS = ("normal conditions", "inlet", "moisture", "dissolved carbon dioxide")
"""Keys of 'gas'."""
MOISTURE_KEYS = ("inlet", "outlet", "temperature", "inlet temperature", "pressure")
"""Keys of 'moisture'."""
DISSOLVED_KEYS = ("pH", "temperature", "pressure")
"""Keys of 'dissolved carbon dioxide'."""
SIGNALS = {
    Role.OPTICAL_DENSITY.value: Measure.DRY_WEIGHT,
    Role.WET_WEIGHT.value: Measure.MASS_RATIO,
}
"""Signals that a calibration turns into dry weight, with what one unit of them is worth."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Content:
    """A compound of a feed, a base or the inlet gas, with its one value for the whole run."""

    label: Label
    reading: Reading
    key: Node
    in_percent: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class GasSettings:
    """What a run file says of its gas.

    Parameters
    ----------
    temperature : float
        Of the normal conditions of the flow [K].
    pressure : float
        Of the same [kPa].
    inlet : tuple of Content
        Mole fractions of the inlet [mol/mol].
    moisture : Moisture or None
        ``None`` for dried gas.
    dissolved : DissolvedCarbonDioxide or None
        ``None`` where it is left out.
    """

    temperature: float
    pressure: float
    inlet: tuple[Content, ...]
    moisture: Moisture | None
    dissolved: DissolvedCarbonDioxide | None


@dataclass(slots=True, kw_only=True)
class SettingsReader:
    """Reads the settings of one run file.

    Parameters
    ----------
    values : SettingReader
        Reads single values.
    labels : LabelBook
        What names stand for.
    findings : Findings
        Receives what is wrong.
    """

    values: SettingReader
    labels: LabelBook
    findings: Findings

    def salts(self, node: Node | None) -> dict[str, Salt]:
        """Salts by their name; those that cannot be used are told and left out."""
        found: dict[str, Salt] = {}
        for key, value in entries(node, "'salts'", self.findings) if node else ():
            label = f"salt {key.text!r}"
            fields = Fields(value, label, ("acid", "formula"), self.findings)
            if value.kind is not Kind.MAPPING:
                continue
            acid_node = fields.need("acid", "Name the acid that is meant, as in the equation.")
            formula_node = fields.need("formula", "Give the formula of the salt.")
            if acid_node is None or formula_node is None:
                continue
            salt = formula(formula_node, f"{label}: formula", self.findings)
            word = text(acid_node, f"{label}: acid", self.findings)
            if word is None or salt is None:
                continue
            acid = self.labels.compound(word)
            if acid is None:
                self.labels.refuse(word, f"{label}: acid", acid_node.span, self.findings)
                continue
            self.labels.named(word, acid_node.span)
            if self.labels.compound(key.text) is not None:
                self.findings.add(
                    "YN305",
                    f"{key.text!r} is a salt and a compound of the equation",
                    key.span,
                    hint="Give the salt another name, or take it out of the equation.",
                )
                continue
            carbon, carbon_of_acid = salt["C"], acid.formula["C"]
            multiple = carbon / carbon_of_acid if carbon_of_acid else carbon * 0
            if multiple.denominator != 1 or multiple < 1:
                self.findings.add(
                    "YN140",
                    f"{label} is no whole multiple of {acid.name!r}",
                    key.span,
                    left=f"carbon in {salt}: {carbon}",
                    right=f"carbon in {acid.formula}: {carbon_of_acid}",
                    hint="Correct the formula, or name another acid.",
                )
                continue
            found[key.text] = Salt(
                salt=Compound(name=key.text, formula=salt, span=key.span),
                acid=acid.name,
                multiple=int(multiple),
            )
        return found

    def calibration(self, node: Node | None) -> Calibration | None:
        """What turns a signal into dry weight."""
        if node is None:
            return None
        fields = Fields(node, "'dry weight'", tuple(SIGNALS), self.findings)
        given = [signal for signal in SIGNALS if fields.get(signal) is not None]
        if node.kind is Kind.MAPPING and len(given) != 1:
            self.findings.add(
                "YN112",
                f"'dry weight' has {len(given)} signals",
                node.span,
                left="expected one of " + ", ".join(SIGNALS),
                hint="Write {optical density: 0.38 ± 0.01 g/L}.",
            )
        value = fields.get(given[0]) if len(given) == 1 else None
        if value is None:
            return None
        signal = given[0]
        factor = self.values.measured(value, f"dry weight of {signal}", SIGNALS[signal])
        if factor is not None and factor.value == 0:
            self.findings.add(
                "YN210",
                f"the dry weight of one unit of {signal} is 0",
                value.span,
                hint="Write the slope of the calibration.",
            )
            return None
        return None if factor is None else Calibration(signal=signal, factor=factor)

    def contents(self, node: Node | None, role: Role, name: str) -> tuple[Content, ...]:
        """Compounds with one value for the whole run, each once."""
        found: dict[str, Content] = {}
        pairs = unsplit_pairs(node, name, self.findings, library_names()) if node else ()
        for key, value in pairs:
            words = f"{key.text} {role}" if role is Role.GAS_IN else f"{role} {key.text}"
            label = self.labels.named(words, key.span)
            if label is None or label.role is not role:
                self.labels.refuse(key.text, f"{name}:", key.span, self.findings)
                continue
            if label.compound in found:
                self.findings.add(
                    "YN305",
                    f"{name} tells {label.compound!r} twice",
                    key.span,
                    left=f"first at line {found[label.compound].key.span.line}",
                    hint="Keep one.",
                )
                continue
            reading = self.values.labelled(value, label)
            if reading is not None:
                found[label.compound] = Content(
                    label=label,
                    reading=reading,
                    key=key,
                    in_percent=value.text.endswith(PERCENT),
                )
        return tuple(found.values())

    def window(self, node: Node | None) -> tuple[float, float] | None:
        """Window of exponential growth [h]; ``None`` to look for it."""
        words = text(node, "'window'", self.findings) if node else None
        if node is None or words is None or words == "automatic":
            return None
        low, to, rest = words.partition(" to ")
        high, _, unit = rest.strip().partition(" ")
        try:
            if not to:
                raise NumberTextError(f"{words!r} is no window", "Write 2 to 8 h, or automatic.")
            ends = [float(read_number(word).value) for word in (low, high)]
            scale = scale_of(unit, Measure.TIME)
        except (NumberTextError, UnitError) as error:
            self.findings.add(error.code, f"'window': {error.reason}", node.span, hint=error.hint)
            return None
        if ends[0] >= ends[1]:
            self.findings.add(
                "YN511",
                f"'window': {low.strip()} is not before {high}",
                node.span,
                hint="Write the earlier time first.",
            )
            return None
        return scale.value(ends[0]), scale.value(ends[1])

    def gas(self, node: Node | None) -> GasSettings | None:
        """What is said of the gas, ``None`` with findings if that is not enough."""
        if node is None:
            return None
        fields = Fields(node, "'gas'", GAS_KEYS, self.findings)
        normal = self._normal_conditions(
            fields.need("normal conditions", "Write 'normal conditions: 0 degC, 101.325 kPa'.")
        )
        inlet = self.contents(fields.get("inlet"), Role.GAS_IN, "'inlet'")
        before = len(self.findings.items)
        moisture = self._moisture(
            fields.need("moisture", "Write 'moisture: dried', or the humidity of both gases.")
        )
        dissolved = self._dissolved(fields.get("dissolved carbon dioxide"))
        if normal is None or len(self.findings.items) > before:
            return None
        return GasSettings(
            temperature=normal[0],
            pressure=normal[1],
            inlet=inlet,
            moisture=moisture,
            dissolved=dissolved,
        )

    def _normal_conditions(self, node: Node | None) -> tuple[float, float] | None:
        words = text(node, "'normal conditions'", self.findings) if node else None
        if node is None or words is None:
            return None
        parts = [part.strip() for part in words.split(",")]
        if len(parts) != 2:
            self.findings.add(
                "YN112",
                f"'normal conditions' {words!r} are not understood",
                node.span,
                left="expected temperature, pressure",
                hint="Write 0 degC, 101.325 kPa.",
            )
            return None
        temperature = self.values.plain(
            replace(node, text=parts[0]), "normal temperature", Measure.TEMPERATURE
        )
        pressure = self.values.plain(
            replace(node, text=parts[1]), "normal pressure", Measure.PRESSURE
        )
        return None if temperature is None or pressure is None else (temperature, pressure)

    def _moisture(self, node: Node | None) -> Moisture | None:
        if node is None:
            return None
        if node.kind is Kind.TEXT and not node.empty:
            if node.text != "dried":
                self.findings.add(
                    "YN112",
                    f"'moisture' {node.text!r} is not known",
                    node.span,
                    left="expected dried, or a mapping",
                    hint="Write dried, or {inlet: 0 %, outlet: 100 %, temperature: 30 degC,"
                    " pressure: 101.3 kPa}.",
                )
            return None
        fields = Fields(node, "'moisture'", MOISTURE_KEYS, self.findings)
        numbers = {
            key: self._plain(fields, key, measure, needed=key != "inlet temperature")
            for key, measure in zip(
                MOISTURE_KEYS,
                (
                    Measure.HUMIDITY,
                    Measure.HUMIDITY,
                    Measure.TEMPERATURE,
                    Measure.TEMPERATURE,
                    Measure.PRESSURE,
                ),
                strict=True,
            )
        }
        inlet, outlet, temperature, of_inlet, pressure = (numbers[key] for key in MOISTURE_KEYS)
        if inlet is None or outlet is None or temperature is None or pressure is None:
            return None
        return Moisture(
            inlet=inlet,
            outlet=outlet,
            temperature_inlet=temperature if of_inlet is None else of_inlet,
            temperature_outlet=temperature,
            pressure=pressure,
        )

    def _plain(self, fields: Fields, key: str, measure: Measure, *, needed: bool) -> float | None:
        node = fields.need(key, "Add it with its unit.") if needed else fields.get(key)
        return None if node is None else self.values.plain(node, f"{key!r}", measure)

    def _dissolved(self, node: Node | None) -> DissolvedCarbonDioxide | None:
        if node is None:
            return None
        fields = Fields(node, "'dissolved carbon dioxide'", DISSOLVED_KEYS, self.findings)
        acidity = fields.need("pH", "Add the pH of the broth.")
        ph = self.values.measured(acidity, "'pH'", Measure.ACIDITY) if acidity else None
        temperature = self._plain(fields, "temperature", Measure.TEMPERATURE, needed=True)
        pressure = self._plain(fields, "pressure", Measure.PRESSURE, needed=True)
        if ph is None or temperature is None or pressure is None:
            return None
        return DissolvedCarbonDioxide(ph=ph, temperature=temperature, pressure=pressure)
