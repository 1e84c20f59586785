#!/usr/bin/env python3
"""Makes the demo in fixtures/demo: an invented crystal seen by an invented laboratory.

    python3 tests/reference/make_demo.py [--out DIR]

The same bytes each time: one seeded generator, of which only random() is used. The spectra are made
one electron at a time: each draws a k-point of the whole zone, a band, the widths' deviates and its
channel; no profile function is used. The table of levels holds the same bands on a coarse grid, with
the errors that the study states as uncertainties. All energies here are in eV, from the Fermi level.
"""

import argparse
import itertools
import json
import math
import pathlib
import random

SEED = 20417
HARTREE = 27.211386245981  # eV, CODATA 2022
THERMAL_ENERGY = 8.617333262145177e-5 * 300.0  # eV at 300 K
SIGMA = 1.0 / (2.0 * math.sqrt(2.0 * math.log(2.0)))  # of a full width at half maximum
INVENTED = "Invented data: tamrelite and the Ostrevan Hollow laboratory do not exist."

GRID = 10  # k-points along each axis of the table
TRUE_GAP = 3.40
VALENCE_EDGE = -1.93
CONDUCTION_EDGE = VALENCE_EDGE + TRUE_GAP
PHYSICAL_DIFFERENCE = 0.02  # converged and corrected computed gap minus true gap

PHOTON_ENERGY = 21.218
WORK_FUNCTION = 4.3815  # of the analyser; nobody in the study knows it

# Standard uncertainties that the study states; the true errors are drawn from them.
COMPUTED = {
    "k_grid": 0.02,
    "empty_states": 0.04,
    "basis": 0.02,
    "pseudopotential": 0.02,
    "starting_point": 0.04,
}
ZERO_POINT = (-0.05, 0.01)
PES_RESOLUTION = (0.10, 0.005)
IPES_RESOLUTION = (0.42, 0.02)
IPES_OFFSET = (0.0, 0.03)

SAMPLE_PES = {"gaussian_fwhm": 0.15, "lorentzian_fwhm": 0.08}
SAMPLE_IPES = {"gaussian_fwhm": 0.14, "lorentzian_fwhm": 0.10}


class Draw:
    """Random numbers from random() alone, whose sequence is fixed for a seed."""

    def __init__(self, seed):
        self.uniform = random.Random(seed).random

    def normal(self):
        radius = math.sqrt(-2.0 * math.log(1.0 - self.uniform()))
        return radius * math.cos(2.0 * math.pi * self.uniform())

    def cauchy(self):
        return math.tan(math.pi * (self.uniform() - 0.5))

    def poisson(self, mean):
        """Counts arrivals one by one, in pieces short enough for exp()."""
        count = 0
        while mean > 0.0:
            piece = min(mean, 500.0)
            mean -= piece
            floor, product = math.exp(-piece), self.uniform()
            while product > floor:
                count += 1
                product *= self.uniform()
        return count


# The bands. x, y, z are the cosines of 2 pi k. Three p-like bands at a time: each is steep along one
# axis. s-like bands are symmetric in the axes. All are linear in each cosine, so that their extrema
# stand at corners, where the coarse grid has points.


def p_like(centre, along, across):
    return [
        lambda x, y, z: centre + along * x + across * (y + z),
        lambda x, y, z: centre + along * y + across * (z + x),
        lambda x, y, z: centre + along * z + across * (x + y),
    ]


def s_like(centre, one, two=0.0, three=0.0):
    def band(x, y, z):
        pairs = x * y + y * z + z * x
        return centre + one * (x + y + z) + two * pairs + three * x * y * z

    return [band]


OCCUPIED = (
    s_like(-9.6, 0.12) + s_like(-4.85, 0.26) + s_like(-2.75, -0.27) + p_like(-0.75, 0.36, 0.13)
)
EMPTY = (
    s_like(0.40, 0.10, 0.30, 0.20)
    + p_like(2.70, -0.50, -0.16)
    + s_like(4.60, -0.30)
    + s_like(6.10, 0.28)
)
CORNERS = list(itertools.product((1.0, -1.0), repeat=3))
TOP = max(band(*corner) for band in OCCUPIED for corner in CORNERS)
BOTTOM = min(band(*corner) for band in EMPTY for corner in CORNERS)


