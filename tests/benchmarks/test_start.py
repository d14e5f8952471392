"""How long a prediction takes, whole process, against one import of a modelling library.

Run with ``pytest tests/benchmarks --benchmarks -s``; without ``--benchmarks`` this folder is left
out, since time depends on what else the machine does. Both commands are run by the same
interpreter, one after the other in turns, so that a slow spell of the machine hits both, and the
medians are compared. No absolute time is asserted.
"""

from __future__ import annotations

import subprocess
import sys
from statistics import median
from time import perf_counter
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pathlib import Path

RUNS = 7
"""Runs of each command after one that warms the file cache [-]."""
MOST = 0.35
"""Largest share of the import that a whole prediction may take [-]."""
PREDICT = ["-m", "yieldnet", "predict", "examples/succinate-from-xylose/case.yaml"]
IMPORT = ["-c", "import cobra"]


def _seconds(checkout: Path, arguments: list[str]) -> float:
    begin = perf_counter()
    subprocess.run(
        [sys.executable, *arguments], cwd=checkout, check=True, stdout=subprocess.DEVNULL
    )
    return perf_counter() - begin


def test_a_whole_prediction_is_quicker_than_importing_a_modelling_library(checkout: Path) -> None:
    times: dict[str, list[float]] = {"predict": [], "import": []}
    for turn in range(RUNS + 1):
        for name, arguments in (("predict", PREDICT), ("import", IMPORT)):
            seconds = _seconds(checkout, arguments)
            times[name] += [seconds] if turn else []
    predict, imported = median(times["predict"]), median(times["import"])
    print(
        f"\nwhole process, median of {RUNS}: predict {predict:.3f} s, import cobra"
        f" {imported:.3f} s, ratio {predict / imported:.3f}"
    )
    assert predict / imported < MOST
