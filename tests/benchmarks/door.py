"""A million runs through the door, beside pandas' own read of the same file; prints, never asserts."""

from __future__ import annotations

import argparse
import platform
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pandas as pd

from reconcile.campaign import read_campaign
from reconcile.chemistry import FormulaError, read_salt

HEADINGS = (
    "run", "salt", "calorimeter", "molality / (mol/kg)", "temperature / K", "enthalpy / (kJ/mol)",
    "u(enthalpy) / (kJ/mol)", "batch",
)  # fmt: skip


JOBS = (
    "import pandas",
    "import pandas; table = pandas.read_csv({path!r}, engine='c')",
    "from reconcile.campaign import read_campaign; campaign = read_campaign({path!r})",
)


def peak(job: str) -> float:
    """Largest resident memory, in MB, of a process of its own (Linux); NaN elsewhere."""
    if not Path("/proc/self/status").exists():
        return float("nan")
    tail = "; print(open('/proc/self/status').read())"  # getrusage would count what this process had before
    told = subprocess.run([sys.executable, "-c", job + tail], check=True, capture_output=True, text=True).stdout
    return int(told.split("VmHWM:")[1].split()[0]) / 1024


def formulae(count: int) -> list[str]:
    """So many different formulae that read as salts: chlorides, bromides … with 0 to many waters (invented)."""
    metals, halogens = ("Li", "Na", "K", "Rb", "Cs", "NH4", "Ag", "Tl"), ("F", "Cl", "Br", "I", "NO3", "ClO4")
    found: list[str] = []
    for water in range(count):
        for metal in metals:
            for anion in halogens:
                text = f"{metal}{anion}" if not water else f"{metal}{anion}·{water / 10:g}H2O"
                try:
                    read_salt(text)
                except FormulaError:
                    continue
                found.append(text)
                if len(found) == count:
                    return found
    return found


def write(path: Path, rows: int, salts: int) -> None:
    """A table of runs with eight columns (invented numbers)."""
    rng = np.random.default_rng(2)
    frame = pd.DataFrame({
        HEADINGS[0]: [f"R{number:07d}" for number in range(rows)],
        HEADINGS[1]: np.array(formulae(salts))[rng.integers(0, salts, rows)],
        HEADINGS[2]: np.array([f"C{number}" for number in range(20)])[rng.integers(0, 20, rows)],
        HEADINGS[3]: rng.uniform(0.01, 1, rows).round(5),
        HEADINGS[4]: rng.normal(298.15, 0.05, rows).round(3),
        HEADINGS[5]: rng.normal(17.5, 5, rows).round(4),
        HEADINGS[6]: rng.uniform(0.01, 0.1, rows).round(4),
        HEADINGS[7]: np.array([f"S{number}" for number in range(200)])[rng.integers(0, 200, rows)],
    })  # fmt: skip
    frame.to_csv(path, index=False)


def best(job: Callable[[], object], times: int) -> float:
    """Shortest of some runs, in seconds."""
    taken = []
    for _ in range(times):
        start = time.perf_counter()
        job()
        taken.append(time.perf_counter() - start)
    return min(taken)


def main() -> None:
    """Write the file, read it in both ways, print."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--rows", type=int, default=1_000_000)
    parser.add_argument("--salts", type=int, default=5_000)
    parser.add_argument("--times", type=int, default=3)
    chosen = parser.parse_args()
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "runs.csv"
        write(path, chosen.rows, chosen.salts)
        print(f"{platform.node()}, {platform.machine()}, Python {platform.python_version()}, pandas {pd.__version__}")
        print(f"{chosen.rows} rows, {len(HEADINGS)} columns, {chosen.salts} salts, {path.stat().st_size / 1e6:.0f} MB")
        read_salt.cache_clear()
        first = best(lambda: read_campaign(path), 1)
        theirs = best(lambda: pd.read_csv(path, engine="c"), chosen.times)
        ours = best(lambda: read_campaign(path), chosen.times)
        memory = [peak(job.format(path=str(path))) for job in JOBS]
    print(f"pandas.read_csv(engine='c')  {theirs:.2f} s")
    print(f"read_campaign                {ours:.2f} s; the first time, with formulae and units, {first:.2f} s")
    print(f"beyond pandas' own read      {ours - theirs:.2f} s; {ours / theirs:.1f} times")
    print("largest memory: pandas imported {:.0f} MB, its read {:.0f} MB, ours {:.0f} MB".format(*memory))


if __name__ == "__main__":
    main()
