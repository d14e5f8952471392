"""Run files: a cultivation with its sheet, every value in the units of the run.

Values are worked by hand with the abridged standard atomic weights H 1.008, C 12.011, N 14.007,
O 15.999, Na 22.990.
"""

from __future__ import annotations

import random
from math import hypot
from typing import TYPE_CHECKING

import openpyxl
import pytest

import yieldnet
from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.model.cultivation import Additions, CultivationKind, Method, Reading, Series
from yieldnet.reading.run_file import load_run
from yieldnet.reading.source import MAX_FINDINGS

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.model.cultivation import Cultivation

    RunOf = Callable[..., tuple[Cultivation | None, Findings]]

GLUCOSE = 6 * 12.011 + 12 * 1.008 + 6 * 15.999
ETHANOL = 2 * 12.011 + 6 * 1.008 + 15.999
BATCH = """
run: Batch on glucose in a two-litre stirred tank
about: invented
kind: batch
sheet: run.csv
ignore: [notes]
equation: glucose + ? oxygen + ? ammonia -> ? biomass + ? ethanol + carbon dioxide
either side: [water]
compounds:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
window: 30 to 360 min
errors:
  glucose: 2 %
  ethanol: 0.5 mmol/L and 2 % of value
volume: 1500 ± 10 mL
"""
BATCH_SHEET = """# invented
Time [min],biomass [mg/mL],± biomass [mg/L],glucose [g/L],Ethyl alcohol [mmol/L],notes
0,0.10,10,20.0,0,start
120,0.22,10,18.9,5.5,
240,0.50,20,16.5,n/a,foam
360,1.10,40,11.2,90,
"""
CHEMOSTAT = """
run: Chemostat at two dilution rates
kind: chemostat
sheet: run.csv
equation: glucose + ? oxygen -> ? biomass + ? carbon dioxide
compounds: {biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}}
errors:
  dilution rate: exact
  gas flow in: 1 %
  oxygen out: 0.02 % and 0.5 % of value
  carbon dioxide out: 100 ppm
  feed glucose: 0.1 g/L
  biomass: 0.05 g/L
volume: 1.5 exact L
gas:
  normal conditions: 0 degC, 1 atm
  inlet: {oxygen: 20.95 ± 0.01 %, carbon dioxide: 0.04 ± 0.005 %}
  moisture: {inlet: 0 %, outlet: 100 %, temperature: 30 degC, inlet temperature: 20 degC,
             pressure: 1.013 bar}
  dissolved carbon dioxide: {pH: 6.5 ± 0.05, temperature: 37 degC, pressure: 101.3 kPa}
"""
CHEMOSTAT_SHEET = """
state;dilution rate;biomass;glucose;glucose s.d.;feed glucose;gas flow in;oxygen out;CO2 out
;1/h;g/L;mg/L;%;g/L;L/min;%;%
A;0.10;4.10;300;5;10.0;1.5;20.46;0.45
A;0.10;4.15;280;5;10.0;1.5;20.44;0.46
B;0.20;3.95;410;5;10.0;1.5;19.95;0.93
"""
FED_BATCH = """
run: Fed-batch to succinate
kind: fed-batch
sheet: run.xlsx
tab: day 3
equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? succinate
either side: [carbon dioxide, water]
compounds: {biomass: generic biomass}
method: start and end
errors:
  optical density: 0.02 and 1 % of value
  glucose: 0.2 g/L
  disodium succinate: 0.5 g/L
  volume: 0.01 L
  fed: 1 mL
  base added: 0.001 L
  sampled: 0.5 mL
  feed glucose: 0.5 % of value
  gas flow out: 1 % of value
  oxygen in: 0.0002 mol/mol
  oxygen out: 0.0002 mol/mol
dry weight: {optical density: 0.38 ± 0.01 g/L}
salts:
  disodium succinate: {acid: succinate, formula: C4H4O4Na2}
feed:
  glucose: 400 g/L
  disodium succinate: 10 ± 1 % g/L
base:
  ammonia: 5.0 ± 0.05 mol/L
gas:
  normal conditions: 25 degC, 101.325 kPa
  moisture: dried
"""
FED_BATCH_ROWS: list[list[object]] = [
    ["time [h]", "optical density", "glucose (g/L)", "disodium succinate [g/L]", "volume [L]"],
    [0, 10, 5.0, 1.0, 1],
    [2.0, 15.5, 4.0, 9.5, 1.05],
    [5, 22, 4.5, 24.25, "1.10"],
]
FED_BATCH_MORE: list[list[object]] = [
    ["fed [mL]", "sampled [mL]", "base added [L]", "gas flow out [L/h]", "oxygen in [mol/mol]"],
    [0, 5, 0, 60, 0.2095],
    [60, 5, 0.01, 60, 0.2095],
    [125, 0, 0.025, 60, 0.2095],
]
FED_BATCH_LAST: list[list[object]] = [["oxygen out [mol/mol]"], [0.2], [0.198], ["n/a"]]


