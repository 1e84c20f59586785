//! The forms that the name of a column may have: for each kind of table the roles, the word that
//! each needs, and the words that it may have beside it.

use super::role::{Kind, Role};
use super::words::Tag;

/// A form of name: the role, the words it needs, and those it may have beside them.
pub(super) type Form = (Role, &'static [Tag], &'static [Tag]);

use Role as R;
use Tag as T;

const LEVELS: &[Form] = &[
    (R::KIndex, &[T::K], &[]),
    (R::KX, &[T::KX], &[]),
    (R::KY, &[T::KY], &[]),
    (R::KZ, &[T::KZ], &[]),
    (R::KDistance, &[T::Distance], &[T::K]),
    (R::Weight, &[T::Weight], &[T::K]),
    (
        R::BandEnergy,
        &[T::Band, T::Number],
        &[T::Energy, T::MeanField, T::Quasiparticle],
    ),
    (
        R::BandEnergy,
        &[T::Energy, T::Number],
        &[T::Band, T::MeanField, T::Quasiparticle],
    ),
    (
        R::BandEnergy,
        &[T::MeanField, T::Number],
        &[T::Band, T::Energy],
    ),
    (
        R::BandEnergy,
        &[T::Quasiparticle, T::Number],
        &[T::Band, T::Energy],
    ),
    (R::Band, &[T::Band], &[]),
    (R::Spin, &[T::Spin], &[]),
    (R::EnergyMeanField, &[T::MeanField], &[T::Energy]),
    (R::EnergyQuasiparticle, &[T::Quasiparticle], &[T::Energy]),
    (
        R::Correction,
        &[T::Correction],
        &[T::Quasiparticle, T::Energy],
    ),
    (R::Renormalization, &[T::Z], &[T::Quasiparticle]),
    (R::Exchange, &[T::SigmaX], &[T::Sigma, T::Energy]),
    (R::Exchange, &[T::Exchange], &[T::Sigma, T::Energy]),
    (R::Exchange, &[T::Sigma, T::X], &[]),
    (R::Correlation, &[T::SigmaC], &[T::Sigma, T::Energy]),
    (R::Correlation, &[T::Correlation], &[T::Sigma, T::Energy]),
    (R::Correlation, &[T::Sigma, T::C], &[]),
    (R::XcPotential, &[T::Vxc], &[T::Potential]),
    (R::XcPotential, &[T::Xc, T::Potential], &[]),
    (
        R::XcPotential,
        &[T::Exchange, T::Correlation, T::Potential],
        &[],
    ),
    (R::Occupation, &[T::Occupation], &[]),
    (R::Energy, &[T::Energy], &[]),
    // A bare `s` may be a spin and a bare `f` an occupation.
    (
        R::Projection,
        &[T::Orbital, T::Element],
        &[T::Projected, T::Weight],
    ),
    (R::Projection, &[T::Orbital, T::Projected], &[T::Weight]),
    (R::Projection, &[T::Element, T::Projected], &[T::Weight]),
    (R::Unit, &[T::Unit], &[T::Energy]),
];

const SPECTRUM: &[Form] = &[
    (R::Energy, &[T::Energy], &[]),
    (R::Energy, &[T::Kinetic], &[T::Energy]),
    (R::Energy, &[T::Binding], &[T::Energy]),
    (R::Energy, &[T::FinalState], &[T::Energy]),
    (R::Energy, &[T::Photon], &[T::Energy]),
    (
        R::Sweep,
        &[T::Sweep, T::Number],
        &[T::Intensity, T::Counts, T::Rate],
    ),
    (R::Intensity, &[T::Intensity], &[T::Counts, T::Rate]),
    (R::Intensity, &[T::Counts], &[T::Rate]),
    (
        R::StandardUncertainty,
        &[T::Uncertainty],
        &[T::Intensity, T::Counts],
    ),
];

const DENSITY: &[Form] = &[
    (R::Energy, &[T::Energy], &[]),
    (R::Energy, &[T::Kinetic], &[T::Energy]),
    (R::Energy, &[T::Binding], &[T::Energy]),
    (
        R::Projection,
        &[T::Orbital],
        &[
            T::Element,
            T::Projected,
            T::Density,
            T::Total,
            T::Spin,
            T::Direction,
        ],
    ),
    (
        R::Projection,
        &[T::Element],
        &[T::Projected, T::Density, T::Total, T::Number],
    ),
    (
        R::Projection,
        &[T::Direction],
        &[T::Density, T::Total, T::Spin],
    ),
    (R::Density, &[T::Total], &[T::Density]),
    (R::Density, &[T::Density], &[]),
];

