"""A million runs of 5,000 salts with 20 calorimeters, to results.json, beside pandas' read of the same file.

Run: python tests/benchmarks/million_runs.py [runs]. Prints ours and the yardstick from one run; asserts nothing.
"""

import platform
import subprocess
import sys
import tempfile
from pathlib import Path

import numpy as np
import pandas as pd

from reconcile import reference
from reconcile.simulation import Truth, enthalpy_rows, many_salts


def campaign(folder, runs, salts, calorimeters=20):
    rng = np.random.default_rng(1)
    names = list(many_salts(salts))
    parameters = rng.normal([-0.8, -3, 0.05, 0], [0.6, 1.5, 0.04, 0], size=(len(names), 4))
    published = reference.solution_enthalpies(names)["value"].to_numpy(float)
    standard = np.where(np.isfinite(published), published, rng.normal(size=len(names)) * 30)
    truth = Truth(tuple(names), standard, parameters)
    table = enthalpy_rows(
        truth, runs // len(names), (0.01, 1.0), 0.05, rng, True, [f"C{i:02d}" for i in range(calorimeters)]
    )
    table["temperature / K"] = 298.15
    table["operator"] = np.array(["AB", "CD", "EF"])[np.arange(len(table)) % 3]
    table.to_csv(folder / "runs.csv", index=False)
    return folder / "runs.csv"


def whole_process(*command):
    """Wall time / s and peak memory / MB of a process."""
    script = (
        "import resource, subprocess, sys, time; t = time.perf_counter(); "
        "r = subprocess.run(sys.argv[1:], stdout=subprocess.DEVNULL); "
        "print(time.perf_counter() - t, resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024, r.returncode)"
    )
    out = subprocess.run(
        [sys.executable, "-c", script, *map(str, command)], capture_output=True, text=True, check=True
    ).stdout.split()
    return float(out[0]), float(out[1]), int(out[2])


if __name__ == "__main__":
    runs = int(float(sys.argv[1])) if len(sys.argv) > 1 else 1_000_000
    with tempfile.TemporaryDirectory() as place:
        path = campaign(Path(place), runs, min(5_000, runs // 100))
        size = path.stat().st_size / 1e6
        print(f"{platform.processor() or platform.machine()}, pandas {pd.__version__}: {runs} runs, {size:.0f} MB")
        read = f"import pandas as pd; pd.read_csv({str(path)!r}, engine='c')"
        yardstick = min(whole_process(sys.executable, "-c", read) for _ in range(3))
        entry = "from reconcile.commands import main; import sys; sys.exit(main())"
        ours = whole_process(
            sys.executable, "-c", entry, "report", path, "--files", "results", "--out", f"{place}/report"
        )
        print(
            f"pandas reads it in {yardstick[0]:.2f} s with {yardstick[1]:.0f} MB; report --files results takes "
            f"{ours[0]:.2f} s, {ours[1]:.0f} MB, exit {ours[2]}; "
            f"ratio {ours[0] / yardstick[0]:.1f} in time, {ours[1] / yardstick[1]:.1f} in memory"
        )