@pytest.fixture
def run_of(tmp_path: Path) -> RunOf:
    """Run of a YAML text and the text of its sheet."""

    def _run_of(text: str, sheet: str = "") -> tuple[Cultivation | None, Findings]:
        (tmp_path / "run.yaml").write_text(text, "utf-8")
        if sheet:
            (tmp_path / "run.csv").write_text(sheet, "utf-8")
        return load_run(str(tmp_path / "run.yaml"))

    return _run_of


def _good(found: tuple[Cultivation | None, Findings]) -> Cultivation:
    run, findings = found
    assert run is not None, "\n".join(str(finding) for finding in findings)
    return run


def _values(series: Series | None) -> list[float | None]:
    assert series is not None
    return [item.value if item else None for item in series.readings]


def _sds(series: Series | None) -> list[float | None]:
    assert series is not None
    return [item.sd if item else None for item in series.readings]


def _codes(found: tuple[Cultivation | None, Findings]) -> list[str]:
    run, findings = found
    assert run is None
    return [finding.code for finding in findings.sorted()]


# Good runs ---------------------------------------------------------------------------------------


def test_a_batch_in_the_units_of_the_run(run_of: RunOf) -> None:
    run = _good(run_of(BATCH, BATCH_SHEET))
    assert (run.kind, run.method) == (CultivationKind.BATCH, Method.EXPONENTIAL)
    assert run.title == "Batch on glucose in a two-litre stirred tank"
    assert run.about == "invented"
    assert run.basis.name == "glucose"
    # What the run is to find is unknown, written with ? or with nothing.
    assert str(run.equation) == (
        "glucose + ? oxygen + ? ammonia -> ? biomass + ? ethanol + ? carbon dioxide"
    )
    assert all(item.written is None for item in run.coefficients)
    assert [item.name for item in run.coefficients][-1] == "water"
    assert run.compound("biomass").ash == pytest.approx(0.05)
    with pytest.raises(KeyError, match="sweat"):
        run.compound("sweat")
    assert run.times == pytest.approx((0, 2, 4, 6))
    assert run.states == ("", "", "", "")
    assert run.window == pytest.approx((0.5, 6))
    assert run.volume == Reading(value=1.5, sd=0.01)
    assert [row.line for row in run.rows] == [3, 4, 5, 6]
    biomass, glucose, ethanol = run.broth
    assert [item.compound for item in run.broth] == ["biomass", "glucose", "ethanol"]
    # mg/mL is g/L, and the errors were in mg/L.
    assert _values(biomass) == pytest.approx([0.10, 0.22, 0.50, 1.10])
    assert _sds(biomass) == pytest.approx([0.01, 0.01, 0.02, 0.04])
    assert _values(glucose) == pytest.approx([x / GLUCOSE for x in (20.0, 18.9, 16.5, 11.2)])
    assert _sds(glucose) == pytest.approx([0.02 * x / GLUCOSE for x in (20.0, 18.9, 16.5, 11.2)])
    assert _values(ethanol) == [0.0, 0.0055, None, 0.09]
    # Both parts are added as variances: 0.5 mmol/L and 2 % of 90 mmol/L are 1.868 mmol/L.
    assert _sds(ethanol) == [
        0.0005,
        pytest.approx(hypot(0.0005, 0.00011)),
        None,
        pytest.approx(0.0018681542),
    ]
    assert ethanol.heading == "Ethyl alcohol [mmol/L]"
    reading = glucose.readings[1]
    assert reading is not None
    assert reading.span == SourceSpan(file=run.sheet, line=4, column=4)
    assert run.findings == ()


