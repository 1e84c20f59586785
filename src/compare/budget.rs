//! The uncertainty budget, after the GUM (JCGM 100:2008).
//!
//! A cause moves the measured valence edge by v, the conduction edge by c and the computed gap by g,
//! each a signed standard uncertainty. It then moves the measured gap by c - v and the difference
//! computed minus measured by g - (c - v): what is shared is propagated jointly. Causes are
//! independent of each other, so their squares add (GUM 5.1.2). Effective degrees of freedom follow
//! Welch and Satterthwaite, `nu_eff` = u^4 / sum `u_i`^4 / `nu_i` (GUM G.4.1), and the coverage factor
//! is Student's for 95 %.

use statrs::distribution::{ContinuousCDF, StudentsT};

use crate::schema::{BudgetRow, Evaluation, Expanded, Quantity, Side};

/// Degrees of freedom from which a Student is a Gaussian.
const MANY: f64 = 1e6;

/// One cause of uncertainty.
#[derive(Debug, Clone, PartialEq)]
pub struct Cause {
    name: String,
    identity: String,
    evaluation: Evaluation,
    valence: f64,
    conduction: f64,
    computed: f64,
    correction: f64,
    /// The standard uncertainty of the gap, where the two edges are neither independent nor bound.
    joint_gap: Option<f64>,
    degrees_of_freedom: Option<f64>,
    stated: bool,
    basis: String,
}

impl Cause {
    fn new(name: String, uncertainty: Option<f64>, basis: String) -> Self {
        Self {
            identity: name.clone(),
            name,
            evaluation: Evaluation::B,
            valence: 0.0,
            conduction: 0.0,
            computed: 0.0,
            correction: 0.0,
            joint_gap: None,
            degrees_of_freedom: None,
            stated: uncertainty.is_some(),
            basis,
        }
    }

    /// A cause that moves one measured edge; `None` where its uncertainty is not stated.
    #[must_use]
    pub fn of_edge(name: String, side: Side, uncertainty: Option<f64>, basis: String) -> Self {
        let mut cause = Self::new(name, uncertainty, basis);
        match side {
            Side::Valence => cause.valence = uncertainty.unwrap_or(0.0),
            Side::Conduction => cause.conduction = uncertainty.unwrap_or(0.0),
        }
        cause
    }

    /// A cause that moves the computed gap.
    #[must_use]
    pub fn of_computed_gap(name: String, uncertainty: Option<f64>, basis: String) -> Self {
        let mut cause = Self::new(name, uncertainty, basis);
        cause.computed = uncertainty.unwrap_or(0.0);
        cause
    }

    /// A cause that moves what is added to the computed gap.
    #[must_use]
    pub fn of_correction(name: String, uncertainty: Option<f64>, basis: String) -> Self {
        let mut cause = Self::new(name, uncertainty, basis);
        cause.correction = uncertainty.unwrap_or(0.0);
        cause
    }

    /// A cause that moves both edges with a covariance of its own.
    #[must_use]
    pub fn of_both_edges(
        name: String,
        valence: f64,
        conduction: f64,
        gap: f64,
        basis: String,
    ) -> Self {
        let mut cause = Self::new(name, Some(gap), basis);
        cause.valence = valence;
        cause.conduction = conduction;
        cause.joint_gap = Some(gap);
        cause
    }

    /// Names what this cause shares with others of the same identity: they move together.
    #[must_use]
    pub fn shared_as(self, identity: String) -> Self {
        Self { identity, ..self }
    }

    /// Evaluated by statistics, with so many degrees of freedom.
    #[must_use]
    pub fn by_statistics(self, degrees_of_freedom: f64) -> Self {
        Self {
            evaluation: Evaluation::A,
            degrees_of_freedom: (degrees_of_freedom < MANY).then_some(degrees_of_freedom),
            ..self
        }
    }

    /// The largest of its uncertainties.
    #[must_use]
    pub fn size(&self) -> f64 {
        self.valence
            .abs()
            .max(self.conduction.abs())
            .max(self.computed.abs())
    }

    fn gap(&self) -> f64 {
        self.joint_gap
            .unwrap_or((self.conduction - self.valence).abs())
    }

    fn difference(&self) -> f64 {
        self.corrected().hypot(self.gap())
    }

    fn corrected(&self) -> f64 {
        self.computed.hypot(self.correction)
    }

    fn row(&self) -> BudgetRow {
        BudgetRow {
            name: self.name.clone(),
            evaluation: self.evaluation,
            valence_edge_ev: self.valence.abs(),
            conduction_edge_ev: self.conduction.abs(),
            gap_ev: self.gap(),
            difference_ev: self.difference(),
            degrees_of_freedom: self.degrees_of_freedom,
            stated: self.stated,
            basis: self.basis.clone(),
        }
    }
}

/// All causes of one comparison.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Budget {
    causes: Vec<Cause>,
}

