"""From a path to text: what is refused before YAML sees it, and where."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from yieldnet.foundation.findings import Findings
from yieldnet.reading.source import MAX_BYTES, MAX_FINDINGS, read_text, too_many

if TYPE_CHECKING:
    from pathlib import Path


def _read(path: Path, raw: bytes) -> tuple[str | None, Findings]:
    path.write_bytes(raw)
    findings = Findings()
    return read_text(str(path), findings), findings


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "a.yaml"


@pytest.mark.parametrize(
    "text", ["case: x\n", "case: x ± 1 → ⇌\n", "# tab\tinside\ncase: a\tb\n", "\t\ncase: x\n"]
)
def test_plain_text_is_read_as_it_stands(path: Path, text: str) -> None:
    assert _read(path, text.encode("utf-8")) == (text, Findings())


@pytest.mark.parametrize(
    ("raw", "code", "reason", "line", "column"),
    [
        (b"", "YN102", "the file is empty", 1, 1),
        (b" \n\n ", "YN102", "the file is empty", 1, 1),
        (b"\xef\xbb\xbfcase: x", "YN103", "UTF-8 with a byte order mark", 1, 1),
        ("case: x".encode("utf-16"), "YN103", "saved as UTF-16", 1, 1),
        (b"\xfe\xff\x00c", "YN103", "saved as UTF-16", 1, 1),
        ("case: x\n".encode("utf-16-le"), "YN103", "zero bytes", 1, 2),
        (b"a: 1\nb: \x00", "YN103", "zero bytes", 2, 4),
        (b"a: 1\nb: 2 \xb1 1\n", "YN103", "byte 0xb1 is not UTF-8", 2, 6),
        (b"a: 1\nb: 2\r\nc: 3\r\n", "YN106", "carriage returns", 2, 5),
        (b"a:\n\tb: 1\n", "YN105", "indented with a tab", 2, 1),
        (b"a:\n  \tb: 1\n", "YN105", "indented with a tab", 2, 3),
    ],
)
def test_another_text_is_refused_with_its_place(
    path: Path, raw: bytes, code: str, reason: str, line: int, column: int
) -> None:
    text, findings = _read(path, raw)
    assert text is None
    (finding,) = findings
    assert finding.code == code
    assert reason in finding.message
    assert finding.hint
    assert finding.where is not None
    assert (finding.where.file, finding.where.line, finding.where.column) == (
        str(path),
        line,
        column,
    )


def test_a_windows_letter_is_shown_as_its_writer_saw_it(path: Path) -> None:
    _, findings = _read(path, b"b: 2 \xb1 1\n")
    assert "'±'" in next(iter(findings)).message


def test_ten_tabs_are_enough_to_make_the_point(path: Path) -> None:
    text, findings = _read(path, b"a:\n" + b"\tb\n" * 30)
    assert text is None
    assert [item.where.line for item in findings if item.where] == list(range(2, 12))


def test_a_file_of_the_largest_size_is_read_and_one_byte_more_is_not(path: Path) -> None:
    largest = b"case: x\n" + b"#" * (MAX_BYTES - 8)
    text, findings = _read(path, largest)
    assert text is not None
    text, findings = _read(path, largest + b"#")
    assert text is None
    (finding,) = findings
    assert finding.code == "YN108"
    assert (finding.message, finding.left) == (
        f"the file has {MAX_BYTES + 1:,} bytes",
        f"limit {MAX_BYTES:,} bytes",
    )


def test_reading_that_stops_says_after_how_many() -> None:
    finding = too_many("a.yaml")
    assert (finding.code, str(finding.where)) == ("YN116", "a.yaml:1:1")
    assert f"after {MAX_FINDINGS} findings" in finding.message


def test_a_missing_file_is_told_with_a_neighbour_of_like_name(tmp_path: Path) -> None:
    (tmp_path / "lysine.yaml").write_text("case: x", "utf-8")
    findings = Findings()
    assert read_text(str(tmp_path / "lysin.yaml"), findings) is None
    (finding,) = findings
    assert finding.code == "YN101"
    assert "no such file or directory" in finding.message
    assert finding.hint == "Did you mean 'lysine.yaml'?"


@pytest.mark.parametrize("name", ["x.yaml", "nowhere/x.yaml", "a\0b.yaml"])
def test_a_missing_file_without_neighbours(tmp_path: Path, name: str) -> None:
    findings = Findings()
    assert read_text(str(tmp_path / name), findings) is None
    (finding,) = findings
    assert finding.code == "YN101"
    assert finding.hint == "Check the path."


def test_a_folder_is_not_a_file(tmp_path: Path) -> None:
    findings = Findings()
    assert read_text(str(tmp_path), findings) is None
    (finding,) = findings
    assert finding.code == "YN101"
    assert "is a directory" in finding.message