def test_a_chemostat_with_replicates_and_moist_gas(run_of: RunOf) -> None:
    run = _good(run_of(CHEMOSTAT, CHEMOSTAT_SHEET))
    assert run.kind is CultivationKind.CHEMOSTAT
    assert run.states == ("A", "A", "B")
    assert run.times == ()
    assert _values(run.dilution_rate) == [0.1, 0.1, 0.2]
    assert _sds(run.dilution_rate) == [0, 0, 0]
    biomass, glucose = run.broth
    assert _values(biomass) == [4.10, 4.15, 3.95]
    # 300 mg/L, and 5 % of it.
    assert _values(glucose)[0] == pytest.approx(0.3 / GLUCOSE)
    assert _sds(glucose)[0] == pytest.approx(0.015 / GLUCOSE)
    (feed,) = run.additions
    assert (feed.name, feed.contents, feed.added, feed.rate) == ("feed", (), None, None)
    (by_row,) = feed.contents_by_row
    assert by_row.compound == "glucose"
    assert _values(by_row) == pytest.approx([10 / GLUCOSE] * 3)
    assert _sds(by_row) == pytest.approx([0.1 / GLUCOSE] * 3)
    assert run.volume == Reading(value=1.5, sd=0.0)
    gas = run.gas
    assert gas is not None
    # 1.5 L/min is 90 L/h, its error 1 % of that.
    assert _values(gas.flow_in) == pytest.approx([90.0] * 3)
    assert _sds(gas.flow_in) == pytest.approx([0.9] * 3)
    assert gas.flow_out is None
    oxygen, carbon_dioxide = gas.outlet
    assert _values(oxygen) == pytest.approx([0.2046, 0.2044, 0.1995])
    # 0.02 % is 2e-4; 0.5 % of 0.2046 is 1.023e-3: together 1.0424e-3.
    assert _sds(oxygen)[0] == pytest.approx(1.04237e-3, rel=1e-5)
    assert _values(carbon_dioxide) == pytest.approx([0.0045, 0.0046, 0.0093])
    assert _sds(carbon_dioxide) == pytest.approx([1e-4] * 3)
    inlet = {series.compound: series for series in gas.inlet}
    assert _values(inlet["oxygen"]) == pytest.approx([0.2095] * 3)
    assert _sds(inlet["carbon dioxide"]) == pytest.approx([5e-5] * 3)
    # One value for the whole run is one reading, so that its error is counted once.
    assert len({id(item) for item in inlet["oxygen"].readings}) == 1
    assert gas.normal_temperature == pytest.approx(273.15)
    assert gas.normal_pressure == pytest.approx(101.325)
    assert gas.moisture is not None
    assert (gas.moisture.inlet, gas.moisture.outlet) == (0, 1)
    assert gas.moisture.temperature_outlet == pytest.approx(303.15)
    assert gas.moisture.temperature_inlet == pytest.approx(293.15)
    assert gas.moisture.pressure == pytest.approx(101.3)
    assert gas.dissolved is not None
    assert gas.dissolved.ph == Reading(value=6.5, sd=0.05)
    assert gas.dissolved.temperature == pytest.approx(310.15)
    assert gas.dissolved.pressure == pytest.approx(101.3)


def test_a_fed_batch_in_a_workbook(tmp_path: Path, run_of: RunOf) -> None:
    book = openpyxl.Workbook()
    book.create_sheet("day 3")
    for parts in zip(FED_BATCH_ROWS, FED_BATCH_MORE, FED_BATCH_LAST, strict=True):
        book["day 3"].append([cell for part in parts for cell in part])
    book.save(tmp_path / "run.xlsx")
    run = _good(run_of(FED_BATCH))
    assert (run.kind, run.method) == (CultivationKind.FED_BATCH, Method.START_AND_END)
    assert run.window is None
    assert run.times == (0, 2, 5)
    biomass, glucose, succinate = run.broth
    assert [item.compound for item in run.broth] == ["biomass", "glucose", "succinate"]
    assert run.calibration is not None
    assert run.calibration.signal == "optical density"
    assert run.calibration.factor == Reading(value=0.38, sd=0.01)
    assert _values(biomass) == [10, 15.5, 22]
    assert _sds(biomass)[0] == pytest.approx(hypot(0.02, 0.1))
    assert _sds(glucose) == pytest.approx([0.2 / GLUCOSE] * 3)
    # Both carry four carbon, so one mol of the salt is one mol of the acid.
    salt = 4 * 12.011 + 4 * 1.008 + 4 * 15.999 + 2 * 22.990
    assert _values(succinate) == pytest.approx([x / salt for x in (1.0, 9.5, 24.25)], rel=1e-6)
    assert isinstance(run.volume, Series)
    assert _values(run.volume) == [1, 1.05, 1.1]
    assert _values(run.sampled) == pytest.approx([0.005, 0.005, 0])
    assert _sds(run.sampled) == pytest.approx([5e-4] * 3)
    feed, base = run.additions
    assert _values(feed.added) == pytest.approx([0, 0.06, 0.125])
    assert _sds(feed.added) == pytest.approx([0.001] * 3)
    contents = dict(feed.contents)
    assert list(contents) == ["glucose", "succinate"]
    assert contents["glucose"].value == pytest.approx(400 / GLUCOSE)
    assert contents["glucose"].sd == pytest.approx(2 / GLUCOSE)
    assert contents["succinate"].value == pytest.approx(10 / salt, rel=1e-6)
    assert contents["succinate"].sd == pytest.approx(0.1 / salt, rel=1e-6)
    assert base.contents == (("ammonia", Reading(value=5.0, sd=0.05)),)
    assert _values(base.added) == [0, 0.01, 0.025]
    assert run.gas is not None
    assert run.gas.moisture is None
    assert run.gas.flow_in is None
    assert _values(run.gas.flow_out) == [60, 60, 60]
    assert _values(run.gas.outlet[0]) == [0.2, 0.198, None]
    assert run.sheet == str(tmp_path / "run.xlsx")


