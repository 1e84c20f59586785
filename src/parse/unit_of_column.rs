//! The unit of a column: from its header, a comment, or the user, all of whom must agree.

use std::fmt::Display;

use super::evidence::{Evidence, agree, settled};
use super::problem::visible;
use super::role::{Hints, Kind, Role};
use super::table::Table;
use super::{Place, Problem, Source};
use crate::quantity::{AxisKind, DensityUnit, EnergyUnit, IntensityUnit, MomentumUnit};

/// Where units of columns are looked for.
#[derive(Clone, Copy)]
pub(super) struct Units<'a> {
    pub source: &'a Source,
    pub table: &'a Table,
    pub kind: Kind,
    pub hints: &'a Hints,
}

impl Units<'_> {
    /// The unit of a column of energies; a wavelength only on a photon axis.
    pub fn energy(
        &self,
        role: Role,
        field: usize,
        axis: Option<AxisKind>,
    ) -> Result<Evidence<EnergyUnit>, Problem> {
        let found = self.energy_if_said(role, field)?;
        let found = found.ok_or_else(|| self.missing(role, field, "eV"))?;
        if found.value.is_linear() || axis == Some(AxisKind::Photon) {
            return Ok(found);
        }
        Err(Problem::new(format!(
            "column {} is given in {} by {}, but only photon energies are given by a wavelength",
            field + 1,
            found.value,
            found.says
        ))
        .at(self.table.place_of(self.source, field)))
    }

    /// The unit of a column of energies, where anything says it.
    pub fn energy_if_said(
        &self,
        role: Role,
        field: usize,
    ) -> Result<Option<Evidence<EnergyUnit>>, Problem> {
        let all = self.table.metadata.energy_units.iter();
        // What is said of mean-field or quasiparticle energies is said of no other.
        let comments = all
            .filter(|(of, _)| role == Role::BandEnergy || of.is_none_or(|of| of == role))
            .map(|(_, unit)| unit.clone())
            .collect();
        self.unit(role, field, EnergyUnit::from_spelling, &[], comments)
    }

    /// The unit of a momentum, where anything says it.
    pub fn momentum(&self, field: usize) -> Result<Option<Evidence<MomentumUnit>>, Problem> {
        self.unit(
            Role::Momentum,
            field,
            MomentumUnit::from_spelling,
            &[],
            Vec::new(),
        )
    }

    /// Refuses a column of temperatures that gives another unit than kelvin.
    pub fn kelvin(&self, field: usize) -> Result<(), Problem> {
        let read = |text: &str| (text == "K").then_some("K");
        self.unit(Role::Temperature, field, read, &[], Vec::new())
            .map(|_| ())
    }

    /// The unit of a density of states, where anything says it.
    pub fn density(
        &self,
        role: Role,
        field: usize,
    ) -> Result<Option<Evidence<DensityUnit>>, Problem> {
        self.unit(role, field, DensityUnit::from_spelling, &[], Vec::new())
    }

    /// The unit of the intensities; the name "counts" is evidence too.
    pub fn intensity(&self, role: Role, field: usize) -> Result<Evidence<IntensityUnit>, Problem> {
        let named = self.table.names[field].reading.counts;
        let named: &[IntensityUnit] = if named { &[IntensityUnit::Counts] } else { &[] };
        let comments = self.table.metadata.intensity_units.clone();
        self.unit(role, field, IntensityUnit::from_spelling, named, comments)?
            .ok_or_else(|| self.missing(role, field, "counts"))
    }

    /// The unit of the uncertainties, which is that of the intensities where it is not given.
    pub fn uncertainty(
        &self,
        field: usize,
        intensity: &Evidence<IntensityUnit>,
    ) -> Result<Evidence<IntensityUnit>, Problem> {
        let role = Role::StandardUncertainty;
        let own = self.unit(role, field, IntensityUnit::from_spelling, &[], Vec::new())?;
        let says = format!("the intensities, by {}", intensity.says);
        let of_intensity = Evidence {
            says,
            ..intensity.clone()
        };
        let both = own.into_iter().chain([of_intensity.clone()]).collect();
        agree(
            "the unit of the intensities and of their uncertainties",
            both,
        )
        .map(|agreed| agreed.unwrap_or(of_intensity))
    }

    fn unit<T: Copy + PartialEq + Display>(
        &self,
        role: Role,
        field: usize,
        read: impl Fn(&str) -> Option<T>,
        named: &[T],
        comments: Vec<Evidence<T>>,
    ) -> Result<Option<Evidence<T>>, Problem> {
        let (says, place) = (
            self.table.says(field),
            self.table.place_of(self.source, field),
        );
        let mut evidence = Vec::new();
        for text in &self.table.names[field].reading.units {
            let unit = read(text).ok_or_else(|| self.unknown(text, field))?;
            evidence.push(Evidence::at(unit, says.clone(), place.clone()));
        }
        if let Some((text, span)) = &self.table.names[field].unit {
            let place = self.source.place(span.clone());
            let unit = read(text).ok_or_else(|| self.unknown_below(text, field, place.clone()))?;
            let says = format!("the unit `{text}` on line {}", place.line);
            evidence.push(Evidence::at(unit, says, place));
        }
        for &unit in named {
            evidence.push(Evidence::at(unit, says.clone(), place.clone()));
        }
        evidence.extend(comments);
        let hint = self.hinted(role, read)?;
        settled(&format!("the unit of {role}"), evidence, hint, self.hints)
    }

    /// What the user says; `unit.energy` speaks for every energy without a setting of its own.
    fn hinted<T>(
        &self,
        role: Role,
        read: impl Fn(&str) -> Option<T>,
    ) -> Result<Option<Evidence<T>>, Problem> {
        let energies = role.is_energy(self.kind) && self.kind.has_unit(Role::Energy);
        let general = energies.then_some(Role::Energy);
        let given = [Some(role), general].into_iter().flatten();
        let mut given = given.filter_map(|role| Some((role, self.hints.units.get(&role)?)));
        let Some((role, text)) = given.next() else {
            return Ok(None);
        };
        let says = self.hints.says(&format!("unit.{role}"));
        match read(text) {
            Some(unit) => Ok(Some(Evidence::setting(unit, says))),
            None => Err(Problem::new(format!(
                "{says}: `{text}` is not the spelling of a unit for it"
            ))
            .with_help(spellings(role, self.kind))),
        }
    }

    fn unknown(&self, text: &str, field: usize) -> Problem {
        let place = self.table.place_of(self.source, field);
        self.unknown_at(text, field, &self.table.says(field), place)
    }

    fn unknown_below(&self, text: &str, field: usize, place: Place) -> Problem {
        let says = format!("the units on line {}", place.line);
        self.unknown_at(text, field, &says, place)
    }

    fn unknown_at(&self, text: &str, field: usize, says: &str, place: Place) -> Problem {
        let role = self.table.role_of(field).unwrap_or(Role::Energy);
        Problem::new(format!(
            "`{}` in {says} is not the spelling of a unit for it",
            visible(text)
        ))
        .at(place)
        .with_help(format!(
            "{}; a remark goes elsewhere than in the brackets of a unit",
            spellings(role, self.kind)
        ))
    }

    fn missing(&self, role: Role, field: usize, example: &str) -> Problem {
        let problem = Problem::new(format!(
            "nothing says the unit of column {} `{}`, read as {role}",
            field + 1,
            visible(&self.table.names[field].text)
        ))
        .at(self.table.place_of(self.source, field));
        problem.with_help(format!(
            "write it in the header, or as {}; {}",
            self.hints.setting(&format!("unit.{role} = \"{example}\"")),
            spellings(role, self.kind)
        ))
    }
}

fn spellings(role: Role, kind: Kind) -> String {
    match role {
        Role::Momentum => {
            let all: Vec<&str> = MomentumUnit::ALL
                .into_iter()
                .map(MomentumUnit::symbol)
                .collect();
            format!("momenta are in {}", all.join(", "))
        }
        Role::Temperature => "temperatures are in K".to_owned(),
        Role::Density | Role::Projection => {
            "densities of states are in states/eV, states/Ha, states/Ry or arb. u.".to_owned()
        }
        Role::StandardUncertainty if kind != Kind::Spectrum => spellings(Role::Energy, kind),
        Role::Intensity | Role::Sweep | Role::StandardUncertainty => {
            "intensities are in counts, counts/s or arb. u.".to_owned()
        }
        _ => {
            let all: Vec<&str> = EnergyUnit::ALL
                .into_iter()
                .map(EnergyUnit::symbol)
                .collect();
            format!("energies are in {}", all.join(", "))
        }
    }
}
