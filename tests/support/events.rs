//! Counting experiments, one electron at a time: no profile function and no transform.
//!
//! The number of primary events is drawn from a Poisson law. Each picks a level, adds a Gaussian and a
//! Cauchy deviate, and is counted in the channel that it falls into. Every primary event at energy e
//! makes secondary events by a Poisson process of `step` events per eV, uniform over the energies of
//! the recorded range below e (above e in inverse photoemission). Independent Poisson processes add up
//! to one, so the secondary events of a channel are drawn in one go: their number is Poisson with
//! `step` times the summed overlaps of the channel with the reaches of the primary events that
//! happened. A constant dark rate is Poisson in each channel.

use rand::Rng;
use rand_chacha::ChaCha8Rng;
use rand_distr::{Cauchy, Distribution, Normal, Poisson};

/// Full width of a Gaussian at half its maximum, in standard deviations: 2 sqrt(2 ln 2).
const FWHM_IN_SIGMA: f64 = 2.354_820_045_030_949_3;

/// Equal channels along an energy axis. Channel `i` holds energies within half a step of its centre.
#[derive(Debug, Clone, Copy)]
pub struct Channels {
    /// The centre of channel 0.
    pub first: f64,
    pub step: f64,
    pub count: usize,
}

impl Channels {
    /// Channels over a range; the centres are whole multiples of the step.
    pub fn over(low: f64, high: f64, step: f64) -> Self {
        let (first, last) = ((low / step).round(), (high / step).round());
        Self {
            first: first * step,
            step,
            count: (last - first) as usize + 1,
        }
    }

    pub fn centre(&self, index: usize) -> f64 {
        self.first + index as f64 * self.step
    }

    /// The place of an energy in steps from the lower end of channel 0.
    fn place(&self, energy: f64) -> f64 {
        (energy - self.first) / self.step + 0.5
    }
}

/// To which side of a primary event its secondary events lie.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Secondaries {
    Below,
    Above,
}

/// The widths that an event is displaced by, full widths in eV.
#[derive(Debug, Clone, Copy)]
#[allow(clippy::struct_field_names)] // the postfix says which width
pub struct Widths {
    pub instrument_fwhm: f64,
    pub sample_gaussian_fwhm: f64,
    pub sample_lorentzian_fwhm: f64,
}

/// What is counted besides the primary events.
#[derive(Debug, Clone, Copy)]
pub struct Background {
    /// Dark counts a channel.
    pub constant: f64,
    /// Secondary events per primary event and eV.
    pub step: f64,
    pub side: Secondaries,
}

/// Draws from a Poisson law; a mean of zero gives zero.
pub fn poisson(rng: &mut ChaCha8Rng, mean: f64) -> f64 {
    Poisson::new(mean).map_or(0.0, |law| law.sample(rng))
}

pub fn normal(rng: &mut ChaCha8Rng, mean: f64, standard_deviation: f64) -> f64 {
    Normal::new(mean, standard_deviation)
        .expect("a finite deviation")
        .sample(rng)
}

/// Counts of a spectrum. `levels` are equally likely energies on the recorded axis; `peak` is about
/// how many primary events the highest channel gets before broadening.
pub fn spectrum(
    rng: &mut ChaCha8Rng,
    levels: &[f64],
    channels: Channels,
    widths: Widths,
    background: Background,
    peak: f64,
) -> Vec<u64> {
    let mean_events = peak / largest_share(levels, channels.step);
    // The sum of two Gaussian deviates, instrument and sample, is one of the summed variance.
    let fwhm = widths.instrument_fwhm.hypot(widths.sample_gaussian_fwhm);
    let gaussian = Normal::new(0.0, fwhm / FWHM_IN_SIGMA).expect("a width");
    let lifetime = Cauchy::new(0.0, widths.sample_lorentzian_fwhm / 2.0).expect("a width");
    let mut counted = Counted::new(channels, background.side);
    for _ in 0..poisson(rng, mean_events) as u64 {
        let level = levels[rng.random_range(0..levels.len())];
        counted.primary(level + gaussian.sample(rng) + lifetime.sample(rng));
    }
    counted.with_background(rng, background)
}

