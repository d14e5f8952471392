"""The catalogue of finding codes."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

import pytest

from yieldnet.foundation.catalogue import CATALOGUE, CatalogueEntry

if TYPE_CHECKING:
    from pathlib import Path


@pytest.mark.parametrize("entry", CATALOGUE.values(), ids=lambda entry: entry.code)
def test_every_code_is_explained_in_plain_sentences(entry: CatalogueEntry) -> None:
    assert re.fullmatch(r"YN[1-9]\d\d", entry.code)
    assert CATALOGUE[entry.code] is entry
    assert entry.title
    assert not entry.title.endswith(".")
    for text in (entry.why, entry.way_out):
        assert text.endswith(".")
        assert "!" not in text
        assert "please" not in text.casefold()


def test_titles_are_told_apart() -> None:
    titles = [entry.title for entry in CATALOGUE.values()]
    assert len(titles) == len(set(titles))
    assert len(titles) > 50


def test_codes_stand_in_order() -> None:
    assert list(CATALOGUE) == sorted(CATALOGUE)


def test_every_code_used_in_the_program_is_registered_and_the_reverse(checkout: Path) -> None:
    used: set[str] = set()
    for path in sorted((checkout / "yieldnet").rglob("*.py")):
        if path.name != "catalogue.py":
            used |= set(re.findall(r'"(YN\d{3})"', path.read_text("utf-8")))
    assert used == set(CATALOGUE)


def test_the_catalogue_cannot_be_changed() -> None:
    with pytest.raises(TypeError, match="does not support item assignment"):
        CATALOGUE["YN000"] = CATALOGUE["YN101"]  # type: ignore[index]
