"""Laying out on a terminal: widths, wrapping, colour."""

from __future__ import annotations

import io

import pytest
from rich.console import Console

from yieldnet.foundation.findings import Finding, Severity, SourceSpan
from yieldnet.report.table import Table
from yieldnet.report.text import WIDTH, console, print_findings, print_table, wrapped


@pytest.fixture
def out() -> Console:
    return Console(file=io.StringIO(), width=WIDTH, highlight=False, soft_wrap=True, markup=False)


def _lines(out: Console) -> list[str]:
    assert isinstance(out.file, io.StringIO)
    lines = out.file.getvalue().splitlines()
    assert all(len(line) <= WIDTH for line in lines), max(lines, key=len)
    assert all(line == line.rstrip() for line in lines)
    return lines


def test_wrapping_never_breaks_a_name() -> None:
    text = wrapped("glyceraldehyde-3-phosphate-dehydrogenase " * 3, "  ", "    ")
    assert text.splitlines() == [
        "  glyceraldehyde-3-phosphate-dehydrogenase",
        "    glyceraldehyde-3-phosphate-dehydrogenase",
        "    glyceraldehyde-3-phosphate-dehydrogenase",
    ]
    assert wrapped("a b", "  ") == "  a b"


def test_a_table_puts_texts_left_and_numbers_right(out: Console) -> None:
    table = Table(
        title="Title",
        columns=("", "what", "number"),
        rows=(("short", "x", "1.5"), ("a longer name", "yes", "-10")),
        note="A note.",
    )
    print_table(out, table)
    assert _lines(out)[1:] == [
        "Title",
        "                what  number",
        " short          x        1.5",
        " a longer name  yes      -10",
        "  A note.",
    ]


def test_a_table_without_headings_has_no_heading_line(out: Console) -> None:
    print_table(out, Table(title="Title", columns=("", ""), rows=(("a", "b"),)))
    assert _lines(out)[1:] == ["Title", " a  b"]


def test_a_table_without_rows_still_says_its_note(out: Console) -> None:
    print_table(out, Table(title="Title", columns=("a",), rows=(), note="Nothing helps."))
    assert "Nothing helps." in "\n".join(_lines(out))


@pytest.mark.parametrize("bars", [(), (1.0, 0.5)])
def test_a_table_that_is_too_wide_folds_its_widest_column(
    out: Console, bars: tuple[float, ...]
) -> None:
    words = "a very long description of what this row is about and what it is good for, indeed"
    table = Table(
        title="Title",
        columns=("name", "what", "n"),
        rows=(("a", words, "1"), ("b", "x", "2")),
        bars=bars,
    )
    print_table(out, table)
    lines = _lines(out)
    assert (
        " ".join(" ".join(lines).split()).replace(" 1 ", " ").count("what this row is about") == 1
    )
    assert sum(line.endswith("▪" * 8) for line in lines) == bool(bars)


def test_several_columns_fold_and_names_stay_whole(out: Console) -> None:
    names = ", ".join(f"{count},3-propanediol" for count in range(1, 9))
    table = Table(
        title="Title",
        columns=("name", "from", "to", "n"),
        rows=(("first", names, names, "12"), ("second", "x", "y", "3")),
    )
    print_table(out, table)
    lines = _lines(out)
    for count in range(1, 9):
        assert sum(line.count(f"{count},3-propanediol") for line in lines) == 2
    # Both long columns give way alike, so the rows of one name stand beside each other.
    (first,) = [line for line in lines if line.startswith(" first ")]
    assert first.count("1,3-propanediol") == 2
    assert first.endswith("12")


def test_a_word_longer_than_the_page_is_broken(out: Console) -> None:
    table = Table(title="T", columns=("a", "b"), rows=(("x" * 200, "y"),))
    print_table(out, table)
    assert "".join(_lines(out)).count("x") == 200


def test_bars_are_as_long_as_their_share_of_eight(out: Console) -> None:
    table = Table(title="T", columns=("n",), rows=(("1",), ("2",), ("3",)), bars=(1.0, 0.25, 0.0))
    print_table(out, table)
    assert [line.count("▪") for line in _lines(out)[3:]] == [8, 2, 0]


def test_a_finding_is_printed_with_place_both_sides_and_way_out(out: Console) -> None:
    where = SourceSpan(file="a.yaml", line=2, column=5)
    print_findings(
        out,
        [
            Finding(
                code="YN401",
                message="'it' does not close: 2 H too many on the right",
                where=where,
                left="left 4 H",
                right="right 6 H",
                hint="Write '? NADH' there.",
            ),
            Finding(code="YN601", message="infeasible", severity=Severity.WARNING),
        ],
    )
    assert _lines(out) == [
        "a.yaml:2:5: error YN401: 'it' does not close: 2 H too many on the right",
        "      left 4 H",
        "      right 6 H",
        "    Write '? NADH' there.",
        "warning YN601: infeasible",
    ]


@pytest.mark.parametrize("stderr", [False, True])
def test_the_console_is_80_wide_and_writes_what_it_is_given(
    capsys: pytest.CaptureFixture[str], stderr: bool
) -> None:
    out = console(stderr=stderr)
    assert out.width == WIDTH == 80
    text = "[bold]a[/bold] 'glucose' 12.5 " + "x" * 90
    out.print(text, style="bold")
    captured = capsys.readouterr()
    assert (captured.err if stderr else captured.out) == text + "\n"
    assert (captured.out if stderr else captured.err) == ""
