//! Colours, line weights and text sizes. Blue and ochre stay apart for every common colour vision
//! and in grey (relative luminances near 0.08 and 0.33); nothing rests on colour alone.

use plotters::style::RGBColor;

use crate::schema::Side;

pub(super) const INK: RGBColor = RGBColor(28, 30, 34);
pub(super) const SOFT: RGBColor = RGBColor(96, 101, 110);
pub(super) const HAIR: RGBColor = RGBColor(196, 200, 207);
pub(super) const BAND: RGBColor = RGBColor(238, 240, 243);
pub(super) const PAPER: RGBColor = RGBColor(255, 255, 255);
pub(super) const RULE: RGBColor = RGBColor(247, 243, 232);

/// The colour of a side's points and name.
pub(super) const fn side(side: Side) -> RGBColor {
    match side {
        Side::Valence => RGBColor(31, 78, 146),
        Side::Conduction => RGBColor(201, 122, 22),
    }
}

/// The colour of a side's name, dark enough to read.
pub(super) const fn side_text(side: Side) -> RGBColor {
    match side {
        Side::Valence => RGBColor(31, 78, 146),
        Side::Conduction => RGBColor(150, 86, 8),
    }
}

/// The pale area of a side's computed density.
pub(super) const fn side_area(side: Side) -> RGBColor {
    match side {
        Side::Valence => RGBColor(214, 225, 241),
        Side::Conduction => RGBColor(248, 228, 200),
    }
}

/// Text sizes in units of the figure: 18 are 8.8 pt at 180 mm.
pub(super) const TITLE: f64 = 18.0;
pub(super) const LABEL: f64 = 17.0;
pub(super) const TICK: f64 = 15.5;
