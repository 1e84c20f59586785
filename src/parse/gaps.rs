//! Tables of gaps, ionisation energies and affinities: one value a row, or one column a method.

use super::dispersion::uncertainties;
use super::lowering::{Lower, Lowering};
use super::parsed::Melt;
use super::role::{Kind, Role};
use super::words::Tag;
use super::{Problem, header};
use crate::schema::{Document, Excitation, Gaps, Provenance, Texts};

impl Lower for Gaps {
    const TABLE: Kind = Kind::Gaps;

    fn lower(lowering: &mut Lowering<'_>) -> Option<Self> {
        let fields = lowering.table.fields_of(Role::Value);
        let values = lowering.all_energies(Role::Value, None);
        let uncertainty = uncertainty(lowering, &fields)?;
        let columns: Vec<Meaning> = fields
            .iter()
            .map(|&field| Meaning::of(lowering, field, fields.len()))
            .collect();
        let excitation = lowering.texts_of(Role::Excitation);
        let excitation = excitations(lowering, excitation.as_ref(), &columns);
        let transition = lowering.texts_of(Role::Transition);
        let times = fields.len();
        let values = values?;
        let rows = lowering.rows();
        if times > 1 {
            let detail = format!("{times} columns of values into one value a row");
            lowering.step("turn", detail);
            lowering.melt = Some(Melt {
                role: Role::Value,
                fields: fields.clone(),
            });
        }
        let many = |texts: Option<Texts>| texts.map(|texts| repeated(&texts, times));
        let mut text = |role| many(lowering.texts_of(role));
        let material = text(Role::Material).unwrap_or_default();
        let polymorph = text(Role::Polymorph);
        let starting_point = text(Role::StartingPoint);
        let source = text(Role::Origin);
        let by_rows = text(Role::Method);
        let method = method(by_rows, &columns, rows);
        if let Some(field) = lowering.field(Role::Temperature) {
            let kelvin = lowering.unit_finder().kelvin(field);
            lowering.problems.keep(kelvin)?;
        }
        no_blank_material(lowering, &material, times);
        let temperature = lowering.numbers_of(Role::Temperature);
        Some(Self {
            schema: Self::identifier(),
            provenance: Provenance::default(),
            material,
            polymorph,
            value_ev: (0..rows)
                .flat_map(|row| values.iter().map(move |v| v[row]))
                .collect(),
            uncertainty_ev: uncertainty,
            excitation: excitation?,
            momentum: momenta(transition.as_ref(), &columns, rows),
            method,
            starting_point,
            temperature_k: temperature.map(|column| {
                let each = column.into_iter();
                each.flat_map(|t| std::iter::repeat_n(t, times)).collect()
            }),
            source,
        })
    }

    fn provenance_mut(&mut self) -> &mut Provenance {
        &mut self.provenance
    }
}

/// A row of values without a material: a merged cell or a footer.
fn no_blank_material(lowering: &mut Lowering<'_>, material: &Texts, times: usize) {
    let Some(row) = material.iter().position(str::is_empty) else {
        return;
    };
    let field = lowering.field(Role::Material).unwrap_or(0);
    let span = lowering
        .table
        .layout
        .cell(lowering.source, row / times.max(1), field);
    let Some(span) = span else {
        // The row itself is refused.
        return;
    };
    let place = lowering.source.place(span);
    lowering.problems.push(
        Problem::new("this row has values and no material")
            .at(place)
            .with_help("write the material in every row; a line of averages begins with #"),
    );
}

/// What the header of a column of values says of them.
struct Meaning {
    excitation: Excitation,
    momentum: &'static str,
    /// The method, where the column is one of several.
    method: Option<String>,
}

impl Meaning {
    fn of(lowering: &Lowering<'_>, field: usize, columns: usize) -> Self {
        let reading = &lowering.table.names[field].reading;
        let says = |tag: Tag| reading.tags.contains(&tag);
        let excitation = match () {
            () if says(Tag::Ionisation) => Excitation::Ionisation,
            () if says(Tag::Affinity) => Excitation::Affinity,
            () if says(Tag::Optical) => Excitation::Optical,
            () if says(Tag::Transport) => Excitation::Transport,
            () if says(Tag::Quasiparticle) => Excitation::Quasiparticle,
            () => Excitation::Unknown,
        };
        let momentum = match () {
            () if says(Tag::Direct) => "direct",
            () if says(Tag::Minimum) => "minimum",
            () => "",
        };
        let theory = says(Tag::MeanField) || says(Tag::Quasiparticle) || says(Tag::Experiment);
        Self {
            excitation,
            momentum,
            method: (theory && columns > 1).then(|| reading.label.clone()),
        }
    }
}

