#!/usr/bin/env python3
"""The script strip.py and this program side by side: the strip's quasi-TE mode, per error reached, on one core.

    beside.py [--rounds 5] [--core 0]

Both solve the same strip, in turn for some rounds, so that what else the machine does meets both; the least time of the rounds
counts (of strip.py's runs in a round the median, of a Go benchmark's the mean). The script knows neff from a neighbour and gives
neff; the program has its neighbour's modes and gives either neff with the count of modes and its proof (BenchmarkStrip, warm)
or everything: ng, GVD, beta3, sensitivities, shares, bounds (BenchmarkPoint). Errors are those of neff against the converged
value. The last columns are the time of the script for that error, on the line through its own errors and times in
logarithms (~: beyond its last mesh), and its ratio to the program's.
"""
import argparse
import json
import os
import pathlib
import re
import subprocess
import sys
import tempfile

import numpy as np

HERE = pathlib.Path(__file__).resolve().parent
ROOT = HERE.parents[3]


def output(command, where):
    """What a command prints; it must succeed."""
    return subprocess.run(command, cwd=where, check=True, stdout=subprocess.PIPE, text=True).stdout


def script():
    """{aim: row} of strip.py."""
    text = output([sys.executable, HERE / "strip.py", "--polarisation", "te", "--runs", "7", "--json"], HERE)
    return {row["aim"]: dict(row, ms=row["ms_median"]) for row in json.loads(text)}


def benchmark(binary, package, pattern):
    """{name: {unit: value}} of a Go benchmark."""
    text = output([binary, "-test.run", "^$", "-test.bench", pattern, "-test.cpu", "1", "-test.benchtime", "0.25s"], ROOT / package)
    rows = {}
    for line in text.splitlines():
        if line.startswith("Benchmark"):
            name, _, *pairs = re.split(r"\s+", line.strip())
            rows[name] = {unit: float(value) for value, unit in zip(pairs[::2], pairs[1::2])}
    if not rows:
        sys.exit(f"{package}: no benchmark matches {pattern}")
    return rows


def least(best, rows):
    """Keeps of each row the one of least time."""
    for name, row in rows.items():
        if name not in best or row["ms"] < best[name]["ms"]:
            best[name] = row


def at_error(table, error):
    """The script's time for an error, and whether it lies among its own."""
    x, y = np.log(sorted((abs(row["error"]), row["ms"]) for row in table.values())).T
    e = np.log(error)
    if e >= x[0]:
        return np.exp(np.interp(e, x, y)), e <= x[-1]
    return np.exp(y[0] + (e - x[0]) * (y[1] - y[0]) / (x[1] - x[0])), False


def show(title, rows, table, extra):
    """One table of the program's."""
    print(f"\n{title}\n{'':26}  {'error':>7}  {'ms':>6}  {'script':>7}  ratio  " + "  ".join(extra))
    for name, row in rows.items():
        error = row["nano-error"] * 1e-9
        ms, inside = at_error(table, error)
        print(f"{name:26}  {error:7.1e}  {row['ms']:6.1f}  {'' if inside else '~'}{ms:{7 if inside else 6}.1f}  {ms / row['ms']:5.2f}  "
              + "  ".join(f"{row[unit]:{len(unit)}.4g}" for unit in extra))


def main():
    """Builds the benchmarks, runs all in turn, prints the tables."""
    parser = argparse.ArgumentParser(description="strip.py and this program's benchmarks side by side")
    parser.add_argument("--rounds", type=int, default=5)
    parser.add_argument("--core", type=int, default=0)
    given = parser.parse_args()
    table, everything, alone = {}, {}, {}
    with tempfile.TemporaryDirectory() as build:
        guide, channel = os.path.join(build, "guide.test"), os.path.join(build, "channel.test")
        for binary, package in ((guide, "./solvers/guide"), (channel, "./solvers/channel")):
            output(["go", "test", "-c", "-o", binary, package], ROOT)
        os.sched_setaffinity(0, {given.core})
        for _ in range(max(given.rounds, 1)):
            least(table, script())
            least(everything, benchmark(guide, "solvers/guide", "^BenchmarkPoint$/^strip$"))
            least(alone, benchmark(channel, "solvers/channel", "^BenchmarkStrip$/./^warm$"))
    print(f"strip.py: neff alone\n{'aim':26}  {'error':>7}  {'ms':>6}  unknowns")
    for aim, row in table.items():
        print(f"{aim:<26.0e}  {abs(row['error']):7.1e}  {row['ms']:6.1f}  {row['unknowns']:8d}")
    show("the program: neff, and the count of modes with its proof", alone, table, [])
    show("the program: everything", everything, table, ["nano-bound", "points/s", "peak-MB"])


if __name__ == "__main__":
    main()