def occupied(cosines):
    """Energies of the occupied levels from the valence edge, lowest first."""
    return sorted(band(*cosines) - TOP for band in OCCUPIED)


def empty(cosines):
    """Energies of the empty levels from the conduction edge, lowest first."""
    return sorted(band(*cosines) - BOTTOM for band in EMPTY)


def irreducible_points():
    """Points i <= j <= l of the regular grid with 0 <= k <= 1/2, and how many points each stands for."""
    half = GRID // 2
    for i, j, l in itertools.combinations_with_replacement(range(half + 1), 3):
        signs = 2 ** sum(0 < n < half for n in (i, j, l))
        orders = len(set(itertools.permutations((i, j, l))))
        yield (i / GRID, j / GRID, l / GRID), signs * orders


def levels_csv(computed_gap):
    lines = [
        f"# {INVENTED}",
        "# Quasiparticle and mean-field energies of tamrelite, simple cubic, 10 x 10 x 10 k-points with Gamma,",
        "# reduced by symmetry. Both columns count from the highest occupied quasiparticle level.",
        "# k in units of the reciprocal lattice vectors.",
        "ik,kx,ky,kz,weight,band,E_MF (Ha),E_QP (Ha),occupation",
    ]
    for number, (k, weight) in enumerate(irreducible_points(), start=1):
        cosines = [math.cos(2.0 * math.pi * component) for component in k]
        rows = [(0.34 + 0.965 * e, e, 2) for e in occupied(cosines)]
        rows += [(computed_gap - 0.96 + 0.955 * e, computed_gap + e, 0) for e in empty(cosines)]
        for band, (mean_field, quasiparticle, occupation) in enumerate(rows, start=1):
            fields = [str(number), *(f"{c:.2f}" for c in k), str(weight), str(band)]
            fields += [f"{e / HARTREE + 0.0:.8f}" for e in (mean_field, quasiparticle)]
            lines.append(",".join(fields + [str(occupation)]).replace("-0.00000000", "0.00000000"))
    return lines


class Channels:
    """Equal channels; counts of primary events, and of what follows them by a step background."""

    def __init__(self, first, step, count):
        self.first, self.step = first, step
        self.primary = [0] * count

    def centres(self):
        return [self.first + self.step * i for i in range(len(self.primary))]

    def add(self, energy):
        """Counts an event; one past an end of the range is lost."""
        index = math.floor((energy - self.first) / self.step + 0.5)
        if 0 <= index < len(self.primary):
            self.primary[index] += 1

    def counts(self, draw, constant, step, upward):
        """Adds the dark counts and, for each primary event, secondaries at `step` per eV over all
        channels below it, or above it where `upward`, and half of its own."""
        order = range(len(self.primary))
        counts, passed = list(self.primary), 0
        for index in order if upward else reversed(order):
            here = self.primary[index]
            mean = constant + step * self.step * (passed + 0.5 * here)
            counts[index] += draw.poisson(mean)
            passed += here
        return counts


def fill(draw, channels, bands, origin, instrument_fwhm, sample, events):
    """Counts primary events of `bands`, whose zero stands at `origin` of the recorded axis."""
    gaussian = math.hypot(instrument_fwhm, sample["gaussian_fwhm"]) * SIGMA
    half_width = 0.5 * sample["lorentzian_fwhm"]
    for _ in range(draw.poisson(events)):
        cosines = [math.cos(2.0 * math.pi * draw.uniform()) for _ in range(3)]
        band = bands[int(draw.uniform() * len(bands))]
        displacement = gaussian * draw.normal() + half_width * draw.cauchy()
        channels.add(origin + band(*cosines) + displacement)


