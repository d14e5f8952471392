"""From a path to text: encoding, line ends and indentation checked before YAML sees them."""

from __future__ import annotations

import re
from pathlib import Path
from typing import TYPE_CHECKING

from yieldnet.foundation.findings import Finding, SourceSpan, near

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Findings

__all__ = ["MAX_BYTES", "MAX_FINDINGS", "decode_text", "near_file", "read_text", "too_many"]

MAX_BYTES = 300_000
"""Largest file that is read: a network of 60 reactions has about 10,000 bytes [byte]."""

MAX_FINDINGS = 200
"""Most findings of one file; with more, it is another kind of file, or one slip repeated [-]."""

_MARKS = {
    b"\xef\xbb\xbf": "UTF-8 with a byte order mark",
    b"\xff\xfe": "UTF-16",
    b"\xfe\xff": "UTF-16",
}


def read_text(path: str, findings: Findings, *, indented_by_tabs: bool = False) -> str | None:
    """Text of a file, or ``None`` with findings that say why not.

    Parameters
    ----------
    path : str
        Path as the user gave it.
    findings : Findings
        Receives what is wrong.
    indented_by_tabs : bool
        Whether a line may begin with a tab, as it may in a table.

    Returns
    -------
    str or None
        The text, UTF-8 with line feeds.
    """
    top = SourceSpan(file=path, line=1, column=1)
    place = Path(path)
    try:
        if place.is_dir():
            findings.add(
                "YN101", f"{path!r} is a directory", top, hint="Name the YAML file inside it."
            )
            return None
        size = place.stat().st_size
        if size > MAX_BYTES:
            findings.add(
                "YN108",
                f"the file has {size:,} bytes",
                top,
                left=f"limit {MAX_BYTES:,} bytes",
                hint="A case or a network is a short text: is this the right file?",
            )
            return None
        raw = place.read_bytes()
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "the name cannot be used"
        findings.add(
            "YN101",
            f"cannot read {path!r}: {reason.lower()}",
            top,
            hint=near_file(place) or "Check the path.",
        )
        return None
    return decode_text(raw, path, findings, indented_by_tabs=indented_by_tabs)


def decode_text(
    raw: bytes, path: str, findings: Findings, *, indented_by_tabs: bool = False
) -> str | None:
    """Text of the bytes of a file, or ``None`` with findings that say why not.

    Parameters
    ----------
    raw : bytes
        All bytes of the file.
    path : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.
    indented_by_tabs : bool
        Whether a line may begin with a tab, as it may in a table.

    Returns
    -------
    str or None
        The text, UTF-8 with line feeds.
    """
    text = _decode(raw, path, SourceSpan(file=path, line=1, column=1), findings)
    if text is None or indented_by_tabs:
        return text
    return _without_tabs(text, path, findings)


def too_many(path: str) -> Finding:
    """Finding that stands last where a file has more mistakes than are listed."""
    return Finding(
        code="YN116",
        message=f"reading stopped after {MAX_FINDINGS} findings",
        where=SourceSpan(file=path, line=1, column=1),
        hint="Mend these first; is this the right file?",
    )


def near_file(place: Path) -> str:
    """Hint with near matches among the files of the same folder; empty if there are none."""
    try:
        names = [item.name for item in place.parent.iterdir()]
    except (OSError, ValueError):
        return ""
    return near(place.name, names)


def _decode(raw: bytes, path: str, top: SourceSpan, findings: Findings) -> str | None:
    for mark, encoding in _MARKS.items():
        if raw.startswith(mark):
            findings.add(
                "YN103",
                f"the file is saved as {encoding}",
                top,
                hint="Save it as UTF-8 without a byte order mark.",
            )
            return None
    if b"\x00" in raw:
        findings.add(
            "YN103",
            "the file holds zero bytes, so it is UTF-16 or not text at all",
            _at(raw, raw.index(b"\x00"), path),
            hint="Save it as UTF-8.",
        )
        return None
    try:
        text = raw.decode("utf-8")
    except UnicodeDecodeError as error:
        guess = raw[error.start : error.start + 1].decode("cp1252", "replace")
        findings.add(
            "YN103",
            f"byte 0x{raw[error.start]:02x} is not UTF-8 (a Windows encoding has {guess!r} there)",
            _at(raw, error.start, path),
            hint="Save the file as UTF-8.",
        )
        return None
    if not text.strip():
        findings.add("YN102", "the file is empty", top, hint="Start from a shipped example.")
        return None
    if "\r" in text:
        findings.add(
            "YN106",
            "the lines end with carriage returns",
            _at(raw, raw.index(b"\r"), path),
            hint="Save the file with line feeds alone (Unix line ends).",
        )
        return None
    return text


def _without_tabs(text: str, path: str, findings: Findings) -> str | None:
    tabs = [
        SourceSpan(file=path, line=number, column=found.end())
        for number, line in enumerate(text.split("\n"), 1)
        if (found := re.match(r" *\t", line)) and line.strip()
    ]
    for span in tabs[:10]:
        findings.add("YN105", "the line is indented with a tab", span, hint="Use spaces.")
    return None if tabs else text


def _at(raw: bytes, offset: int, path: str) -> SourceSpan:
    before = raw[:offset]
    line_start = before.rfind(b"\n") + 1
    return SourceSpan(file=path, line=before.count(b"\n") + 1, column=offset - line_start + 1)
