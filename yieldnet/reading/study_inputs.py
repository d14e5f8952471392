"""The input texts of a study: read once, kept in the report, and read back from it.

In: a case file, or a report. Out: the text of the case and of its network, and the case made from
these texts, so that a study and its repetition go the same way. Left out: run files and sheets,
whose yields stand in the case.
"""

from __future__ import annotations

import json
import re
from dataclasses import dataclass
from hashlib import sha256
from pathlib import Path
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.reading.case_file import CaseReader, load_case, parse_case
from yieldnet.reading.network_file import parse_network
from yieldnet.reading.source import decode_text, read_text

if TYPE_CHECKING:
    from yieldnet.model.case import Case

__all__ = [
    "INPUTS_ID",
    "INPUTS_KIND",
    "MAX_REPORT_BYTES",
    "PAGE_FORMAT",
    "InputText",
    "ReportFile",
    "StudyInputs",
    "case_of_inputs",
    "read_inputs",
    "read_report",
]

INPUTS_ID = "study-inputs"
"""Name of the element of a report that holds the inputs."""
INPUTS_KIND = "application/json"
"""Type of that element."""
PAGE_FORMAT = 1
"""Format of what that element holds [-]."""
MAX_REPORT_BYTES = 20_000_000
"""Largest report that is read back: one with all pictures has about 1,000,000 bytes [byte]."""
_ELEMENT = re.compile(
    rf'<script type="{INPUTS_KIND}" id="{INPUTS_ID}">(.*?)</script>', re.DOTALL | re.ASCII
)
_ROLES = ("case", "network")
_ENGINES = ("glpk", "optlang")


@dataclass(frozen=True, slots=True, kw_only=True)
class InputText:
    """One input file.

    Parameters
    ----------
    role : {"case", "network"}
        What it is.
    name : str
        Name of the file, without its folder.
    text : str
        All of it; its UTF-8 bytes are those of the file.
    """

    role: str
    name: str
    text: str

    @property
    def digest(self) -> str:
        """SHA-256 of the bytes of the file, in hexadecimal digits."""
        return sha256(self.text.encode("utf-8")).hexdigest()


@dataclass(frozen=True, slots=True, kw_only=True)
class StudyInputs:
    """All input files of a study.

    Parameters
    ----------
    case : InputText
        The case file.
    network : InputText or None
        Its network file; ``None`` for elements alone.
    """

    case: InputText
    network: InputText | None = None

    def texts(self) -> tuple[InputText, ...]:
        """The files, case first."""
        return (self.case,) if self.network is None else (self.case, self.network)


@dataclass(frozen=True, slots=True, kw_only=True)
class ReportFile:
    """What a report says of how it was made.

    Parameters
    ----------
    page : str
        The whole file.
    inputs : StudyInputs
        Its input files.
    digests : tuple of (str, str)
        Role and SHA-256 of each input, as told beside it.
    versions : tuple of (str, str)
        Names and versions of the programs that made it.
    engine : {"glpk", "optlang"}
        Solver that suggested.
    date : str
        Date as printed; empty for none.
    """

    page: str
    inputs: StudyInputs
    digests: tuple[tuple[str, str], ...]
    versions: tuple[tuple[str, str], ...]
    engine: str
    date: str


def read_inputs(path: str) -> tuple[StudyInputs | None, Findings]:
    """Input texts of a case file, ``None`` if anything is wrong, with all findings.

    Parameters
    ----------
    path : str
        Path of the case file.

    Returns
    -------
    StudyInputs or None
        Case and network as texts, under their bare names.
    Findings
        Everything wrong or doubtful, with the paths of the files.
    """
    case, findings = load_case(path)
    if case is None:
        return None, findings
    texts = [_text_of("case", path, findings)]
    if case.network is not None:
        texts.append(_text_of("network", case.network.file, findings))
    read = [item for item in texts if item is not None]
    if len(read) < len(texts):
        return None, findings
    return StudyInputs(case=read[0], network=read[1] if len(read) > 1 else None), findings


def _text_of(role: str, path: str, findings: Findings) -> InputText | None:
    text = read_text(path, findings)
    return None if text is None else InputText(role=role, name=Path(path).name, text=text)