def fill_metal(draw, channels, edge, instrument_fwhm, height):
    """Counts the Fermi edge of a metal whose band falls by 6 % per eV."""
    low, high = -1.4, 0.5
    for _ in range(draw.poisson(1.1 * height * (high - low) / channels.step)):
        energy = low + (high - low) * draw.uniform()
        weight = (1.0 - 0.06 * energy) / (math.exp(energy / THERMAL_ENERGY) + 1.0)
        if 1.1 * draw.uniform() < weight:
            channels.add(edge + energy + instrument_fwhm * SIGMA * draw.normal())


def table(head, channels, counts, separator, decimals, descending=False):
    rows = list(zip(channels.centres(), counts))
    if descending:
        rows.reverse()
    return head + [f"{energy:.{decimals}f}{separator}{count}" for energy, count in rows]


def draw_truth(draw):
    errors = {name: u * draw.normal() for name, u in COMPUTED.items()}
    zero_point = ZERO_POINT[0] + ZERO_POINT[1] * draw.normal()
    converged = TRUE_GAP + PHYSICAL_DIFFERENCE - zero_point
    computed_gap = round((converged + sum(errors.values())) / HARTREE, 8) * HARTREE
    displacement = 0.025 * (draw.uniform() - 0.5)
    return {
        "note": INVENTED + " Energies in eV.",
        "definitions": {
            "valence_edge, conduction_edge": "extrema of the true bands, from the sample's Fermi level",
            "gap": "conduction_edge - valence_edge",
            "computed_gap": "of levels.csv: lowest empty minus highest occupied E_QP",
            "computed_gap_converged": "computed_gap - sum of computed_errors",
            "difference": "computed_gap_converged + zero_point - gap",
            "shift_valence": "valence_edge - 0, the table's valence edge",
            "shift_conduction": "conduction_edge - computed_gap",
            "fermi_level_kinetic": "recorded kinetic energy of the Fermi level, displacement included",
            "pes_displacement, ipes_displacement": "recorded minus true energy of the channels",
            "ipes_offset": "true offset, to be added to the axis of ipes.csv",
        },
        "valence_edge": VALENCE_EDGE,
        "conduction_edge": CONDUCTION_EDGE,
        "gap": TRUE_GAP,
        "computed_gap": computed_gap,
        "computed_gap_converged": converged,
        "computed_errors": errors,
        "zero_point": zero_point,
        "difference": PHYSICAL_DIFFERENCE,
        "shift_valence": VALENCE_EDGE,
        "shift_conduction": CONDUCTION_EDGE - computed_gap,
        "fermi_level_kinetic": PHOTON_ENERGY - WORK_FUNCTION + displacement,
        "pes_displacement": displacement,
        "ipes_displacement": 0.05 * (draw.uniform() - 0.5),
        "ipes_offset": IPES_OFFSET[1] * draw.normal(),
        "pes_instrument_fwhm": PES_RESOLUTION[0] + PES_RESOLUTION[1] * draw.normal(),
        "ipes_instrument_fwhm": IPES_RESOLUTION[0] + IPES_RESOLUTION[1] * draw.normal(),
        "pes_sample": SAMPLE_PES,
        "ipes_sample": SAMPLE_IPES,
        "pes_background": {"constant_counts": 35.0, "step_per_ev": 0.035},
        "ipes_background": {"constant_counts": 60.0, "step_per_ev": 0.03},
    }


def pes_csv(draw, truth):
    fermi = truth["fermi_level_kinetic"]
    channels = Channels(8.5, 0.025, 343)  # up to 17.05
    origin = fermi + VALENCE_EDGE - TOP
    fwhm = truth["pes_instrument_fwhm"]
    fill(draw, channels, OCCUPIED, origin, fwhm, SAMPLE_PES, 800_000)
    background = truth["pes_background"]
    counts = channels.counts(
        draw, background["constant_counts"], background["step_per_ev"], upward=False
    )
    head = [
        f"# {INVENTED}",
        "# Tamrelite (001), cleaved in vacuum; valence region.",
        "# technique: photoemission",
        "Kinetic energy / eV;counts",
    ]
    return table(head, channels, counts, ";", 3, descending=True)


