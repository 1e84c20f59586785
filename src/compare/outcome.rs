//! The whole comparison, from a study to a result and its curves.

use super::bands::{Bands, bands};
use super::budget::{Budget, Cause};
use super::cautions::cautions;
use super::drawn::{drawn, fit_record};
use super::error::Error;
use super::inputs::{Inputs, read};
use super::scale::scale;
use super::side::{Computed, SideResult, side};
use super::study::{Protocol, Study};
use super::verdict::{Grounds, en_score, verdict};
use crate::align::Groups;
use crate::quantity::{Reference, rounded};
use crate::schema::{
    Caution, Curves, Document, Expanded, Measured, ProtocolEdge, ProtocolRecord, Provenance,
    Quantity, ResultDocument, Shift, Side, Verdict,
};

/// A comparison.
#[derive(Debug, Clone, PartialEq)]
pub struct Outcome {
    /// What was found.
    pub result: ResultDocument,
    /// The curves behind it.
    pub curves: Curves,
}

/// Compares what a study names.
///
/// # Errors
/// [`Error::Refused`] where the study or a file cannot be read, contradicts another, or lacks what a
/// step needs; [`Error::Findings`] where the rules find errors in the data.
pub fn compare(study: &Study) -> Result<Outcome, Error> {
    let inputs = read(study)?;
    let mut provenance = provenance(study, &inputs);
    let bands = bands(&inputs.levels, &study.computed)?;
    let sides = sides(study, &inputs, &bands, &mut provenance)?;
    let comparison = Comparison {
        study,
        bands: &bands,
        sides: &sides,
    };
    let result = comparison.result(inputs, provenance);
    Ok(Outcome {
        result,
        curves: comparison.curves(),
    })
}

fn provenance(study: &Study, inputs: &Inputs) -> Provenance {
    let mut provenance = Provenance::default();
    let mut documents = vec![&inputs.levels.document.provenance];
    for side in &inputs.sides {
        documents.push(&side.spectrum.document.provenance);
        documents.extend(side.metal.as_ref().map(|metal| &metal.document.provenance));
    }
    provenance.sources.push(study.source.record().clone());
    for document in documents {
        provenance.sources.extend(document.sources.iter().cloned());
        provenance.steps.extend(document.steps.iter().cloned());
    }
    provenance
}

fn sides(
    study: &Study,
    inputs: &Inputs,
    bands: &Bands,
    provenance: &mut Provenance,
) -> Result<Vec<SideResult>, Error> {
    let groups = Groups::new(bands.points, bands.regular);
    let mut results = Vec::new();
    let mut problems = Vec::new();
    for input in &inputs.sides {
        let (levels, edge) = bands.side(input.side);
        let computed = Computed {
            levels,
            edge,
            groups: &groups,
        };
        let result = scale(input, provenance)
            .and_then(|scale| side(input, scale, computed, &study.comparison));
        match result {
            Ok(result) => results.push(result),
            Err(problem) => problems.push(problem),
        }
    }
    if problems.is_empty() {
        Ok(results)
    } else {
        Err(Error::Refused(problems))
    }
}

struct Comparison<'a> {
    study: &'a Study,
    bands: &'a Bands,
    sides: &'a [SideResult],
}

