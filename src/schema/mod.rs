//! The neutral documents: what every reader lowers to and every writer starts from.
//!
//! This room owns the shapes of the documents and of `result`, their provenance, and the trait by
//! which a position survives. It knows serde and nothing of files, formats or numerics. Arrays are
//! flat, one entry a row, in file order; energies are in eV and names end in the unit.

mod curves;
mod density;
mod dispersion;
mod finding;
mod gaps;
mod levels;
mod locate;
mod look;
mod named;
pub mod number;
mod provenance;
mod quantity;
mod result;
mod series;
mod spectrum;
mod texts;

pub use curves::{Curves, DensityCurve, Side, SideCurve};
pub use density::{Density, DensityKind};
pub use dispersion::Dispersion;
pub use finding::{Field, Finding, Severity};
pub use gaps::{Excitation, Gaps};
pub use levels::{Computation, Levels};
pub use locate::Locate;
pub use look::{Look, LookColumn, LookCondition, LookFile, LookOption, LookSkipped};
pub use named::Named;
pub use provenance::{Provenance, SourceRecord, Step};
pub use quantity::Quantity;
pub use result::{
    Alternative, BudgetRow, Caution, Computed, EdgeLocation, Evaluation, Expanded, FileRecord,
    FitRecord, Measured, ProtocolEdge, ProtocolRecord, ResultDocument, Shift, SpinGap, Verdict,
};
pub use series::Series;
pub use spectrum::{Conditions, IntensityKind, Spectrum};
pub use texts::Texts;

/// A document that carries its own name and version.
pub trait Document: serde::Serialize + serde::de::DeserializeOwned + schemars::JsonSchema {
    /// The kind, as in `bandrule/KIND/VERSION`.
    const KIND: &'static str;
    /// The version of the shape.
    const VERSION: u32 = 1;

    /// The lengths of the arrays that must be equal, with their names.
    #[must_use]
    fn lengths(&self) -> Vec<(&str, usize)> {
        Vec::new()
    }

    /// The text of the `schema` key.
    #[must_use]
    fn identifier() -> String {
        format!("bandrule/{}/{}", Self::KIND, Self::VERSION)
    }
}

/// The JSON Schema (2020-12) of a document, as it stands in `schemas/`.
#[must_use]
pub fn json_schema<T: Document>() -> serde_json::Value {
    let mut schema = schemars::generate::SchemaSettings::draft2020_12()
        .into_generator()
        .into_root_schema_for::<T>()
        .to_value();
    schema["properties"]["schema"]["const"] = serde_json::Value::from(T::identifier());
    schema
}
