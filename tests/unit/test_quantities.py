"""The parser of numbers with errors and units, and of bounds."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.reading.quantities import read_quantity, read_range

F = Fraction


@pytest.mark.parametrize(
    ("text", "value", "sd", "unit"),
    [
        ("0.11 ± 0.01 g/g", F(11, 100), F(1, 100), "g/g"),
        ("0.11 +/- 0.01 g/g", F(11, 100), F(1, 100), "g/g"),
        ("0.11 +- 0.01 g/g", F(11, 100), F(1, 100), "g/g"),
        ("0.11±0.01 g/g", F(11, 100), F(1, 100), "g/g"),
        ("0.21 ± 0.03", F(21, 100), F(3, 100), "None"),
        ("2.5 mmol/g/h", F(5, 2), None, "mmol/g/h"),
        ("0.08 1/h", F(2, 25), None, "1/h"),
        ("38 degC", F(38), None, "degC"),
        ("1/3", F(1, 3), None, "None"),
        ("-2 ± 5 %", F(-2), F(1, 10), "None"),
        ("4 ± 5 % g/g", F(4), F(1, 5), "g/g"),
        ("4 ± 5% g/g", F(4), F(1, 5), "g/g"),
        # A standard deviation of zero is an exact value.
        ("4 ± 0 g/g", F(4), None, "g/g"),
        ("0.25 exact", F(1, 4), None, "None"),
        ("0.25 exact g/g", F(1, 4), None, "g/g"),
    ],
)
def test_a_quantity_has_value_deviation_and_unit(
    span: SourceSpan, text: str, value: Fraction, sd: Fraction | None, unit: str
) -> None:
    findings = Findings()
    quantity = read_quantity(text, span, "it", findings)
    assert list(findings) == []
    assert quantity is not None
    assert quantity.number.value == value
    assert quantity.sd == sd
    assert str(quantity.unit) == unit


@pytest.mark.parametrize(
    ("text", "code", "reason", "hint"),
    [
        ("", "YN201", "a number is missing", "Write a number here."),
        ("± 0.1", "YN201", "'±' is not a number", ""),
        ("0.11 ±", "YN201", "nothing stands after ±", "Write a standard deviation."),
        ("0.11 ± x", "YN201", "'x' is not a number", ""),
        ("0.11 ± -0.01", "YN209", "the standard deviation -0.01 is negative", "without a sign"),
        ("0,11 ± 0.01", "YN201", "decimal comma", "Write it with a point: 0.11."),
        ("about 3", "YN201", "'about' is not a number", ""),
        ("nan", "YN201", "'nan' is not a number that can be used", ""),
        ("5 %", "YN201", "a percentage is not understood here", "0.05"),
        ("5%", "YN201", "'5%' is a percentage", "0.05"),
        ("5 furlongs", "YN203", "unit 'furlongs' is not known", "Known: mol"),
        ("0.11g/g", "YN201", "'0.11g/g' is not a number", "0.11 g/g."),
        ("38°C", "YN201", "'38°C' is not a number", "38 °C."),
        ("1e99", "YN202", "power of ten", ""),
        ("1/0", "YN207", "divides by zero", ""),
        ("0.1 ± 0.01 g/g extra", "YN203", "unit 'g/g extra' is not known", ""),
        ("0.1 g/g ± 0.01", "YN203", "the error stands after the unit", "0.3 ± 0.1 g/g"),
        ("at most 3", "YN201", "a bound stands where a value belongs", "under 'demands'"),
        ("1 to 3", "YN201", "a range stands where a value belongs", "under 'demands'"),
        ("< 3", "YN201", "'<' is not understood", "Write 'at most' instead."),
        (">=3", "YN201", "'>=' is not understood", "Write 'at least' instead."),
        ("5 mmol h-1", "YN203", "is not known", "Write powers as a slash"),
    ],
)
def test_a_bad_quantity_says_what_is_wrong(
    span: SourceSpan, text: str, code: str, reason: str, hint: str
) -> None:
    findings = Findings()
    assert read_quantity(text, span, "it", findings) is None
    (finding,) = findings
    assert finding.code == code
    assert finding.message.startswith("it: ")
    assert reason in finding.message
    assert hint in finding.hint
    assert finding.where == span


@pytest.mark.parametrize(
    ("text", "sd"),
    [
        # A 95 % interval of a normal distribution is 1.96 standard deviations to either side.
        ("0.50 ± 0.098 (95 %)", F(1, 20)),
        ("0.50 ± 0.098 g/g (95 %)", F(1, 20)),
        ("0.50 ± 0.098 g/g (95%)", F(1, 20)),
        ("0.50 ± 19.6 % g/g (95 %)", F(1, 20)),
        # The standard deviation of a mean of four is half that of the single values.
        ("0.50 ± 0.1 g/g (n = 4)", F(1, 20)),
        ("0.50 ± 0.1 (n=4)", F(1, 20)),
        ("0.50 ± 0.3 g/g ( n = 9 )", F(1, 10)),
    ],
)
def test_a_bracket_says_what_the_error_is(span: SourceSpan, text: str, sd: Fraction) -> None:
    findings = Findings()
    quantity = read_quantity(text, span, "it", findings)
    assert list(findings) == []
    assert quantity is not None
    assert quantity.number.value == F(1, 2)
    assert quantity.sd == sd
    assert str(quantity.unit) == ("g/g" if "g/g" in text else "None")


@pytest.mark.parametrize(
    ("bracket", "divisor"),
    [
        # Student's t of 97.5 % with n - 1 degrees of freedom, from printed tables (from memory).
        ("(95 %, n = 4)", 3.182446305),
        ("(n = 4, 95 %)", 3.182446305),
        ("(95 %, n = 2)", 12.7062047),
        ("(95 %, n = 11)", 2.228138852),
        ("(95 %, n = 100000)", 1.96),
        # The root of a number that is no square.
        ("(n = 3)", 3**0.5),
        ("(n = 100000)", 316.227766),
    ],
)
def test_an_interval_from_few_values_is_wider(
    span: SourceSpan, bracket: str, divisor: float
) -> None:
    findings = Findings()
    quantity = read_quantity(f"0.5 ± 0.1 g/g {bracket}", span, "it", findings)
    assert list(findings) == []
    assert quantity is not None
    assert quantity.sd is not None
    assert 0.1 / float(quantity.sd) == pytest.approx(
        divisor, rel=1e-4 if "00000" in bracket else 1e-8
    )


@pytest.mark.parametrize(
    ("text", "code", "reason", "hint"),
    [
        ("0.5 (95 %)", "YN201", "(95 %) explains an error, and none is written", "± error unit"),
        ("0.5 g/g (n = 4)", "YN201", "(n = 4) explains an error, and none is", "± error unit"),
        ("0.5 exact (95 %)", "YN201", "(95 %) explains an error, and none is", "± error unit"),
        ("0.5 ± 0 (95 %)", "YN201", "(95 %) explains an error, and none is", "± error unit"),
        ("0.5 ± 0.1 (n = 1)", "YN210", "n = 1 is no number of values", "from 2 to 100000"),
        ("0.5 ± 0.1 (n = 0)", "YN210", "n = 0 is no number of values", "from 2 to 100000"),
        ("0.5 ± 0.1 (n = 100001)", "YN210", "n = 100001 is no number", "from 2 to 100000"),
        ("0.5 ± 0.1 (90 %)", "YN201", "(90 %) is not understood behind an error", "(95 %)"),
        ("0.5 ± 0.1 (n = 4.5)", "YN201", "(n = 4.5) is not understood", "(n = 4)"),
        ("0.5 ± 0.1 (n = -4)", "YN201", "(n = -4) is not understood", "(n = 4)"),
        ("0.5 ± 0.1 (N = 4)", "YN201", "(N = 4) is not understood", "(n = 4)"),
        ("0.5 ± 0.1 (4)", "YN201", "(4) is not understood", "(n = 4)"),
        ("0.5 ± 0.1 ()", "YN201", "() is not understood", "(n = 4)"),
        ("0.5 ± 0.1 (95 %, 95 %)", "YN201", "is not understood", "(95 %, n = 4)"),
        ("0.5 ± 0.1 (n = 3, n = 3)", "YN201", "is not understood", "(95 %, n = 4)"),
        ("0.5 ± 0.1 (95 %, n = 4, x)", "YN201", "is not understood", "(95 %, n = 4)"),
        ("0.5 ± 0.1 (95 %,)", "YN201", "is not understood", "(95 %, n = 4)"),
        ("0.5 ± -0.1 (95 %)", "YN209", "the standard deviation -0.1 is negative", "sign"),
        ("0.5 ± 0.1 furlongs (95 %)", "YN203", "unit 'furlongs' is not known", "Known"),
    ],
)
def test_a_bracket_that_explains_nothing_is_told(
    span: SourceSpan, text: str, code: str, reason: str, hint: str
) -> None:
    findings = Findings()
    assert read_quantity(text, span, "it", findings) is None
    (finding,) = findings
    assert finding.code == code
    assert reason in finding.message
    assert hint in finding.hint


@pytest.mark.parametrize("text", ["0.5 ± 0.1 (95 %) g/g", "0.5 (95 %) ± 0.1", "(95 %)", "± (95 %)"])
def test_a_bracket_in_another_place_is_not_understood(span: SourceSpan, text: str) -> None:
    findings = Findings()
    assert read_quantity(text, span, "it", findings) is None
    assert len(findings.items) == 1


@pytest.mark.parametrize(
    ("text", "low", "high", "unit"),
    [
        ("at most 0.65", None, F(13, 20), "None"),
        ("at least 0.1 g/g", F(1, 10), None, "g/g"),
        ("0.05 to 0.30", F(1, 20), F(3, 10), "None"),
        ("0.05 to 0.30 g/g", F(1, 20), F(3, 10), "g/g"),
        ("1/3 to 1/3", F(1, 3), F(1, 3), "None"),
        ("-1 to 1", F(-1), F(1), "None"),
    ],
)
def test_a_bound_has_a_least_a_most_or_both(
    span: SourceSpan, text: str, low: Fraction | None, high: Fraction | None, unit: str
) -> None:
    findings = Findings()
    bounds = read_range(text, span, "it", findings)
    assert list(findings) == []
    assert bounds is not None
    assert (bounds.low.value if bounds.low else None) == low
    assert (bounds.high.value if bounds.high else None) == high
    assert str(bounds.unit) == unit


@pytest.mark.parametrize(
    ("text", "code", "reason"),
    [
        ("0.65", "YN201", "'0.65' is no bound"),
        ("0.05 - 0.30", "YN201", "is no bound"),
        ("at most", "YN201", "a number is missing"),
        ("at best 3", "YN201", ""),
        ("<= 0.65", "YN201", "'<=' is not understood"),
        ("≤0.65", "YN201", "'≤' is not understood"),
        ("0.05 to", "YN201", "a number is missing"),
        ("most 3", "YN201", "'most' is not a number"),
        ("", "YN201", "a number is missing"),
        ("0.30 to 0.05", "YN511", "the low end 0.30 is above the high end 0.05"),
        ("at most 3 furlongs", "YN203", "unit 'furlongs' is not known"),
        ("at most 5 %", "YN201", "a percentage is not understood here"),
        ("at most 0,5", "YN201", "decimal comma"),
    ],
)
def test_a_bad_bound_says_what_is_wrong(
    span: SourceSpan, text: str, code: str, reason: str
) -> None:
    findings = Findings()
    assert read_range(text, span, "it", findings) is None
    (finding,) = findings
    assert finding.code == code
    assert reason in finding.message
