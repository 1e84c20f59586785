//! The order of the items, for reading and writing alike.

use super::block::{
    Abscissa, Block, Date, Direction, Extent, Linescans, Pair, Parameter, Particle, Real, Species,
    SputterSource,
};
use super::carrier::{Carrier, Item};
use super::experiment::{Experiment, Label, List, MapSize, Selection};
use super::keyword::{ExperimentMode, FormatIdentifier, ScanMode, Technique};

/// The last line.
pub(crate) const END: &str = "end of experiment";
/// The lines that the shortest block has: two names and the number of its ordinate values.
const LEAST_LINES: u64 = 3;

/// What the experiment says of every block.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Frame {
    mode: ExperimentMode,
    scan_mode: ScanMode,
    experimental_values: u64,
    future_entries: u64,
}

impl Frame {
    pub(crate) fn of(experiment: &Experiment) -> Self {
        Self {
            mode: experiment.mode,
            scan_mode: experiment.scan_mode,
            experimental_values: experiment.variables.len() as u64,
            future_entries: experiment.future_block_entries.into(),
        }
    }
}

type Carried<C, T = ()> = Result<T, <C as Carrier>::Error>;

/// Items 1 to 21. Gives the number of blocks.
pub(crate) fn header<C: Carrier>(c: &mut C, e: &mut Experiment) -> Carried<C, u32> {
    c.keyword(
        Item(1, "format identifier"),
        &mut FormatIdentifier::default(),
    )?;
    c.text(Item(2, "institution identifier"), &mut e.institution)?;
    c.text(
        Item(3, "instrument model identifier"),
        &mut e.instrument_model,
    )?;
    c.text(Item(4, "operator identifier"), &mut e.operator)?;
    c.text(Item(5, "experiment identifier"), &mut e.identifier)?;
    let lines = Item(7, "comment line");
    list(
        c,
        [Item(6, "number of lines in comment"), lines],
        1,
        &mut e.comment,
        |c, line| c.text(lines, line),
    )?;
    c.keyword(Item(8, "experiment mode"), &mut e.mode)?;
    c.keyword(Item(9, "scan mode"), &mut e.scan_mode)?;
    let regions = Item(10, "number of spectral regions");
    let has_regions = e.mode.has_spectral_regions();
    if let Some(number) = c.optional(regions, has_regions, &mut e.spectral_regions)? {
        c.whole(regions, number)?;
    }
    let positions = Item(11, "number of analysis positions");
    if let Some(map) = c.optional(positions, e.mode.has_positions(), &mut e.map)? {
        map_size(c, positions, map)?;
    }
    plan(c, e)?;
    let mut blocks = length(e.blocks.len());
    let lines = LEAST_LINES + u64::from(e.future_block_entries);
    c.count(Item(21, "number of blocks"), lines, &mut blocks)?;
    Ok(blocks)
}

fn map_size<C: Carrier>(c: &mut C, positions: Item, map: &mut MapSize) -> Carried<C> {
    c.whole(positions, &mut map.positions)?;
    let x = Item(11, "number of discrete x coordinates in the full map");
    c.whole(x, &mut map.x_coordinates)?;
    let y = Item(11, "number of discrete y coordinates in the full map");
    c.whole(y, &mut map.y_coordinates)
}

/// Items 12 to 20.
fn plan<C: Carrier>(c: &mut C, e: &mut Experiment) -> Carried<C> {
    let names = [
        Item(13, "experimental variable label"),
        Item(13, "experimental variable units"),
    ];
    list(
        c,
        [Item(12, "number of experimental variables"), names[0]],
        2,
        &mut e.variables,
        |c, variable| label(c, names, variable),
    )?;
    selection(c, &mut e.selection)?;
    let manual = Item(17, "part that was entered by hand");
    list(
        c,
        [
            Item(16, "number of manually entered items in block"),
            manual,
        ],
        1,
        &mut e.manual_parts,
        |c, part| c.whole(manual, part),
    )?;
    let mut future = length(e.future_entries.len());
    let number = Item(18, "number of future upgrade experiment entries");
    c.count(number, 1, &mut future)?;
    let number = Item(19, "number of future upgrade block entries");
    c.whole(number, &mut e.future_block_entries)?;
    let entry = Item(20, "future upgrade experiment entry");
    c.entries(entry, future.into(), &mut e.future_entries, |c, line| {
        c.text(entry, line)
    })
}

