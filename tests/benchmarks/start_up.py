"""How long commands take beside bare imports: `python -m tests.benchmarks.start_up`. Ratios of one run, side by side.

`settlepoint size` of the demo against a bare Python that imports numpy, scipy.linalg and pint: asked are at most 2.
"""

from __future__ import annotations

import statistics
import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
RUNS = 9
BARE = [sys.executable, "-c", "import numpy, scipy.linalg, pint; pint.UnitRegistry"]
COMMANDS = {
    "settlepoint --help": [sys.executable, "-m", "axis", "--help"],
    "settlepoint size (demo)": [sys.executable, "-m", "axis", "size", str(ROOT / "catalog_demo" / "carriage.toml")],
}


def seconds(command: list[str]) -> float:
    """[s] one run of a command, from outside."""
    start = time.perf_counter()
    subprocess.run(command, cwd=ROOT, stdout=subprocess.DEVNULL, check=False)
    return time.perf_counter() - start


def main() -> None:
    for command in (BARE, *COMMANDS.values()):
        seconds(command)  # warm-up
    times: dict[str, list[float]] = {name: [] for name in COMMANDS}
    ratios: dict[str, list[float]] = {name: [] for name in COMMANDS}
    for _ in range(RUNS):
        bare = seconds(BARE)
        for name, command in COMMANDS.items():
            times[name].append(seconds(command))
            ratios[name].append(times[name][-1] / bare)
    print(f"{RUNS} rounds; ratio to importing numpy, scipy.linalg and pint: median (least .. most)")
    for name, values in ratios.items():
        print(f"{name}: {statistics.median(values):.2f} ({min(values):.2f} .. {max(values):.2f})")


if __name__ == "__main__":
    main()