impl Budget {
    /// Adds a cause. One that shares its identity with an earlier one joins it.
    pub fn add(&mut self, cause: Cause) {
        let known = self
            .causes
            .iter_mut()
            .find(|c| c.identity == cause.identity);
        match known {
            Some(known) => {
                known.valence += cause.valence;
                known.conduction += cause.conduction;
                known.computed += cause.computed;
                known.name = cause.identity;
            }
            None => self.causes.push(cause),
        }
    }

    /// One row a cause.
    #[must_use]
    pub fn rows(&self) -> Vec<BudgetRow> {
        self.causes.iter().map(Cause::row).collect()
    }

    /// A measured edge with its combined uncertainty.
    #[must_use]
    pub fn edge(&self, side: Side, value: f64) -> Quantity {
        self.quantity(value, |cause| match side {
            Side::Valence => cause.valence,
            Side::Conduction => cause.conduction,
        })
    }

    /// The measured gap with its combined uncertainty.
    #[must_use]
    pub fn gap(&self, value: f64) -> Quantity {
        self.quantity(value, Cause::gap)
    }

    /// The computed gap with what is stated of it.
    #[must_use]
    pub fn computed_gap(&self, value: f64) -> Quantity {
        self.where_stated(value, |cause| cause.computed)
    }

    /// The computed gap with the study's corrections added.
    #[must_use]
    pub fn corrected_gap(&self, value: f64) -> Quantity {
        self.where_stated(value, Cause::corrected)
    }

    fn where_stated(&self, value: f64, part: impl Fn(&Cause) -> f64) -> Quantity {
        if self.causes.iter().any(|cause| part(cause) != 0.0) {
            self.quantity(value, part)
        } else {
            Quantity::unstated(value)
        }
    }

    /// The expanded uncertainty of the difference.
    #[must_use]
    pub fn difference(&self) -> Expanded {
        self.expanded(Cause::difference)
    }

    fn quantity(&self, value: f64, part: impl Fn(&Cause) -> f64) -> Quantity {
        let expanded = self.expanded(part);
        Quantity::new(value, expanded.standard_uncertainty_ev)
            .with_interval(expanded.expanded_uncertainty_ev)
    }

    fn expanded(&self, part: impl Fn(&Cause) -> f64) -> Expanded {
        let parts: Vec<(f64, Option<f64>)> = self
            .causes
            .iter()
            .map(|cause| (part(cause), cause.degrees_of_freedom))
            .collect();
        expand(&parts)
    }
}

/// Combines independent contributions, each with its degrees of freedom.
fn expand(parts: &[(f64, Option<f64>)]) -> Expanded {
    let variance: f64 = parts.iter().map(|(u, _)| u * u).sum();
    let slack: f64 = parts
        .iter()
        .map(|(u, nu)| nu.map_or(0.0, |nu| u.powi(4) / nu))
        .sum();
    let effective = (slack > 0.0)
        .then(|| variance * variance / slack)
        .filter(|nu| *nu < MANY);
    let factor = coverage_factor(effective);
    Expanded {
        standard_uncertainty_ev: variance.sqrt(),
        effective_degrees_of_freedom: effective,
        coverage_factor: factor,
        expanded_uncertainty_ev: factor * variance.sqrt(),
    }
}

/// Student's factor for 95 %; the degrees of freedom are cut to a whole number (GUM G.4.1 note 1).
fn coverage_factor(degrees_of_freedom: Option<f64>) -> f64 {
    let whole = degrees_of_freedom.map_or(MANY, |nu| nu.floor().max(1.0));
    StudentsT::new(0.0, 1.0, whole).map_or(1.96, |law| law.inverse_cdf(0.975))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_moves_both_edges_alike_leaves_the_gap() {
        let mut budget = Budget::default();
        for side in [Side::Valence, Side::Conduction] {
            let cause =
                Cause::of_edge(format!("edge of {side:?}"), side, Some(0.05), String::new());
            budget.add(cause.shared_as("one metal".to_owned()));
        }
        assert_eq!(budget.rows().len(), 1);
        assert!(budget.gap(1.0).uncertainty_or_zero() < 1e-15);
        assert!((budget.edge(Side::Valence, 0.0).uncertainty_or_zero() - 0.05).abs() < 1e-15);
    }

    /// GUM H.1: contributions 25, 9.7, 2.9, 16.6 nm with 18, 25.6, 50 and 2 degrees of freedom. The
    /// values are in `fixtures/published/gum_h1.csv`; the integration tests read them from there.
    #[test]
    fn combination_follows_the_guide() {
        let parts = [
            (25.0, Some(18.0)),
            (9.7, Some(25.6)),
            (2.9, Some(50.0)),
            (16.6, Some(2.0)),
        ];
        let combined = expand(&parts);
        assert!((combined.standard_uncertainty_ev - 31.7).abs() < 0.1);
        assert!((coverage_factor(Some(16.9)) - 2.119_905).abs() < 1e-5);
    }
}