fn selection<C: Carrier>(c: &mut C, selection: &mut Selection) -> Carried<C> {
    let (mut signed, mut parts) = selection.entries();
    let number = Item(
        14,
        "number of entries in parameter inclusion or exclusion list",
    );
    c.count(number, 1, &mut signed)?;
    let part = Item(15, "part that is included or excluded");
    c.entries(part, signed.unsigned_abs(), &mut parts, |c, entry| {
        c.whole(part, entry)
    })?;
    *selection = Selection::from_entries(signed, parts);
    Ok(())
}

/// A block, up to its ordinate values. Gives their number.
pub(crate) fn block<C: Carrier>(c: &mut C, frame: &Frame, b: &mut Block) -> Carried<C, u32> {
    c.text(Item(0, "block identifier"), &mut b.identifier)?;
    c.text(Item(0, "sample identifier"), &mut b.sample)?;
    origin(c, frame, b)?;
    source(c, frame.mode, b)?;
    analyser(c, b)?;
    signal(c, frame, b)?;
    let entry = Item(0, "future upgrade block entry");
    c.entries(
        entry,
        frame.future_entries,
        &mut b.future_entries,
        |c, line| c.text(entry, line),
    )?;
    let mut ordinates = length(b.ordinates.len());
    c.count(Item(0, "number of ordinate values"), 1, &mut ordinates)?;
    let minimum = Item(0, "minimum ordinate value");
    let variables = b.variables.len() as u64;
    c.entries(
        minimum,
        variables,
        &mut b.extents,
        |c, extent: &mut Extent| {
            c.real(minimum, &mut extent.minimum)?;
            c.real(Item(0, "maximum ordinate value"), &mut extent.maximum)
        },
    )?;
    Ok(ordinates)
}

/// Items 1 to 11 of a block.
fn origin<C: Carrier>(c: &mut C, frame: &Frame, b: &mut Block) -> Carried<C> {
    date(c, &mut b.date)?;
    let line = Item(8, "block comment line");
    list(
        c,
        [Item(8, "number of lines in block comment"), line],
        1,
        &mut b.comment,
        |c, text| c.text(line, text),
    )?;
    c.keyword(Item(9, "technique"), &mut b.technique)?;
    let x = Item(10, "x coordinate");
    if let Some(position) = c.optional(x, frame.mode.has_positions(), &mut b.position)? {
        c.whole(x, &mut position.x)?;
        c.whole(Item(10, "y coordinate"), &mut position.y)?;
    }
    let value = Item(11, "value of experimental variable");
    let count = frame.experimental_values;
    c.entries(value, count, &mut b.experimental_values, |c, real| {
        c.real(value, real)
    })
}

fn date<C: Carrier>(c: &mut C, date: &mut Date) -> Carried<C> {
    c.whole(Item(1, "year"), &mut date.year)?;
    c.whole(Item(2, "month"), &mut date.month)?;
    c.whole(Item(3, "day of month"), &mut date.day)?;
    c.whole(Item(4, "hours"), &mut date.hours)?;
    c.whole(Item(5, "minutes"), &mut date.minutes)?;
    c.whole(Item(6, "seconds"), &mut date.seconds)?;
    let ahead = Item(7, "number of hours in advance of Greenwich mean time");
    c.whole(ahead, &mut date.hours_ahead_of_gmt)
}