def case_of_inputs(inputs: StudyInputs) -> tuple[Case | None, Findings]:
    """Case of input texts, ``None`` if anything is wrong, with all findings.

    Parameters
    ----------
    inputs : StudyInputs
        Case and network.

    Returns
    -------
    Case or None
        The case as written.
    Findings
        Everything wrong or doubtful; places bear the bare names of the files.
    """
    findings = Findings()
    for item in inputs.texts():
        decode_text(item.text.encode("utf-8", "surrogatepass"), item.name, findings)
    if findings.refused:
        return None, findings

    def take(reader: CaseReader) -> None:
        node = reader.fields.get("network")
        if node is None:
            return
        if inputs.network is None:
            reader.has_network = True
            reader.book.accept_all = True
            reader.findings.add(
                "YN931",
                f"the case names the network {node.text!r}, and the report does not hold it",
                node.span,
                hint="Make the report anew from its case file.",
            )
            return
        network, doubts = parse_network(inputs.network.text, inputs.network.name)
        reader.findings.extend(doubts)
        if network is None:
            reader.has_network = True
            reader.book.accept_all = True
        else:
            reader.take_network(network)

    return parse_case(inputs.case.text, inputs.case.name, take)


def read_report(path: str) -> tuple[ReportFile | None, Findings]:
    """What a report holds of its inputs, ``None`` if it is no report, with all findings.

    Parameters
    ----------
    path : str
        Path of the report.

    Returns
    -------
    ReportFile or None
        The page and its inputs.
    Findings
        Why it cannot be read.
    """
    findings = Findings()
    top = SourceSpan(file=path, line=1, column=1)
    try:
        size = Path(path).stat().st_size
        if size > MAX_REPORT_BYTES:
            findings.add(
                "YN108",
                f"the file has {size:,} bytes",
                top,
                left=f"limit {MAX_REPORT_BYTES:,} bytes",
                hint="Is this the right file?",
            )
            return None, findings
        raw = Path(path).read_bytes()
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or "the name cannot be used"
        findings.add(
            "YN101", f"cannot read {path!r}: {reason.lower()}", top, hint="Check the path."
        )
        return None, findings
    try:
        page = raw.decode("utf-8")
    except UnicodeDecodeError:
        page = ""
    found = _ELEMENT.findall(page)
    if len(found) != 1:
        findings.add(
            "YN931",
            "the file does not hold the inputs of a report",
            top,
            left=f"places that could be them: {len(found)}",
            hint="Give a file that 'yieldnet report CASE --out FILE' has written.",
        )
        return None, findings
    try:
        report = _report(page, json.loads(found[0]))
    except (ValueError, KeyError, TypeError, RecursionError) as error:
        reason = str(error) if isinstance(error, _ReportError) else "they are cut or changed"
        findings.add(
            "YN931",
            f"the inputs in the report cannot be read: {reason}",
            SourceSpan(file=path, line=page[: page.index(found[0])].count("\n") + 1, column=1),
            hint="Make the report anew from its case file.",
        )
        return None, findings
    return report, findings


class _ReportError(ValueError):
    """Something in the inputs of a report is not as it was written."""


def _report(page: str, form: Any) -> ReportFile:
    """Report of the form in its page; any other shape raises."""
    if form["format"] != PAGE_FORMAT:
        raise _ReportError(f"format {form['format']!r}, and {PAGE_FORMAT} is known")
    texts = [
        InputText(role=_word(item["role"]), name=_word(item["name"]), text=_word(item["text"]))
        for item in form["inputs"]
    ]
    roles = tuple(item.role for item in texts)
    if roles not in (_ROLES[:1], _ROLES):
        raise _ReportError(f"they are {', '.join(roles) or 'missing'}")
    if not isinstance(form["versions"], dict):
        raise _ReportError("their versions are no mapping")
    engine = _word(form["engine"])
    if engine not in _ENGINES:
        raise _ReportError(f"solver {engine!r} is not known")
    return ReportFile(
        page=page,
        inputs=StudyInputs(case=texts[0], network=texts[1] if len(texts) > 1 else None),
        digests=tuple((_word(item["role"]), _word(item["sha256"])) for item in form["inputs"]),
        versions=tuple((_word(name), _word(value)) for name, value in form["versions"].items()),
        engine=engine,
        date=_word(form["date"]),
    )


def _word(value: Any) -> str:
    if not isinstance(value, str):
        raise _ReportError(f"{value!r} is not a text")
    value.encode("utf-8")  # half a character pair has no bytes
    return value