def metal_csv(draw, truth):
    channels = Channels(16.0, 0.01, 131)  # up to 17.30
    fill_metal(draw, channels, truth["fermi_level_kinetic"], truth["pes_instrument_fwhm"], 2_600)
    counts = channels.counts(draw, 18.0, 0.0, upward=False)
    head = [
        f"# {INVENTED}",
        "# Metal film in contact with the sample, same settings as pes.csv.",
        "# technique: photoemission",
        "Kinetic energy / eV,counts",
    ]
    return table(head, channels, counts, ",", 2)


def ipes_csv(draw, truth):
    channels = Channels(-1.0, 0.05, 191)  # up to 8.50
    origin = truth["ipes_displacement"] - truth["ipes_offset"] + CONDUCTION_EDGE - BOTTOM
    fwhm = truth["ipes_instrument_fwhm"]
    fill(draw, channels, EMPTY, origin, fwhm, SAMPLE_IPES, 200_000)
    background = truth["ipes_background"]
    counts = channels.counts(
        draw, background["constant_counts"], background["step_per_ev"], upward=True
    )
    head = [
        f"# {INVENTED}",
        "# Tamrelite (001), same cleave as pes.csv.",
        "# technique: inverse photoemission",
        "E - E_F (eV),counts",
    ]
    return table(head, channels, counts, ",", 2)


def study_toml():
    computed = [f'{name} = "{uncertainty:.2f} eV"' for name, uncertainty in COMPUTED.items()]
    return [
        f"# {INVENTED}",
        "# Strings with a unit are quantities; the uncertainties are standard ones.",
        'title = "Tamrelite: computed gap against photoemission (invented)"',
        "",
        "[computed]",
        'levels = "levels.csv"',
        'reference = "valence-edge"',
        "",
        "[computed.uncertainty]",
        *computed,
        "",
        "[photoemission]",
        'spectrum = "pes.csv"',
        f'photon_energy = "{PHOTON_ENERGY} eV"',
        'fermi_edge = "metal.csv"',
        'sample_bias = "0 V"',
        quantity("resolution_fwhm", PES_RESOLUTION),
        'temperature = "300 K"',
        "",
        "[inverse_photoemission]",
        'spectrum = "ipes.csv"',
        quantity("resolution_fwhm", IPES_RESOLUTION),
        quantity("energy_offset", IPES_OFFSET),
        'temperature = "300 K"',
        "",
        "[corrections]",
        quantity("zero_point", ZERO_POINT),
        "",
        "[comparison]",
        'protocols = ["density-fit", "tangent"]',
        'tolerance = "0.2 eV"',
    ]


def quantity(name, value_and_uncertainty):
    value, uncertainty = value_and_uncertainty
    return f'{name} = {{ value = "{value:.2f} eV", standard_uncertainty = "{uncertainty:g} eV" }}'


def rounded(node):
    """Nine decimals: the truth is not finer, and the last bits of a platform do not show."""
    if isinstance(node, dict):
        return {key: rounded(value) for key, value in node.items()}
    return round(node, 9) if isinstance(node, float) else node


def main():
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    default = pathlib.Path(__file__).resolve().parents[2] / "fixtures" / "demo"
    parser.add_argument("--out", type=pathlib.Path, default=default)
    out = parser.parse_args().out
    out.mkdir(parents=True, exist_ok=True)
    draw = Draw(SEED)
    truth = draw_truth(draw)
    files = {
        "levels.csv": levels_csv(truth["computed_gap"]),
        "pes.csv": pes_csv(draw, truth),
        "metal.csv": metal_csv(draw, truth),
        "ipes.csv": ipes_csv(draw, truth),
        "study.toml": study_toml(),
        "truth.json": [json.dumps(rounded(truth), indent=2)],
    }
    for name, lines in files.items():
        (out / name).write_bytes(("\n".join(lines) + "\n").encode("utf-8"))


if __name__ == "__main__":
    main()
