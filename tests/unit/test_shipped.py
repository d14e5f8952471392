"""Networks that ship with yieldnet."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from yieldnet.reading import shipped

if TYPE_CHECKING:
    from pathlib import Path


def test_shipped_networks_are_those_of_the_models_folder(checkout: Path) -> None:
    names = shipped.shipped_names()
    files = {path.stem for path in (checkout / "models").glob("*.yaml")}
    assert names == tuple(sorted(files - {"candidates"}))
    assert shipped.shipped_candidates() == checkout / "models" / "candidates.yaml"
    assert "facultative-succinate" in names


@pytest.mark.parametrize("name", shipped.shipped_names())
def test_a_shipped_network_is_found_by_its_name(name: str) -> None:
    path = shipped.find_shipped(name)
    assert path is not None
    assert path.is_file()


@pytest.mark.parametrize("name", ["", "nothing", "facultative-succinate.yaml", "../README"])
def test_what_is_not_shipped_is_not_found(name: str) -> None:
    assert shipped.find_shipped(name) is None


def test_in_an_installed_package_the_models_lie_inside_it(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    package = tmp_path / "yieldnet"
    (package / "reading").mkdir(parents=True)
    monkeypatch.setattr(shipped, "__file__", str(package / "reading" / "shipped.py"))
    assert shipped.models_folder() == tmp_path / "models"
    (package / "models").mkdir()
    (package / "models" / "small.yaml").touch()
    assert shipped.models_folder() == package / "models"
    assert shipped.shipped_names() == ("small",)
