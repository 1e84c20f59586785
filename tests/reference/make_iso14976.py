"""Writes fixtures/iso14976/: a small invented file for each experiment mode and scan mode.

The items are written here one by one from the summary of the standard's field list (ISO 14976; Dench,
Hazell and Seah, Surf. Interface Anal. 13, 63 (1988); order of the items from memory), apart from the
program's own list of them, so that the files hold the reader to something outside itself. Every number
is invented, and most differ from each other, so that two items that changed places would be seen.

    python3 tests/reference/make_iso14976.py [--out DIR]
"""

import pathlib
import sys

FORMAT = "VAMAS Surface Chemical Analysis Standard Data Transfer Format 1988 May 4"
ION_TECHNIQUES = {"FABMS", "FABMS energy spec", "ISS", "SIMS", "SIMS energy spec", "SNMS", "SNMS energy spec"}
DEPTH = {"MAPDP", "MAPSVDP", "SDP", "SDPSV"}
IMAGE = {"MAPSV", "MAPSVDP", "SEM"}
MAP = {"MAP", "MAPDP"}


def counted(entries):
    """A number of entries and the entries, whose fields stand on lines of their own."""
    flat = [field for entry in entries for field in (entry if isinstance(entry, tuple) else (entry,))]
    return [len(entries), *flat]


def header(mode, scan, blocks, variables=(), parts=(0,), manual=(), future=(), block_future=0):
    lines = [
        FORMAT,
        "Ostrevan Hollow laboratory",
        "model of no instrument",
        "no operator",
        f"{mode} {scan}",
        *counted(["Invented data: nothing was measured.", "Made by tests/reference/make_iso14976.py."]),
        mode,
        scan,
    ]
    if mode in MAP | {"NORM", "SDP"}:
        lines += [1]
    if mode in MAP:
        lines += [2, 3, 4]
    lines += counted(variables)
    lines += [*parts]
    lines += counted(manual)
    lines += [len(future), block_future, *future]
    return lines + [blocks]


def block(mode, scan, technique, name, ordinates, variables, skip=(), future=(), **given):
    """The lines of a block; `skip` are the numbers of the parts that are left out."""
    def value(key, default):
        return given.get(key, default)

    parts = {
        1: [2031], 2: [2], 3: [17], 4: [13], 5: [45], 6: [value("seconds", 59)], 7: [-3],
        8: counted(value("comment", ["invented"])),
        9: [technique],
        11: value("values", []),
        12: ["He I" if technique == "UPS" else "Al"],
        14: [value("energy", "21.218" if technique == "UPS" else "1486.7")],
        15: ["150.25"],
        16: ["300.5", "301.5"],
        19: ["54.7"], 20: ["180.5"],
        21: [value("analyser", "FAT")], 22: ["5.5"],
        24: ["1.25"], 25: [value("work", "4.41")], 26: [value("bias", "-7.5")], 27: ["60.5", "61.5"],
        28: ["0.5", "1.5"],
        29: ["Tamrelite"], 30: ["valence band", -1],
        32: counted(variables),
        33: [value("signal", "pulse counting")], 34: ["0.25"], 35: [16], 36: ["0.125"],
        38: ["2.5", "3.5"], 39: ["4.5"],
        40: counted(value("parameters", [])),
    }
    if mode in MAP:
        parts[10] = value("position", [1, 2])
    if mode in DEPTH or technique in ION_TECHNIQUES:
        parts[13] = [18, 1, 1]
    if mode in MAP | IMAGE:
        parts[17] = ["500.5", "501.5"]
    if mode in IMAGE:
        parts[18] = [1, 2, 3, 4, 5, 6]
    if technique == "AES diff":
        parts[23] = ["0.75"]
    if scan == "REGULAR":
        parts[31] = value("abscissa", ["kinetic energy", "eV", "16.5", "0.05"])
    if technique not in ION_TECHNIQUES and mode in DEPTH:
        parts[37] = ["2000.5", "1000.5", "70.5", "71.5", "45.5", "46.5", "cyclic"]
    lines = [f"{name}", "tamrelite (invented)"]
    for number in sorted(parts):
        if number not in skip:
            lines += parts[number]
    lines += future
    lines += [len(ordinates)]
    count = len(variables)
    for index in range(count):
        column = [float(text) for text in ordinates[index::count]]
        lines += [min(column), max(column)]
    return lines + ordinates


COUNTS = ("counts", "d")
ENERGIES = ["16.5", "16.6", "16.8"]
CURVE = ["12", "40", "7"]


def interleaved(*columns):
    return [value for row in zip(*columns) for value in row]