def test_the_public_function_gives_the_run_or_its_findings(tmp_path: Path, run_of: RunOf) -> None:
    good = _good(run_of(BATCH, BATCH_SHEET))
    assert yieldnet.read_run(tmp_path / "run.yaml") == good
    run_of(BATCH, BATCH_SHEET.replace(",18.9,", ",,"))
    with pytest.raises(yieldnet.InputError, match=r"run\.csv:4:4: error YN124"):
        yieldnet.read_run(tmp_path / "run.yaml")


# Variations on the batch -------------------------------------------------------------------------


def _batch(run_of: RunOf, text: tuple[str, str] = ("", ""), sheet: tuple[str, str] = ("", "")):  # type: ignore[no-untyped-def]
    assert text[0] in BATCH
    assert sheet[0] in BATCH_SHEET
    return run_of(
        BATCH.replace(*text, 1) if text[0] else BATCH,
        BATCH_SHEET.replace(*sheet, 1) if sheet[0] else BATCH_SHEET,
    )


def test_calcium_lactate_counts_for_two_lactate(run_of: RunOf) -> None:
    text = BATCH.replace("? ethanol", "? lactate").replace("ethanol:", "calcium lactate:")
    text += "salts: {calcium lactate: {acid: lactate, formula: C6H10O6Ca}}\n"
    run = _good(run_of(text, BATCH_SHEET.replace("Ethyl alcohol", "calcium lactate")))
    assert run.broth[2].compound == "lactate"
    assert _values(run.broth[2])[1] == pytest.approx(0.011)
    assert _sds(run.broth[2])[0] == pytest.approx(0.001)


def test_wet_weight_has_a_calibration_of_its_own(run_of: RunOf) -> None:
    sheet = BATCH_SHEET.replace("biomass [mg/mL],± biomass", "wet weight [g/L],wet weight sd")
    run = _good(run_of(BATCH + "dry weight: {wet weight: 0.22 ± 5 % g/g}\n", sheet))
    assert run.calibration is not None
    assert run.calibration.factor.value == 0.22
    assert run.calibration.factor.sd == pytest.approx(0.011)
    assert run.broth[0].compound == "biomass"
    assert _sds(run.broth[0])[0] == pytest.approx(0.01)


def test_base_without_a_compound_of_the_equation(run_of: RunOf) -> None:
    sheet = BATCH_SHEET.replace("notes", "base rate [mL/h]")
    for word, value in (("start\n", "5\n"), (",\n", ",5\n"), ("foam\n", "6\n")):
        sheet = sheet.replace(word, value)
    text = BATCH.replace("ignore: [notes]\n", "base: none\n")
    run = _good(run_of(text.replace("errors:\n", "errors:\n  base rate: 1 %\n"), sheet))
    (base,) = run.additions
    assert isinstance(base, Additions)
    assert base.contents == ()
    assert _values(base.rate) == pytest.approx([0.005, 0.005, 0.006, 0.005])


@pytest.mark.parametrize(
    ("written", "sd"),
    [("1.5 ± 0.02 L", 0.02), ("1.5 +/- 2 % L", 0.03), ("1500 exact mL", 0), ("1.5 L exact", 0)],
)
def test_the_error_of_a_setting(run_of: RunOf, written: str, sd: float) -> None:
    run = _good(_batch(run_of, ("1500 ± 10 mL", written)))
    assert isinstance(run.volume, Reading)
    assert run.volume.value == pytest.approx(1.5)
    assert run.volume.sd == pytest.approx(sd)