impl Comparison<'_> {
    fn side(&self, side: Side) -> Option<&SideResult> {
        self.sides.iter().find(|result| result.side == side)
    }

    /// The reference that both sides share; that of the only side where there is one.
    fn reference(&self) -> Reference {
        let mut references = self.sides.iter().map(|side| side.scale.reference);
        let first = references.next().unwrap_or_default();
        if references.all(|other| other == first) {
            first
        } else {
            Reference::Unknown
        }
    }

    /// Whether the two sides may be subtracted.
    fn is_tied(&self) -> bool {
        self.sides.len() == 2 && self.reference() != Reference::Unknown
    }

    fn result(&self, inputs: Inputs, mut provenance: Provenance) -> ResultDocument {
        let budget = self.budget();
        let protocols = self.protocols();
        let measured = self.measured(&budget, &protocols);
        let mut computed = self.bands.record.clone();
        computed.gap = computed.gap.map(|gap| budget.computed_gap(gap.value));
        let corrected = computed.gap.map(|gap| self.corrected(gap.value));
        computed.corrected_gap = corrected.map(|gap| budget.corrected_gap(gap));
        let cautions = cautions(self.sides, self.reference(), &measured);
        let expanded = budget.difference();
        let compared = measured.gap.zip(corrected).map(|(m, c)| c - m.value);
        let verdict = self.verdict(compared, &expanded, &cautions);
        self.steps(&mut provenance);
        ResultDocument {
            schema: ResultDocument::identifier(),
            title: self.study.title.clone(),
            shift: self.shift(&measured),
            difference: compared.map(|d| {
                Quantity::new(d, expanded.standard_uncertainty_ev)
                    .with_interval(expanded.expanded_uncertainty_ev)
            }),
            en_score: compared.and_then(|d| en_score(d, &expanded)),
            expanded: compared.map(|_| expanded),
            tolerance_ev: self.study.comparison.tolerance,
            budget: budget.rows(),
            verdict,
            cautions,
            protocols,
            fits: self.sides.iter().map(fit_record).collect(),
            findings: inputs.findings,
            provenance,
            files: Vec::new(),
            measured,
            computed,
        }
    }

    fn corrected(&self, gap: f64) -> f64 {
        let parts = self.study.corrections.iter();
        gap + parts.map(|c| c.sign * c.stated.value).sum::<f64>()
    }

    fn budget(&self) -> Budget {
        let mut budget = Budget::default();
        for side in self.sides {
            budget.add(self.statistics(side));
            for cause in &side.causes {
                budget.add(cause.clone());
            }
            budget.add(Self::protocol(side));
        }
        budget.add(self.sampling());
        for (name, stated) in &self.study.computed.uncertainty {
            let basis = format!("{}:{}", stated.place.file, stated.place.line);
            let name = format!("{}, computed", name.replace('_', " "));
            budget.add(Cause::of_computed_gap(name, Some(stated.value), basis));
        }
        if self.study.computed.uncertainty.is_empty() {
            let basis = "not stated: add [computed.uncertainty]".to_owned();
            budget.add(Cause::of_computed_gap(
                "computed gap".to_owned(),
                None,
                basis,
            ));
        }
        for correction in &self.study.corrections {
            let stated = &correction.stated;
            let basis = format!("{}:{}", stated.place.file, stated.place.line);
            let name = format!("{}, correction", correction.name.replace('_', " "));
            budget.add(Cause::of_correction(
                name,
                stated.standard_uncertainty,
                basis,
            ));
        }
        budget
    }

    fn headline(&self) -> Protocol {
        self.study.comparison.protocols[0]
    }

    fn edge_of(side: &SideResult, protocol: Protocol) -> Option<&ProtocolEdge> {
        let found = side.edges.iter().find(|(known, _)| *known == protocol);
        found.map(|(_, edge)| edge)
    }

    fn statistics(&self, side: &SideResult) -> Cause {
        let u = match self.headline() {
            Protocol::DensityFit => Some(side.fit.noise_variance.sqrt()),
            Protocol::Tangent => {
                Self::edge_of(side, Protocol::Tangent).map(|edge| edge.edge.uncertainty_or_zero())
            }
        };
        let degrees = f64::from(u32::try_from(side.fit.degrees_of_freedom).unwrap_or(u32::MAX));
        let basis = format!(
            "{} of {} channels",
            self.headline().name(),
            side.fit.channels
        );
        let name = format!("counting statistics, {}", side.side.technique());
        let cause = Cause::of_edge(name, side.side, u, basis);
        match side.curve.statistics {
            "poisson" => cause.by_statistics(f64::INFINITY),
            _ => cause.by_statistics(degrees),
        }
    }

    /// What two protocols differ by beyond their own uncertainties, as a rectangular distribution of
    /// that half width.
    fn protocol(side: &SideResult) -> Cause {
        let edges: Vec<Quantity> = side.edges.iter().map(|(_, edge)| edge.edge).collect();
        let name = format!("protocol, {}", side.side.technique());
        let [first, second] = edges.as_slice() else {
            let basis = "one protocol only: nothing to hold it against".to_owned();
            return Cause::of_edge(name, side.side, None, basis);
        };
        let noise = first.uncertainty_or_zero().powi(2) + second.uncertainty_or_zero().powi(2);
        let excess = ((first.value - second.value).powi(2) - noise).max(0.0);
        let basis = format!(
            "protocols differ by {:.3} eV, {:.3} eV expected of noise",
            (first.value - second.value).abs(),
            noise.sqrt()
        );
        Cause::of_edge(name, side.side, Some((excess / 3.0).sqrt()), basis)
    }

    /// Sampling of the Brillouin zone, jointly for both edges.
    fn sampling(&self) -> Cause {
        let name = "sampling of the Brillouin zone".to_owned();
        let of = |side: Side| {
            self.side(side)
                .map_or(&[][..], |result| &result.fit.influence)
        };
        let (valence, conduction) = (of(Side::Valence), of(Side::Conduction));
        let groups = valence.len().max(conduction.len());
        if groups == 0 {
            let basis = "not known: the table names fewer than four k-points".to_owned();
            return Cause::of_computed_gap(name, None, basis);
        }
        let at = |list: &[f64], group: usize| list.get(group).copied().unwrap_or(0.0);
        let norm = |part: &dyn Fn(usize) -> f64| -> f64 {
            (0..groups).map(|g| part(g).powi(2)).sum::<f64>().sqrt()
        };
        let shares: Vec<String> = self
            .sides
            .iter()
            .map(|side| format!("{} {:.2}", side.side.name(), side.fit.sampling_share))
            .collect();
        let basis = format!(
            "influence of {groups} k-points or groups of them; misfit shows this share of random \
             sampling: {}",
            shares.join(", ")
        );
        let degrees = f64::from(u32::try_from(groups - 1).unwrap_or(u32::MAX));
        Cause::of_both_edges(
            name,
            norm(&|g| at(valence, g)),
            norm(&|g| at(conduction, g)),
            norm(&|g| at(conduction, g) - at(valence, g)),
            basis,
        )
        .by_statistics(degrees)
    }

    fn protocols(&self) -> Vec<ProtocolRecord> {
        let tied = self.is_tied();
        let record = |&protocol: &Protocol| {
            let edge = |side| {
                self.side(side)
                    .and_then(|s| Self::edge_of(s, protocol))
                    .cloned()
            };
            let (valence, conduction) = (edge(Side::Valence), edge(Side::Conduction));
            let apart = |part: fn(&ProtocolEdge) -> Quantity| {
                let (v, c) = (part(valence.as_ref()?), part(conduction.as_ref()?));
                let u = v.uncertainty_or_zero().hypot(c.uncertainty_or_zero());
                tied.then(|| Quantity::new(c.value - v.value, u))
            };
            ProtocolRecord {
                protocol: protocol.name().to_owned(),
                model_dependent: protocol == Protocol::DensityFit,
                headline: protocol == self.headline(),
                gap: apart(|edge| edge.edge),
                onset_gap: apart(|edge| edge.onset),
                valence,
                conduction,
            }
        };
        self.study.comparison.protocols.iter().map(record).collect()
    }

    /// The headline numbers. The raw onset gap is that of the first protocol that reads an onset.
    fn measured(&self, budget: &Budget, protocols: &[ProtocolRecord]) -> Measured {
        let headline = &protocols[0];
        let reads = protocols.iter().find(|p| !p.model_dependent);
        let known = self.reference() != Reference::Unknown || self.sides.len() == 1;
        let edge = |side: Side, edge: &Option<ProtocolEdge>| {
            let edge = edge.as_ref().filter(|_| known)?;
            Some(budget.edge(side, edge.edge.value))
        };
        Measured {
            reference: self.reference(),
            valence_edge: edge(Side::Valence, &headline.valence),
            conduction_edge: edge(Side::Conduction, &headline.conduction),
            gap: headline.gap.map(|gap| budget.gap(gap.value)),
            onset_gap: reads.unwrap_or(headline).onset_gap,
        }
    }

    /// Measured minus computed edge of the headline protocol.
    fn shift(&self, measured: &Measured) -> Shift {
        let of = |side: Side, edge: Option<Quantity>| {
            let (_, computed) = self.bands.side(side);
            let moved = |x: f64| x - computed;
            edge.map(|edge| Quantity {
                value: moved(edge.value),
                lower: edge.lower.map(moved),
                upper: edge.upper.map(moved),
                ..edge
            })
        };
        Shift {
            valence: of(Side::Valence, measured.valence_edge),
            conduction: of(Side::Conduction, measured.conduction_edge),
        }
    }

    fn verdict(&self, compared: Option<f64>, expanded: &Expanded, cautions: &[Caution]) -> Verdict {
        match compared {
            Some(difference) => verdict(Grounds {
                difference,
                expanded,
                tolerance: self.study.comparison.tolerance,
                computed_stated: !self.study.computed.uncertainty.is_empty(),
                energies: self.study.computed.energies,
                cautions,
            }),
            None => Verdict {
                agrees: None,
                statement: format!("No verdict: {}.", self.why_no_difference()),
            },
        }
    }

    fn why_no_difference(&self) -> String {
        let why = if self.sides.len() < 2 {
            "a gap needs both photoemission and inverse photoemission; the study names one of them"
        } else if !self.is_tied() {
            return self.what_is_not_tied();
        } else {
            "the headline protocol found no edge on one of the sides"
        };
        why.to_owned()
    }

    /// Which of two sides lacks a reference, or that they have different ones.
    fn what_is_not_tied(&self) -> String {
        let untied = self
            .sides
            .iter()
            .filter(|side| side.scale.reference == Reference::Unknown);
        let names: Vec<&str> = untied.map(|side| side.side.technique()).collect();
        if names.is_empty() {
            let each = self.sides.iter().map(|side| {
                format!(
                    "{} counts from {}",
                    side.side.technique(),
                    side.scale.reference
                )
            });
            return format!(
                "the two sides have no common reference ({}); give the Fermi edge of a metal \
                 (fermi_edge) for each",
                each.collect::<Vec<_>>().join(", ")
            );
        }
        format!(
            "nothing ties the energies of {} to a reference; state reference = \"fermi\" there if \
             they count from the Fermi level, or give the Fermi edge of a metal (fermi_edge)",
            names.join(" and of ")
        )
    }

    fn steps(&self, provenance: &mut Provenance) {
        for correction in &self.study.corrections {
            provenance.step(
                format!("correction {}", correction.name),
                format!(
                    "{} eV on the computed gap",
                    correction.sign * correction.stated.value
                ),
            );
        }
        for side in self.sides {
            let fit = &side.fit;
            let variance = fit.shift_uncertainty();
            provenance.step(
                format!("fit of the {} edge", side.side.name()),
                format!(
                    "{} to {} eV, {} channels, {}: shift {} eV",
                    rounded(fit.window.start, 0.1),
                    rounded(fit.window.stop, 0.1),
                    fit.channels,
                    side.curve.statistics,
                    rounded(fit.shift, variance)
                ),
            );
        }
    }

    fn curves(&self) -> Curves {
        let drawn = self.sides.iter().map(|side| {
            let (levels, _) = self.bands.side(side.side);
            drawn(side, levels)
        });
        let (sides, densities) = drawn.unzip();
        Curves { sides, densities }
    }
}