// No column, or one that cannot be read: the two are told apart.
#[allow(clippy::option_option)]
fn uncertainty(lowering: &mut Lowering<'_>, values: &[usize]) -> Option<Option<Vec<f64>>> {
    let Some(field) = lowering.field(Role::StandardUncertainty) else {
        return Some(None);
    };
    let &[value] = values else {
        let problem = Problem::new(format!(
            "column {} is an uncertainty, but there are {} columns of values it may belong to",
            field + 1,
            values.len()
        ));
        let place = lowering.table.place_of(lowering.source, field);
        lowering.problems.push(problem.at(place).with_help(
            "write one value a row with its uncertainty, or remove the uncertainties on purpose",
        ));
        return None;
    };
    uncertainties(lowering, field, value).map(Some)
}

fn repeated(texts: &Texts, times: usize) -> Texts {
    match times {
        1 => texts.clone(),
        _ => texts
            .iter()
            .flat_map(|text| std::iter::repeat_n(text, times))
            .collect(),
    }
}

/// What each value excites: by its row where there is a column of it, by its header otherwise.
fn excitations(
    lowering: &mut Lowering<'_>,
    texts: Option<&Texts>,
    columns: &[Meaning],
) -> Option<Vec<Excitation>> {
    let rows = lowering.rows();
    let mut all = Vec::with_capacity(rows * columns.len());
    for row in 0..rows {
        let text = texts.and_then(|texts| texts.get(row)).unwrap_or_default();
        let by_row = match text {
            "" => Some(Excitation::Unknown),
            text => excitation(text),
        };
        let Some(by_row) = by_row else {
            let field = lowering.field(Role::Excitation).unwrap_or(0);
            let span = lowering.table.layout.cell(lowering.source, row, field);
            let place = lowering.source.place(span.unwrap_or(0..0));
            lowering.problems.push(
                Problem::new(format!("`{text}` does not say what is excited"))
                    .at(place)
                    .with_help(
                        "expected quasiparticle, optical, transport, ionisation or affinity, or a \
                         blank cell",
                    ),
            );
            return None;
        };
        all.extend(columns.iter().map(|column| match by_row {
            Excitation::Unknown => column.excitation,
            known => known,
        }));
    }
    Some(all)
}

/// What a cell says of what is excited.
fn excitation(text: &str) -> Option<Excitation> {
    let tags = header::read(text, Kind::Gaps).tags;
    let says = |tag: Tag| tags.contains(&tag);
    let known = [
        (Tag::Ionisation, Excitation::Ionisation),
        (Tag::Affinity, Excitation::Affinity),
        (Tag::Optical, Excitation::Optical),
        (Tag::Transport, Excitation::Transport),
        (Tag::Quasiparticle, Excitation::Quasiparticle),
        (Tag::Minimum, Excitation::Unknown),
        (Tag::Gap, Excitation::Unknown),
    ];
    let found = known.into_iter().find(|&(tag, _)| says(tag));
    found
        .map(|(_, excitation)| excitation)
        .or((text == "unknown").then_some(Excitation::Unknown))
}

fn momenta(transition: Option<&Texts>, columns: &[Meaning], rows: usize) -> Texts {
    let mut all = Texts::default();
    for row in 0..rows {
        let by_row = transition
            .and_then(|texts| texts.get(row))
            .unwrap_or_default();
        for column in columns {
            all.push(if by_row.is_empty() {
                column.momentum
            } else {
                by_row
            });
        }
    }
    all
}

/// The method of each value: by its row, by its header, or not at all.
fn method(by_rows: Option<Texts>, columns: &[Meaning], rows: usize) -> Option<Texts> {
    if by_rows.is_some() || columns.iter().all(|column| column.method.is_none()) {
        return by_rows;
    }
    let of = |column: &'_ Meaning| column.method.clone().unwrap_or_default();
    let names: Vec<String> = columns.iter().map(of).collect();
    let all = (0..rows).flat_map(|_| names.iter().map(String::as_str));
    Some(all.collect())
}