@pytest.mark.parametrize(
    ("old", "new", "code"),
    [
        ("1500 ± 10 mL", "± 10 mL", "YN201"),
        ("1500 ± 10 mL", "1500 ±", "YN201"),
        ("1500 ± 10 mL", "1,5 ± 0.01 L", "YN201"),
        ("1500 ± 10 mL", "1500 ± 0 mL", "YN132"),
        ("1500 ± 10 mL", "1500 ± -10 mL", "YN209"),
        ("1500 ± 10 mL", "1500 mL ± 10", "YN203"),
        ("1500 ± 10 mL", "1500 ± 10 g", "YN203"),
        ("1500 ± 10 mL", "-1500 ± 10 mL", "YN210"),
        ("1500 ± 10 mL", "[1.5]", "YN112"),
        ("glucose: 2 %", "glucose: 2", "YN130"),
        ("glucose: 2 %", "glucose: 2 % and 3 %", "YN305"),
        ("glucose: 2 %", "glucose: 2 % and", "YN203"),
        ("glucose: 2 %", "glucose: some", "YN201"),
        ("glucose: 2 %", "glucose: 0.1 °", "YN203"),
        ("glucose: 2 %", "glucose: 2 %\n  dextrose: 2 %", "YN305"),
        ("glucose: 2 %", "glucose: {a: b}", "YN112"),
        ("window: 30 to 360 min", "window: 30 to 360 mL", "YN203"),
        ("window: 30 to 360 min", "window: 30 to 360", "YN130"),
        ("window: 30 to 360 min", "window: two to 6 h", "YN201"),
        ("window: 30 to 360 min", "method: expo", "YN112"),
        ("either side: [water]", "either side: [watre]", "YN301"),
        ("kind: batch", "kind: []", "YN112"),
        ("sheet: run.csv", "sheet: [run.csv]", "YN112"),
        ("sheet: run.csv", "sheet: ../run.csv", "YN120"),
        ("ignore: [notes]", "ignore: notes", "YN112"),
    ],
)
def test_each_slip_in_the_run_file_is_told(run_of: RunOf, old: str, new: str, code: str) -> None:
    codes = _codes(_batch(run_of, (old, new)))
    assert code in codes


def test_all_mistakes_are_told_at_once(run_of: RunOf) -> None:
    sheet = BATCH_SHEET.replace("0.22", "many").replace(",16.5,", ",-16.5,")
    found = run_of(BATCH.replace("30 to 360 min", "soon") + "vessel: glass\n", sheet)
    assert _codes(found) == ["YN201", "YN210", "YN201", "YN110"]
    places = [str(f.where).rsplit("/", 1)[1] for f in found[1].sorted()]
    assert places == ["run.csv:4:2", "run.csv:5:4", "run.yaml:11:9", "run.yaml:16:1"]


def test_hundreds_of_mistakes_end_with_one_that_says_so(run_of: RunOf) -> None:
    rows = "".join(f"{number},x,1,1,1,\n" for number in range(MAX_FINDINGS + 20))
    _, findings = run_of(BATCH, BATCH_SHEET.split("\n", 2)[1] + "\n" + rows)
    assert len(findings.items) == MAX_FINDINGS + 1
    assert findings.items[-1].code == "YN116"


@pytest.mark.parametrize("text", ["- a\n", "", "run: [\n", "run: Alone\n"])
def test_what_is_no_run_file_is_refused(run_of: RunOf, text: str) -> None:
    assert set(_codes(run_of(text))) <= {"YN102", "YN104", "YN111", "YN112"}


def test_a_deviation_is_needed_only_where_something_was_measured(run_of: RunOf) -> None:
    sheet = BATCH_SHEET.replace("120,0.22,10", "120,n/a,n/a")
    # Of three samples in the window only two have biomass now.
    assert _codes(run_of(BATCH, sheet)) == ["YN134"]
    run = _good(run_of(BATCH.replace("30 to 360 min", "automatic"), sheet))
    assert run.window is None
    first, missing, *rest = _values(run.broth[0])
    assert missing is None
    assert [first, *rest] == pytest.approx([0.10, 0.50, 1.10])
    assert _codes(run_of(BATCH, BATCH_SHEET.replace("120,0.22,10", "120,0.22,n/a"))) == ["YN131"]
    assert _codes(run_of(BATCH, BATCH_SHEET.replace("± biomass", "± ethanol"))) == [
        "YN131",
        "YN133",
    ]


