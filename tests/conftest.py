"""Options and fixtures that tests of every kind share."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import pytest
from click.testing import CliRunner

from yieldnet.cli.main import main
from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.model.binding import bind
from yieldnet.reading.case_file import load_case
from yieldnet.reading.network_file import parse_network

if TYPE_CHECKING:
    from collections.abc import Callable

    from click.testing import Result

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.model.network import Network

CHECKOUT = Path(__file__).resolve().parent.parent


def pytest_addoption(parser: pytest.Parser) -> None:
    parser.addoption(
        "--accept",
        action="store_true",
        help="write what the golden tests see to their files instead of comparing",
    )
    parser.addoption(
        "--benchmarks", action="store_true", help="run tests/benchmarks, which measure time"
    )


def pytest_ignore_collect(collection_path: Path, config: pytest.Config) -> bool | None:
    # Time depends on what else the machine does, so benchmarks run only when they are asked for.
    asked = config.getoption("--benchmarks")
    return True if collection_path.name == "benchmarks" and not asked else None


@pytest.fixture(scope="session")
def checkout() -> Path:
    """Top folder of the project."""
    return CHECKOUT


@pytest.fixture
def run(monkeypatch: pytest.MonkeyPatch) -> Callable[..., Result]:
    """Runs the command from the top folder, as the examples of the help texts are written."""
    monkeypatch.chdir(CHECKOUT)
    # What is printed must not depend on the terminal of whoever runs the tests.
    for name in ("FORCE_COLOR", "NO_COLOR", "TTY_COMPATIBLE", "TTY_INTERACTIVE"):
        monkeypatch.delenv(name, raising=False)
    monkeypatch.setenv("COLUMNS", "80")

    def _run(*arguments: str) -> Result:
        result = CliRunner().invoke(main, arguments)
        # Anything but a planned end is a bug, and keeps its traceback.
        assert result.exception is None or isinstance(result.exception, SystemExit)
        return result

    return _run


@pytest.fixture
def span() -> SourceSpan:
    """Place in a file that nobody reads."""
    return SourceSpan(file="a.yaml", line=3, column=7)


@pytest.fixture(scope="session")
def network_of() -> Callable[[str], Network]:
    """Network of a YAML text that is good."""

    def _network_of(text: str) -> Network:
        network, findings = parse_network(text, "n.yaml")
        assert network is not None, findings.items
        return network

    return _network_of


@pytest.fixture(scope="session")
def bound_of(
    network_of: Callable[[str], Network],
) -> Callable[[str], tuple[BoundNetwork, Findings]]:
    """Numbers of a network of a YAML text, with what binding found."""
    return lambda text: bind(network_of(text))


@pytest.fixture
def case_of(tmp_path: Path) -> Callable[[str], tuple[Case | None, Findings]]:
    """Case of a YAML text beside which ``network.yaml`` may have been written."""

    def _case_of(text: str) -> tuple[Case | None, Findings]:
        path = tmp_path / "case.yaml"
        path.write_text(text, "utf-8")
        return load_case(str(path))

    return _case_of
