"""Tables of a page: one number a cell, the same figures."""

from __future__ import annotations

import pytest

from yieldnet.report.page_table import page_table
from yieldnet.report.table import Table


def _names(title: str, columns: tuple[str, ...], *rows: tuple[str, ...]) -> list[str]:
    return [
        item.name for item in page_table(Table(title=title, columns=columns, rows=rows)).columns
    ]


def test_ranges_and_errors_stand_in_columns_of_their_own() -> None:
    table = page_table(
        Table(
            title="Coefficients, mol/mol, ranges within two standard deviations",
            columns=("", "measured", "elements", "%", "status"),
            rows=(
                ("biomass", "0.288±0.0361", "0.216…0.361", "100", "measured"),
                ("oxygen", "", "0…unbounded", "", "open"),
                ("acetate", "0.5 exact", "0.5", "100", "measured"),
                ("succinate", "(1.2)", "-0.1…1.5", "57", "bracketed"),
            ),
        )
    )
    assert [item.name for item in table.columns] == [
        "name",
        "measured [mol/mol]",
        "s.d.",
        "elements low [mol/mol]",
        "elements high [mol/mol]",
        "%",
        "status",
    ]
    assert table.rows == (
        ("biomass", "0.288", "0.0361", "0.216", "0.361", "100", "measured"),
        ("oxygen", "", "", "0", "unbounded", "", "open"),
        ("acetate", "0.5", "exact", "0.5", "0.5", "100", "measured"),
        # A spreadsheet would read (1.2) as -1.2.
        ("succinate", "1.2", "set aside", "-0.1", "1.5", "57", "bracketed"),
    )
    assert [item.numeric for item in table.columns] == [False, True, True, True, True, True, False]


def test_percent_and_a_second_count_leave_the_cell() -> None:
    table = page_table(
        Table(
            title="Heat",
            columns=("by", "free", ""),
            rows=(("one", "3 (2)", "+7 %"), ("two", "1", "")),
        )
    )
    assert [item.name for item in table.columns] == ["by", "free", "free, in fact", "%"]
    assert table.rows == (("one", "3", "2", "+7"), ("two", "1", "1", ""))


def test_a_range_with_spaces_and_words_beside_ranges() -> None:
    table = page_table(
        Table(
            title="Gibbs energy, kJ per mol",
            columns=("", "kJ", "over all"),
            rows=(("over the bounds", "-9.1 … 3", "unique"), ("at", "4", "0…2")),
        )
    )
    assert table.rows == (
        ("over the bounds", "-9.1", "3", "unique", ""),
        ("at", "4", "4", "0", "2"),
    )


@pytest.mark.parametrize(
    ("cells", "name"),
    [
        (("taken up", "none"), "side"),
        (("uphill", "possible"), "verdict"),
        (("glucose -> 2 lactate", ""), "equation"),
        (("measured values left out", ""), "remark"),
    ],
)
def test_a_column_without_a_heading_gets_one(cells: tuple[str, str], name: str) -> None:
    rows = tuple(zip(("a", "b"), cells, strict=True))
    assert _names("Title", ("", ""), *rows) == ["name", name]


def test_an_empty_column_without_a_heading_goes() -> None:
    assert _names("Title", ("by", "", "kJ"), ("a", "", "1"), ("b", "", "2")) == ["by", "kJ"]


def test_bars_become_a_column_only_where_the_note_speaks_of_them() -> None:
    rows = (("a", "1"), ("b", "2"))
    told = Table(
        title="Next", columns=("", "left"), rows=rows, note="Bars: gone.", bars=(0.5, 0.25)
    )
    table = page_table(told)
    assert table.bars
    assert [row[-1] for row in table.rows] == ["50", "25"]
    assert table.columns[-1].name == "bar [%]"
    silent = page_table(Table(title="Ladder", columns=("", "best"), rows=rows, bars=(1.0, 0.5)))
    assert not silent.bars
    assert silent.rows == rows


def test_a_sum_is_known_and_a_table_may_be_empty() -> None:
    assert page_table(Table(title="T", columns=("", "t/y"), rows=(("a", "1"), ("total", "1")))).sums
    empty = page_table(Table(title="T", columns=("", "t/y"), rows=(), note="Nothing."))
    assert empty.rows == ()
    assert not empty.sums
    assert empty.note == "Nothing."