def test_a_column_is_ignored_by_its_whole_heading_too(run_of: RunOf) -> None:
    sheet = BATCH_SHEET.replace("notes", "oxygen pressure [mmHg]")
    run = _good(run_of(BATCH.replace("[notes]", '["oxygen pressure [mmHg]"]'), sheet))
    assert len(run.broth) == 3
    assert _codes(run_of(BATCH, sheet)) == ["YN126", "YN126"]


def test_a_trace_of_oxygen_may_be_written_in_ppm(run_of: RunOf) -> None:
    text = CHEMOSTAT.replace("oxygen: 20.95 ± 0.01 %", "oxygen: 0.2 ± 0.01 %")
    assert _codes(run_of(text, CHEMOSTAT_SHEET)) == ["YN137"]
    text = CHEMOSTAT.replace("oxygen: 20.95 ± 0.01 %", "oxygen: 2000 ± 100 ppm")
    assert _good(run_of(text, CHEMOSTAT_SHEET)).gas is not None


@pytest.mark.parametrize(
    ("old", "new", "code"),
    [
        ("moisture: {inlet: 0 %,", "moisture: {inlet: 0 ± 1 %,", "YN133"),
        ("moisture: {inlet: 0 %,", "moisture: {inlet: 120 %,", "YN210"),
        ("moisture: {inlet: 0 %,", "moisture: {inlett: 0 %,", "YN110"),
        ("pH: 6.5 ± 0.05", "pH: 6.5", "YN131"),
        ("pH: 6.5 ± 0.05", "pH: 65 ± 0.05", "YN210"),
        ("0 degC, 1 atm", "-300 degC, 1 atm", "YN210"),
        ("0 degC, 1 atm", "0 degC, 0 atm", "YN210"),
        ("0 degC, 1 atm", "0, 1 atm", "YN130"),
        ("  inlet: {oxygen", "  inlet: {oxigen", "YN126"),
        ("carbon dioxide: 0.04 ± 0.005 %", "carbon dioxide: 0 ± 5 % of", "YN203"),
        ("biomass: 0.05 g/L\n", "biomass: 0.05 g/L\nmethod: exponential\n", "YN145"),
        ("volume: 1.5 exact L\n", "", "YN139"),
        ("sheet: run.csv\n", "sheet: run.csv\nfeed: {glucose: 10 ± 1 g/L}\n", "YN144"),
    ],
)
def test_each_slip_about_a_chemostat_is_told(run_of: RunOf, old: str, new: str, code: str) -> None:
    assert old in CHEMOSTAT
    assert code in _codes(run_of(CHEMOSTAT.replace(old, new, 1), CHEMOSTAT_SHEET))


def test_dilution_rate_may_follow_from_feed_rate_and_volume(run_of: RunOf) -> None:
    sheet = CHEMOSTAT_SHEET.replace("dilution rate", "feed rate").replace(";1/h;", ";mL/h;")
    text = CHEMOSTAT.replace("dilution rate: exact", "feed rate: 1 %")
    run = _good(run_of(text, sheet.replace(";0.10;", ";150;").replace(";0.20;", ";300;")))
    assert run.dilution_rate is None
    assert _values(run.additions[0].rate) == pytest.approx([0.15, 0.15, 0.3])


def test_every_column_may_bring_its_own_error(run_of: RunOf) -> None:
    start, end = BATCH.index("errors:"), BATCH.index("volume:")
    sheet = (
        "time [h],biomass [g/L],biomass s.d. [g/L],,glucose [g/L],glucose sd [%]\n"
        "0.5,0.1,0.01,,20,1\n2,0.3,0.01,,19,2\n6,0.9,0.02,,15,1\n"
    )
    text = BATCH[:start] + BATCH[end:]
    run = _good(run_of(text.replace("ignore: [notes]\n", ""), sheet))
    assert _sds(run.broth[0]) == [0.01, 0.01, 0.02]
    assert _sds(run.broth[1]) == pytest.approx([x / GLUCOSE for x in (0.2, 0.38, 0.15)])


def test_a_long_remark_stands_only_where_it_is_ignored(run_of: RunOf) -> None:
    remark = "foam " * 100
    assert _good(run_of(BATCH, BATCH_SHEET.replace("foam", remark))).broth
    assert _codes(run_of(BATCH, BATCH_SHEET.replace("0.22", remark))) == ["YN125"]
    assert _codes(run_of(BATCH, BATCH_SHEET.replace("notes", remark))) == ["YN125", "YN126"]


SALT = "salts: {sodium acetate: {acid: acetate, formula: C2H3O2Na}}\n"


