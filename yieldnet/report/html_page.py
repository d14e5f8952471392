"""A study as one HTML file that needs nothing else: no network, no other file, no script.

In: a study. Out: the text of the page, the same for the same study. Names from a user's files are
text, never markup; a policy in the page forbids every request and every script but its own.
"""

from __future__ import annotations

import json
import re
from base64 import b64encode
from hashlib import sha256
from importlib.resources import files
from typing import TYPE_CHECKING

from yieldnet.reading.study_inputs import INPUTS_ID, PAGE_FORMAT
from yieldnet.report.picture_file import picture_text
from yieldnet.report.study_sections import study_sections, summary_lines
from yieldnet.report.view import view_of
from yieldnet.report.whole_file import whole_file

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.report.study import Study
    from yieldnet.report.study_pictures import StudyPicture

__all__ = ["page_of", "save_page"]

_RAW = {"<": "\\u003c", ">": "\\u003e", "&": "\\u0026", "\u2028": "\\u2028", "\u2029": "\\u2029"}
"""Characters that could end the element that holds JSON, or a line of a script."""


def page_of(study: Study, date: str = "") -> str:
    """A study as the text of an HTML file.

    Parameters
    ----------
    study : Study
        The study.
    date : str
        Date to print; none if empty.

    Returns
    -------
    str
        The file.
    """
    from jinja2 import Environment, PackageLoader, StrictUndefined
    from markupsafe import Markup

    page = files("yieldnet.report").joinpath("page")
    style, script = (page.joinpath(name).read_text("utf-8") for name in ("page.css", "page.js"))
    environment = Environment(
        loader=PackageLoader("yieldnet.report", "page"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    sections = study_sections(study)
    pictures = [block.picture for section in sections for block in section.blocks if block.picture]
    text = environment.get_template("page.html.jinja").render(
        title=study.case.title,
        setting=view_of(study.prediction).setting,
        date=date,
        summary=summary_lines(study),
        sections=sections,
        drawn={item.name: Markup(_inline(item)) for item in pictures},
        style=Markup(style),
        script=Markup(script),
        script_digest="sha256-" + b64encode(sha256(script.encode("utf-8")).digest()).decode(),
        inputs_id=INPUTS_ID,
        inputs=Markup(_inputs(study, date)),
    )
    return text


def _inputs(study: Study, date: str) -> str:
    """Everything that makes the page again, as JSON that no markup can come out of."""
    form = {
        "format": PAGE_FORMAT,
        "versions": dict(study.versions),
        "engine": study.engine,
        "date": date,
        "inputs": [
            {"role": item.role, "name": item.name, "sha256": item.digest, "text": item.text}
            for item in study.inputs.texts()
        ],
    }
    text = json.dumps(form, ensure_ascii=False)
    return "".join(_RAW.get(letter, letter) for letter in text)


def _inline(picture: StudyPicture) -> str:
    """SVG of a picture for a page: names of its parts its own, size by the page, told in words."""
    from markupsafe import escape

    text = picture_text(picture.draw)
    text = text[text.index("<svg") :]
    for pattern in (r"<!--.*?-->", r"<metadata>.*?</metadata>"):
        text = re.sub(pattern, "", text, flags=re.DOTALL)
    own = f"{picture.name}-"
    text = re.sub(r'\bid="', f'id="{own}', text)
    text = re.sub(r'href="#', f'href="#{own}', text)
    text = re.sub(r"url\(#", f"url(#{own}", text)
    head, rest = text.split(">", 1)
    head = re.sub(r' (?:width|height)="[^"]*"', "", head)
    words = escape(f"{picture.title}. {picture.words}")
    return f'{head} role="img" aria-label="{words}">{rest}'


def save_page(study: Study, path: Path, date: str = "", replace: bool = False) -> None:
    """Write a study into an HTML file, whole or not at all.

    Parameters
    ----------
    study : Study
        The study.
    path : Path
        The file.
    date : str
        Date to print; none if empty.
    replace : bool
        Whether a file of that name may be replaced.

    Raises
    ------
    FileExistsError
        If there is such a file and it may not be replaced.
    """
    with whole_file(path, replace) as half:
        half.write_text(page_of(study, date), "utf-8", newline="\n")