/// Items 12 to 20 of a block.
fn source<C: Carrier>(c: &mut C, mode: ExperimentMode, b: &mut Block) -> Carried<C> {
    c.text(Item(12, "analysis source label"), &mut b.source_label)?;
    let number = Item(13, "sputtering ion or atom atomic number");
    let applies = b.technique.has_particle(mode);
    if let Some(particle) = c.optional(number, applies, &mut b.particle)? {
        sputtering_particle(c, number, particle)?;
    }
    let energy = Item(14, "analysis source characteristic energy");
    c.real(energy, &mut b.source_energy_ev)?;
    c.real(Item(15, "analysis source strength"), &mut b.source_strength)?;
    let width = [
        "analysis source beam width x",
        "analysis source beam width y",
    ];
    pair(c, 16, width, &mut b.beam_width_um)?;
    let view = ["field of view x", "field of view y"];
    let applies = mode.has_field_of_view();
    if let Some(field) = c.optional(Item(17, view[0]), applies, &mut b.field_of_view_um)? {
        pair(c, 17, view, field)?;
    }
    let start = Item(18, "first linescan start x coordinate");
    if let Some(lines) = c.optional(start, mode.has_linescans(), &mut b.linescans)? {
        linescans(c, start, lines)?;
    }
    let polar = Item(19, "analysis source polar angle of incidence");
    c.real(polar, &mut b.source_direction.polar_deg)?;
    let azimuth = Item(20, "analysis source azimuth");
    c.real(azimuth, &mut b.source_direction.azimuth_deg)
}

fn sputtering_particle<C: Carrier>(c: &mut C, number: Item, p: &mut Particle) -> Carried<C> {
    c.whole(number, &mut p.atomic_number)?;
    let atoms = Item(13, "number of atoms in sputtering ion or atom particle");
    c.whole(atoms, &mut p.atoms)?;
    let charge = Item(13, "sputtering ion or atom charge sign and number");
    c.whole(charge, &mut p.charge)
}

fn linescans<C: Carrier>(c: &mut C, start: Item, lines: &mut Linescans) -> Carried<C> {
    c.whole(start, &mut lines.first_start.x)?;
    let y = Item(18, "first linescan start y coordinate");
    c.whole(y, &mut lines.first_start.y)?;
    let x = Item(18, "first linescan finish x coordinate");
    c.whole(x, &mut lines.first_finish.x)?;
    let y = Item(18, "first linescan finish y coordinate");
    c.whole(y, &mut lines.first_finish.y)?;
    let x = Item(18, "last linescan finish x coordinate");
    c.whole(x, &mut lines.last_finish.x)?;
    let y = Item(18, "last linescan finish y coordinate");
    c.whole(y, &mut lines.last_finish.y)
}

/// Items 21 to 30 of a block.
fn analyser<C: Carrier>(c: &mut C, b: &mut Block) -> Carried<C> {
    c.keyword(Item(21, "analyser mode"), &mut b.analyser_mode)?;
    let pass = Item(
        22,
        "analyser pass energy or retard ratio or mass resolution",
    );
    c.real(pass, &mut b.pass_energy_or_ratio)?;
    let width = Item(23, "differential width");
    let applies = b.technique == Technique::AesDiff;
    if let Some(value) = c.optional(width, applies, &mut b.differential_width_ev)? {
        c.real(width, value)?;
    }
    let lens = Item(24, "magnification of analyser transfer lens");
    c.real(lens, &mut b.magnification)?;
    let work = Item(25, "analyser work function or acceptance energy");
    c.real(work, &mut b.work_function_ev)?;
    c.real(Item(26, "target bias"), &mut b.target_bias_v)?;
    let width = ["analysis width x", "analysis width y"];
    pair(c, 27, width, &mut b.analysis_width_um)?;
    let angles = [
        Item(28, "analyser axis take-off polar angle"),
        Item(28, "analyser axis take-off azimuth"),
    ];
    direction(c, angles, &mut b.take_off)?;
    species(c, &mut b.species)
}

fn species<C: Carrier>(c: &mut C, species: &mut Species) -> Carried<C> {
    c.text(Item(29, "species label"), &mut species.label)?;
    let transition = Item(30, "transition or charge state label");
    c.text(transition, &mut species.transition)?;
    let charge = Item(30, "charge of detected particle");
    c.whole(charge, &mut species.charge)
}