@pytest.mark.parametrize(
    ("more", "codes"),
    [
        ("salts: {x: C2H3O2Na}\n", ["YN112"]),
        ("salts: {x: {acid: ethanol}}\n", ["YN111"]),
        ("salts: {x: {acid: ethanol, formula: Xy}}\n", ["YN204"]),
        (SALT, ["YN503"]),
        ("salts: {x: {acid: acetat, formula: C2H3O2Na}}\n", ["YN126"]),
        ("salts: {ethanol: {acid: ethanol, formula: C2H5ONa}}\n", ["YN305"]),
        ("salts: {x: {acid: ammonia, formula: NH4Cl}}\n", ["YN140"]),
        ("dry weight: 0.38 g/L\n", ["YN112", "YN141"]),
        ("dry weight: {}\n", ["YN112", "YN141"]),
        ("dry weight: {optical density: 0 ± 0.1 g/L}\n", ["YN210", "YN141"]),
        ("dry weight: {optical density: [1]}\n", ["YN112", "YN141"]),
        ("feed: {glucose: 400 ± 2 g/L, dextrose: 4 ± 2 g/L}\n", ["YN145", "YN305", "YN303"]),
        ("feed: {rate: 400 ± 2 g/L}\n", ["YN145", "YN126"]),
        ("feed: {glucose: 0 ± 2 % g/L}\n", ["YN145", "YN131"]),
        ("gas: {normal conditions: []}\n", ["YN145", "YN112", "YN111"]),
        (
            'gas: {normal conditions: "0 degC, 1 atm", moisture: wet}\n',
            ["YN145", "YN112"],
        ),
        (
            'gas: {normal conditions: "0 degC, 1 atm", moisture: {outlet: 100 %}}\n',
            ["YN145", "YN111", "YN111", "YN111"],
        ),
        (
            'gas: {normal conditions: "0 degC, 1 atm", moisture: dried,'
            " dissolved carbon dioxide: {pH: 7 ± 0.1}}\n",
            ["YN145", "YN111", "YN111"],
        ),
    ],
)
def test_each_slip_in_a_setting_is_told(run_of: RunOf, more: str, codes: list[str]) -> None:
    assert sorted(_codes(run_of(BATCH + more, BATCH_SHEET))) == sorted(codes)


@pytest.mark.parametrize(
    ("old", "new", "codes"),
    [
        ("1500 ± 10 mL", '""', ["YN201"]),
        ("0.5 mmol/L and 2 % of value", "0.5 mmol/L and  and 2 %", ["YN201"]),
        ("0.5 mmol/L and 2 % of value", '""', ["YN201"]),
        ("kind: batch", "kind: batch\nbase: {glucose: 1 ± 0.1 g/L}", ["YN145"]),
    ],
)
def test_what_is_left_empty_or_said_in_vain(
    run_of: RunOf, old: str, new: str, codes: list[str]
) -> None:
    assert _codes(_batch(run_of, (old, new))) == codes


def test_a_time_has_no_error(run_of: RunOf) -> None:
    assert _codes(_batch(run_of, sheet=("± biomass [mg/L]", "time sd [min]"))) == [
        "YN131",
        "YN133",
    ]


def test_samples_are_not_counted_out_of_a_volume_that_is_not_known(run_of: RunOf) -> None:
    text = BATCH.replace("1500 ± 10 mL", "much").replace("  glucose", "  sampled: exact\n  glucose")
    sheet = BATCH_SHEET.replace("notes", "sampled [mL]").replace("start", "9")
    sheet = sheet.replace("foam", "9").replace(",\n", ",9\n")
    assert _codes(run_of(text.replace("ignore: [notes]\n", ""), sheet)) == ["YN201"]


def test_a_fed_batch_needs_what_was_fed_and_its_volume(run_of: RunOf) -> None:
    text = BATCH.replace("kind: batch", "kind: fed-batch") + "feed: {glucose: 400 ± 2 g/L}\n"
    found = run_of(text, BATCH_SHEET)
    assert _codes(found) == ["YN139", "YN139"]
    assert {f.message for f in found[1]} == {
        "a fed-batch needs what was fed",
        "a fed-batch needs the volume of each row",
    }


