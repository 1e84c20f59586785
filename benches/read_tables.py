"""How fast tables are read, against numpy.loadtxt and pandas.read_csv, in one run.

    python3 benches/read_tables.py [--rounds 5]

Makes two invented tables in a temporary folder, one of 5,000,000 levels in blank-separated columns
and one of 2,000,000 gaps in CSV, and times in turn

* bandrule look --json (release build), as a whole process: it reads, hashes, sums up every column;
* the read call alone inside a Python process, its start and its imports not counted.

Prints the median of the ratios of each round, and the peak memory of the program against the size of
the file plus eight bytes a value. Needs numpy and pandas.
"""

import argparse
import json
import os
import pathlib
import statistics
import subprocess
import sys
import tempfile
import time

LEVELS, BANDS, GAPS = 5_000_000, 50, 2_000_000
MATERIALS = ["Xa", "Xb2O3", "YcN", "ZdS", "QeTe", "Xf", "YgO", "ZhSe", "XiP", "QjAs"]
METHODS = ["G0W0", "GW0", "QSGW", "HSE06", "PBE"]

READ = """
import sys, time
{imports}
began = time.perf_counter()
table = {call}
print(time.perf_counter() - began, len(table))
"""


def write_levels(path):
    import numpy

    random = numpy.random.default_rng(20261201)
    mean_field = numpy.sort(random.normal(0, 8, (LEVELS // BANDS, BANDS)), axis=1).ravel()
    point = numpy.repeat(numpy.arange(1, LEVELS // BANDS + 1), BANDS)
    band = numpy.tile(numpy.arange(1, BANDS + 1), LEVELS // BANDS)
    columns = [point, band, numpy.full(LEVELS, 1e-5), mean_field, 1.1 * mean_field + 0.3, 2.0 * (mean_field < 0)]
    with open(path, "w") as file:
        file.write("# invented data\n# k band weight E_KS_eV E_QP_eV occ\n")
        for start in range(0, LEVELS, 100_000):
            rows = zip(*(column[start : start + 100_000].tolist() for column in columns))
            file.writelines("%7d %4d %10.7f %14.8f %14.8f %6.3f\n" % row for row in rows)
    return columns


def write_gaps(path):
    with open(path, "w") as file:
        file.write("material,polymorph,method,starting point,gap,uncertainty,unit,temperature (K),source\n")
        for row in range(GAPS):
            file.write(
                "%s,cubic,%s,%s,%.4f,%.3f,%s,%d,run %d\n"
                % (
                    MATERIALS[row % 10],
                    METHODS[row % 5],
                    "PBE" if row % 3 else "LDA",
                    1 + row * 7919 % 10_000 / 2_000,
                    0.01 + row % 9 / 100,
                    "eV" if row % 4 else "Ha",
                    300 if row % 2 else 10,
                    row,
                )
            )


def ours(program, path):
    """Seconds, peak memory in bytes and what is printed."""
    out = tempfile.TemporaryFile()
    began = time.perf_counter()
    child = subprocess.Popen([program, "look", "--json", path], stdout=out)
    _, status, usage = os.wait4(child.pid, 0)
    seconds = time.perf_counter() - began
    assert status == 0, status
    out.seek(0)
    return seconds, usage.ru_maxrss * 1024, json.load(out)["files"][0]


def theirs(imports, call, path):
    code = READ.format(imports=imports, call=call)
    printed = subprocess.run([sys.executable, "-c", code, path], capture_output=True, text=True, check=True)
    return float(printed.stdout.split()[0])


def rounds(program, path, peers, count):
    times = {"bandrule": []} | {name: [] for name in peers}
    for _ in range(count + 1):
        seconds, memory, look = ours(program, path)
        times["bandrule"].append(seconds)
        for name, (imports, call) in peers.items():
            times[name].append(theirs(imports, call, path))
    # The first round warms the file cache.
    times = {name: values[1:] for name, values in times.items()}
    for name, values in times.items():
        ratios = [peer / own for peer, own in zip(values, times["bandrule"])]
        print(f"  {name:16} median {statistics.median(values):6.3f} s, over bandrule {statistics.median(ratios):5.2f}")
    return memory, look


def main():
    arguments = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    arguments.add_argument("--rounds", type=int, default=5)
    count = arguments.parse_args().rounds
    root = pathlib.Path(__file__).resolve().parent.parent
    subprocess.run(["cargo", "build", "--release", "--quiet"], cwd=root, check=True)
    program = str(root / "target" / "release" / "bandrule")
    numpy_call = "import numpy", "numpy.loadtxt(sys.argv[1])"
    pandas_blanks = "import pandas", "pandas.read_csv(sys.argv[1], sep=r'\\s+', comment='#', header=None)"
    pandas_csv = "import pandas", "pandas.read_csv(sys.argv[1])"
    with tempfile.TemporaryDirectory() as folder:
        path = os.path.join(folder, "levels.dat")
        columns = write_levels(path)
        size = os.path.getsize(path)
        print(f"{LEVELS:,} levels, 6 columns, {size / 1e6:.0f} MB")
        memory, look = rounds(program, path, {"numpy.loadtxt": numpy_call, "pandas.read_csv": pandas_blanks}, count)
        bound = size + 8 * 6 * LEVELS
        print(f"  peak memory {memory / 1e6:.0f} MB, over file plus columns {memory / bound:.2f}")
        for column, meant in zip(look["columns"], columns):
            # The file has eight decimals.
            assert column["count"] == LEVELS and abs(column["sum"] - meant.sum()) < 1e-8 * LEVELS, column
        print("  counts and sums of every column are those that were written")
        path = os.path.join(folder, "gaps.csv")
        write_gaps(path)
        print(f"{GAPS:,} gaps, 9 columns, {os.path.getsize(path) / 1e6:.0f} MB")
        rounds(program, path, {"pandas.read_csv": pandas_csv}, count)


if __name__ == "__main__":
    main()