def norm_regular():
    two = [COUNTS, ("transmission", "d")]
    both = interleaved(CURVE, ["0.9", "0.8", "0.7"])
    left_out = (8, 12, 14, 31, 32, 40)
    lines = header("NORM", "REGULAR", 2, variables=[("sample temperature", "K")],
                   parts=[-len(left_out), *left_out], manual=[26, 39],
                   future=["kept for a later version"], block_future=2)
    one = {"parameters": [("dose", "C", "0.375"), ("gas pressure", "Pa", "1E37")]}
    lines += block("NORM", "REGULAR", "UPS", "first", both, two, values=["298.5"],
                   future=["later a", "later b"], comment=["invented", ""], **one)
    lines += block("NORM", "REGULAR", "UPS", "second", both, two, skip=left_out, values=["77.5"],
                   future=["", "later d"], seconds=-1, bias="2.5", work="1E37")
    return lines


def norm_irregular():
    variables = [("binding energy", "eV"), ("intensity", "c/s")]
    lines = header("NORM", "IRREGULAR", 3)
    lines += block("NORM", "IRREGULAR", "XPS", "first", interleaved(["3.5", "3", "2"], ["1.25", "1E37", "7.5E-1"]),
                   variables, analyser="FRR", energy="1E37", comment=[])
    lines += block("NORM", "IRREGULAR", "AES diff", "second", interleaved(ENERGIES, CURVE),
                   [("kinetic energy", "eV"), COUNTS], signal="analogue")
    lines += block("NORM", "IRREGULAR", "XPS", "third", interleaved(ENERGIES, CURVE),
                   [("retardation", "V"), COUNTS])
    return lines


def sdp_regular():
    carried = (6, 11, 26)
    lines = header("SDP", "REGULAR", 3, variables=[("etch time", "s")], parts=[len(carried), *carried])
    skip = [part for part in range(1, 41) if part not in carried]
    for index, name in enumerate(["surface", "middle", "deep"]):
        lines += block("SDP", "REGULAR", "XPS", name, CURVE[index:] + CURVE[:index], [COUNTS],
                       skip=skip if index else (), values=[f"{60 * index}.5"], seconds=index,
                       abscissa=["binding energy", "eV", "5", "-0.5"])
    return lines


def sdp_irregular():
    lines = header("SDP", "IRREGULAR", 2)
    lines += block("SDP", "IRREGULAR", "UPS", "surface", interleaved(ENERGIES, CURVE),
                   [("kinetic energy", "eV"), COUNTS])
    lines += block("SDP", "IRREGULAR", "SIMS energy spec", "deep", interleaved(ENERGIES, CURVE),
                   [("kinetic energy", "eV"), COUNTS])
    return lines


def profile(scan):
    lines = header("SDPSV", scan, 1)
    depths = [("etch time", "s"), ("intensity", "c/s")]
    if scan == "REGULAR":
        return lines + block("SDPSV", scan, "XPS", "profile", CURVE, depths[1:],
                             abscissa=["etch time", "s", "0", "30"])
    return lines + block("SDPSV", scan, "XPS", "profile", interleaved(["0", "30", "90"], CURVE), depths)


def map_of_spectra(mode, scan):
    lines = header(mode, scan, 2, parts=[3, 6, 10, 26])
    skip = [part for part in range(1, 41) if part not in (6, 10, 26)]
    technique = "AES diff" if mode == "MAPDP" else "XPS"
    regular = scan == "REGULAR"
    variables = [COUNTS] if regular else [("kinetic energy", "eV"), COUNTS]
    values = CURVE if regular else interleaved(ENERGIES, CURVE)
    for index in range(2):
        lines += block(mode, scan, technique, f"pixel {index + 1}", values, variables,
                       skip=skip if index else (), position=[index + 1, 4])
    return lines


def image(mode, technique):
    lines = header(mode, "MAPPING", 1)
    return lines + block(mode, "MAPPING", technique, "image", CURVE * 2, [COUNTS])


FILES = {
    "norm-regular": norm_regular(),
    "norm-irregular": norm_irregular(),
    "sdp-regular": sdp_regular(),
    "sdp-irregular": sdp_irregular(),
    "sdpsv-regular": profile("REGULAR"),
    "sdpsv-irregular": profile("IRREGULAR"),
    "map-regular": map_of_spectra("MAP", "REGULAR"),
    "map-irregular": map_of_spectra("MAP", "IRREGULAR"),
    "mapdp-regular": map_of_spectra("MAPDP", "REGULAR"),
    "mapdp-irregular": map_of_spectra("MAPDP", "IRREGULAR"),
    "mapsv-mapping": image("MAPSV", "SIMS"),
    "mapsvdp-mapping": image("MAPSVDP", "AES dir"),
    "sem-mapping": image("SEM", "AES dir"),
}


def main():
    here = pathlib.Path(__file__).resolve().parents[2] / "fixtures" / "iso14976"
    folder = pathlib.Path(sys.argv[2]) if sys.argv[1:2] == ["--out"] else here
    folder.mkdir(parents=True, exist_ok=True)
    for name, lines in FILES.items():
        text = "".join(f"{line}\n" for line in [*lines, "end of experiment"])
        (folder / f"{name}.vms").write_text(text, encoding="utf-8", newline="")


main()