def test_a_gas_needs_its_flow_and_its_fractions(run_of: RunOf) -> None:
    def without(*columns: int) -> str:
        rows = [line.split(";") for line in CHEMOSTAT_SHEET.strip().split("\n")]
        kept = [[cell for place, cell in enumerate(row) if place not in columns] for row in rows]
        return "\n".join(";".join(row) for row in kept)

    text = CHEMOSTAT.replace("  gas flow in: 1 %\n", "")
    found = run_of(text, without(6))
    assert [f.message for f in found[1]] == ["gas fractions need a gas flow"]
    text = CHEMOSTAT.replace("  oxygen out: 0.02 % and 0.5 % of value\n", "")
    text = text.replace("  carbon dioxide out: 100 ppm\n", "")
    found = run_of(text, without(7, 8))
    assert "a gas flow needs gas fractions" in [f.message for f in found[1]]
    assert set(_codes(found)) == {"YN139"}


def test_an_inlet_of_the_run_file_is_summed_once(run_of: RunOf) -> None:
    text = CHEMOSTAT.replace("oxygen: 20.95 ± 0.01 %", "oxygen: 99.98 ± 0.001 %")
    text = text.replace("carbon dioxide: 0.04 ±", "carbon dioxide: 0.4 ±")
    _, findings = run_of(text, CHEMOSTAT_SHEET)
    assert [(f.code, f.where.line if f.where else 0) for f in findings] == [("YN136", 15)]


def test_air_with_its_nitrogen_adds_up_to_one(run_of: RunOf) -> None:
    text = CHEMOSTAT.replace("inlet: {", "inlet: {nitrogen: 79.01 ± 0.05 %, ")
    start = text.index("  moisture:")
    text = text[:start] + "  moisture: dried\n"
    text = text.replace("errors:\n", "errors:\n  nitrogen out: 0.05 %\n")
    lines = CHEMOSTAT_SHEET.strip().split("\n")
    extra = ["nitrogen out", "%", "79.09", "79.10", "79.12"]
    sheet = "\n".join(f"{line};{cell}" for line, cell in zip(lines, extra, strict=True))
    run = _good(run_of(text, sheet))
    assert run.gas is not None
    assert [series.compound for series in run.gas.outlet][-1] == "nitrogen"
    # Argon left out: 78.08 and 20.95 and 0.04 are 99.07 %.
    _, findings = run_of(text.replace("79.01", "78.08"), sheet)
    (finding,) = findings
    assert finding.code == "YN136"
    assert "0.9907" in finding.message
    assert "argon" in finding.hint


def test_a_state_that_a_workbook_holds_as_a_yes_is_no_name(tmp_path: Path, run_of: RunOf) -> None:
    book = openpyxl.Workbook()
    tab = book.worksheets[0]
    lines = [line.split(";") for line in CHEMOSTAT_SHEET.strip().split("\n")]
    for row, line in enumerate(lines, 1):
        for column, cell in enumerate(line, 1):
            numeric = row > 2 and column > 1
            tab.cell(row=row, column=column, value=float(cell) if numeric else cell or None)
    tab["A4"] = True
    book.save(tmp_path / "run.xlsx")
    assert _codes(run_of(CHEMOSTAT.replace("run.csv", "run.xlsx"))) == ["YN125"]
    tab["A4"] = "A"
    book.save(tmp_path / "run.xlsx")
    run = _good(run_of(CHEMOSTAT.replace("run.csv", "run.xlsx")))
    assert run.states == ("A", "A", "B")


# Broken at random --------------------------------------------------------------------------------


@pytest.mark.parametrize("which", ["run.yaml", "run.csv"])
@pytest.mark.parametrize("good", [(BATCH, BATCH_SHEET), (CHEMOSTAT, CHEMOSTAT_SHEET)])
def test_broken_files_are_read_or_refused_with_a_place(
    tmp_path: Path, which: str, good: tuple[str, str]
) -> None:
    dice = random.Random(which)
    raw = {"run.yaml": good[0].encode(), "run.csv": good[1].encode()}
    refused = 0
    for _ in range(60):
        broken = bytearray(raw[which])
        for _ in range(dice.choice([1, 1, 2, 8])):
            letter = dice.choice(b" \t\n:,-?[]{}()#&*!|>'\"%@`+0123456789eE./<\\~;")
            broken[dice.randrange(len(broken))] = letter
        for name, content in {**raw, which: bytes(broken)}.items():
            (tmp_path / name).write_bytes(content)
        run, findings = load_run(str(tmp_path / "run.yaml"))
        assert (run is None) == findings.refused
        refused += run is None
        for finding in findings:
            assert finding.where is not None
            text = (tmp_path / finding.where.file.rsplit("/", 1)[1]).read_bytes()
            assert 1 <= finding.where.line <= text.count(b"\n") + 1
            assert f"{finding.message}{finding.left}{finding.right}{finding.hint}".isprintable()
    assert refused > 20