/// The Fermi edge of a metal: a band whose density falls by `slope` per eV relative to its value at
/// the edge, occupied by the Fermi function of `thermal_energy`, between `depth` below the edge and 16
/// thermal energies above it. `height` is the mean count of a channel just below the edge.
pub struct MetalEdge {
    pub edge: f64,
    pub thermal_energy: f64,
    pub slope: f64,
    pub depth: f64,
    pub instrument_fwhm: f64,
    pub height: f64,
    pub constant: f64,
}

impl MetalEdge {
    pub fn counts(&self, rng: &mut ChaCha8Rng, channels: Channels) -> Vec<u64> {
        let instrument = Normal::new(0.0, self.instrument_fwhm / FWHM_IN_SIGMA).expect("a width");
        let (low, high) = (-self.depth, 16.0 * self.thermal_energy);
        let ceiling = 1.0 + self.slope.abs() * self.depth.max(high);
        let tries = self.height / channels.step * (high - low) * ceiling;
        let mut counted = Counted::new(channels, Secondaries::Below);
        for _ in 0..poisson(rng, tries) as u64 {
            let energy = rng.random_range(low..high);
            let occupied = 1.0 / ((energy / self.thermal_energy).exp() + 1.0);
            if rng.random_range(0.0..ceiling) < (1.0 - self.slope * energy) * occupied {
                counted.primary(self.edge + energy + instrument.sample(rng));
            }
        }
        let dark_only = Background {
            constant: self.constant,
            step: 0.0,
            side: Secondaries::Below,
        };
        counted.with_background(rng, dark_only)
    }
}

/// The largest share of the levels that falls into one step, seen in bins of about 0.2 eV.
fn largest_share(levels: &[f64], step: f64) -> f64 {
    let width = 0.2;
    let mut bins = std::collections::BTreeMap::new();
    for level in levels {
        *bins.entry((level / width).floor() as i64).or_insert(0.0) += 1.0;
    }
    let largest = bins.into_values().fold(0.0, f64::max);
    largest / levels.len() as f64 * step / width
}

/// Primary events as they come in.
struct Counted {
    channels: Channels,
    side: Secondaries,
    primary: Vec<u64>,
    /// Per channel, summed over its primary events: the part of the channel, in steps, that lies on
    /// the secondaries' side of the event.
    partial: Vec<f64>,
    /// Primary events past the end of the range from which their secondaries reach all of it.
    beyond: u64,
}

impl Counted {
    fn new(channels: Channels, side: Secondaries) -> Self {
        Self {
            channels,
            side,
            primary: vec![0; channels.count],
            partial: vec![0.0; channels.count],
            beyond: 0,
        }
    }

    fn primary(&mut self, energy: f64) {
        let place = self.channels.place(energy);
        let past_top = place >= self.channels.count as f64;
        if place < 0.0 || past_top {
            self.beyond += u64::from(past_top == (self.side == Secondaries::Below));
            return;
        }
        let index = place as usize;
        self.primary[index] += 1;
        let below = place - index as f64;
        self.partial[index] += match self.side {
            Secondaries::Below => below,
            Secondaries::Above => 1.0 - below,
        };
    }

    fn with_background(&self, rng: &mut ChaCha8Rng, background: Background) -> Vec<u64> {
        let count = self.channels.count;
        let mut counts = vec![0; count];
        let mut reaching = self.beyond as f64;
        for walked in 0..count {
            let index = match self.side {
                Secondaries::Below => count - 1 - walked,
                Secondaries::Above => walked,
            };
            let overlap = (reaching + self.partial[index]) * self.channels.step;
            let mean = background.constant + background.step * overlap;
            counts[index] = self.primary[index] + poisson(rng, mean) as u64;
            reaching += self.primary[index] as f64;
        }
        counts
    }
}