const DISPERSION: &[Form] = &[
    (R::Momentum, &[T::K], &[]),
    (R::Momentum, &[T::KX], &[]),
    (
        R::StandardUncertainty,
        &[T::Uncertainty],
        &[T::Energy, T::Binding, T::Kinetic],
    ),
    (R::Energy, &[T::Energy], &[T::Peak]),
    (R::Energy, &[T::Peak], &[]),
    (R::Energy, &[T::Kinetic], &[T::Energy, T::Peak]),
    (R::Energy, &[T::Binding], &[T::Energy, T::Peak]),
    (R::Energy, &[T::FinalState], &[T::Energy, T::Peak]),
];

/// Words that say what a value is.
const VALUE: &[Tag] = &[
    T::Gap,
    T::Energy,
    T::Optical,
    T::Direct,
    T::Minimum,
    T::Quasiparticle,
    T::Transport,
    T::MeanField,
    T::Experiment,
];

const GAPS: &[Form] = &[
    (R::Material, &[T::Material], &[]),
    (R::Polymorph, &[T::Polymorph], &[T::Material]),
    (R::StartingPoint, &[T::StartingPoint], &[]),
    (R::Excitation, &[T::Excitation], &[T::Gap]),
    (R::Transition, &[T::K], &[T::Gap]),
    (
        R::StandardUncertainty,
        &[T::Uncertainty],
        &[T::Gap, T::Energy],
    ),
    (R::Method, &[T::Method], &[]),
    (R::Temperature, &[T::Temperature], &[]),
    (R::Origin, &[T::Origin], &[]),
    (R::Unit, &[T::Unit], &[T::Gap, T::Energy]),
    (R::Value, &[T::Gap], VALUE),
    (
        R::Value,
        &[T::Ionisation],
        &[
            T::Potential,
            T::Energy,
            T::MeanField,
            T::Quasiparticle,
            T::Experiment,
        ],
    ),
    (
        R::Value,
        &[T::Affinity],
        &[
            T::Potential,
            T::Energy,
            T::MeanField,
            T::Quasiparticle,
            T::Experiment,
        ],
    ),
    (R::Value, &[T::Quasiparticle], VALUE),
    (R::Value, &[T::MeanField], VALUE),
    (R::Value, &[T::Experiment], VALUE),
    (R::Value, &[T::Value], &[]),
];

const SERIES: &[Form] = &[
    (
        R::StandardUncertainty,
        &[T::Uncertainty],
        &[T::Gap, T::Energy],
    ),
    (R::Unit, &[T::Unit], &[T::Gap, T::Energy]),
    (R::Value, &[T::Gap], VALUE),
    (R::Value, &[T::Ionisation], &[T::Potential, T::Energy]),
    (R::Value, &[T::Affinity], &[T::Potential, T::Energy]),
    (R::Value, &[T::Correction], &[T::Quasiparticle]),
    (R::Value, &[T::Value], &[]),
    (
        R::Parameter,
        &[T::Parameter],
        &[T::Parameter, T::K, T::Band, T::Energy],
    ),
    (R::Parameter, &[T::K], &[]),
    (R::Parameter, &[T::Band], &[]),
];

/// The role of a name with these words.
pub(super) fn role(tags: &[Tag], kind: Kind) -> Option<Role> {
    let forms = match kind {
        Kind::Levels => LEVELS,
        Kind::Spectrum => SPECTRUM,
        Kind::Density => DENSITY,
        Kind::Dispersion => DISPERSION,
        Kind::Gaps => GAPS,
        Kind::Series => SERIES,
        Kind::Any => &[],
    };
    let fits = |&&(_, needed, beside): &&Form| {
        needed.iter().all(|tag| tags.contains(tag))
            && tags
                .iter()
                .all(|tag| *tag == Tag::Plain || needed.contains(tag) || beside.contains(tag))
    };
    forms.iter().find(fits).map(|&(role, ..)| role)
}