/// Items 31 to 40 of a block.
fn signal<C: Carrier>(c: &mut C, frame: &Frame, b: &mut Block) -> Carried<C> {
    let name = Item(31, "abscissa label");
    let regular = frame.scan_mode == ScanMode::Regular;
    if let Some(axis) = c.optional(name, regular, &mut b.abscissa)? {
        abscissa(c, name, axis)?;
    }
    let names = [
        Item(32, "corresponding variable label"),
        Item(32, "corresponding variable units"),
    ];
    list(
        c,
        [Item(32, "number of corresponding variables"), names[0]],
        2,
        &mut b.variables,
        |c, variable| label(c, names, variable),
    )?;
    c.keyword(Item(33, "signal mode"), &mut b.signal_mode)?;
    let time = Item(34, "signal collection time");
    c.real(time, &mut b.collection_time_s)?;
    let scans = Item(35, "number of scans to compile this block");
    c.whole(scans, &mut b.scans)?;
    c.real(Item(36, "signal time correction"), &mut b.time_correction_s)?;
    let energy = Item(37, "sputtering source energy");
    let applies = b.technique.has_sputter_source(frame.mode);
    if let Some(source) = c.optional(energy, applies, &mut b.sputter_source)? {
        sputter_source(c, energy, source)?;
    }
    let angles = [
        Item(38, "sample normal polar angle of tilt"),
        Item(38, "sample normal tilt azimuth"),
    ];
    direction(c, angles, &mut b.tilt)?;
    c.real(Item(39, "sample rotation angle"), &mut b.rotation_deg)?;
    parameters(c, &mut b.parameters)
}

fn abscissa<C: Carrier>(c: &mut C, name: Item, axis: &mut Abscissa) -> Carried<C> {
    label(c, [name, Item(31, "abscissa units")], &mut axis.label)?;
    c.real(Item(31, "abscissa start"), &mut axis.start)?;
    c.real(Item(31, "abscissa increment"), &mut axis.increment)
}

fn sputter_source<C: Carrier>(c: &mut C, energy: Item, s: &mut SputterSource) -> Carried<C> {
    c.real(energy, &mut s.energy_ev)?;
    let current = Item(37, "sputtering source beam current");
    c.real(current, &mut s.current_na)?;
    let width = ["sputtering source width x", "sputtering source width y"];
    pair(c, 37, width, &mut s.width_um)?;
    let angles = [
        Item(37, "sputtering source polar angle of incidence"),
        Item(37, "sputtering source azimuth"),
    ];
    direction(c, angles, &mut s.direction)?;
    c.keyword(Item(37, "sputtering mode"), &mut s.mode)
}

fn parameters<C: Carrier>(c: &mut C, parameters: &mut List<Parameter>) -> Carried<C> {
    let names = [
        Item(40, "additional numerical parameter label"),
        Item(40, "additional numerical parameter units"),
    ];
    let number = Item(40, "number of additional numerical parameters");
    list(c, [number, names[0]], 3, parameters, |c, parameter| {
        label(c, names, &mut parameter.label)?;
        let value = Item(40, "additional numerical parameter value");
        c.real(value, &mut parameter.value)
    })
}

/// A number of entries of so many lines each, and the entries.
fn list<C: Carrier, T: Clone + Default>(
    c: &mut C,
    [number, entry]: [Item; 2],
    lines: u64,
    entries: &mut List<T>,
    each: impl FnMut(&mut C, &mut T) -> Carried<C>,
) -> Carried<C> {
    let mut count = length(entries.len());
    c.count(number, lines, &mut count)?;
    c.entries(entry, count.into(), entries, each)
}

fn label<C: Carrier>(c: &mut C, [name, units]: [Item; 2], label: &mut Label) -> Carried<C> {
    c.text(name, &mut label.label)?;
    c.text(units, &mut label.units)
}

fn pair<C: Carrier>(
    c: &mut C,
    number: u8,
    [x, y]: [&'static str; 2],
    pair: &mut Pair<Real>,
) -> Carried<C> {
    c.real(Item(number, x), &mut pair.x)?;
    c.real(Item(number, y), &mut pair.y)
}

fn direction<C: Carrier>(
    c: &mut C,
    [polar, azimuth]: [Item; 2],
    direction: &mut Direction,
) -> Carried<C> {
    c.real(polar, &mut direction.polar_deg)?;
    c.real(azimuth, &mut direction.azimuth_deg)
}

/// A length as the standard counts; too long a list is refused by its number of entries.
fn length(length: usize) -> u32 {
    u32::try_from(length).unwrap_or(u32::MAX)
}
