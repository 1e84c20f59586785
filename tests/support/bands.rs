//! Invented bands: tight-binding cosines with random parameters.
//!
//! A band is `E(k) = c + sum_i a_i x_i + b (x_1 x_2 + x_2 x_3 + x_3 x_1)` with `x_i = cos 2 pi k_i`
//! and `k_i` in [0, 1). It is linear in every `x_i` by itself, so that its extrema stand at the
//! eight points whose `k_i` are 0 or 1/2, and the true edges are known without a search.

use rand::Rng;
use rand_chacha::ChaCha8Rng;

/// A k-point in units of the reciprocal lattice vectors.
pub type KPoint = [f64; 3];

/// The eight points at which a band can have its extremum.
pub const CORNERS: [KPoint; 8] = [
    [0.0, 0.0, 0.0],
    [0.5, 0.0, 0.0],
    [0.0, 0.5, 0.0],
    [0.0, 0.0, 0.5],
    [0.5, 0.5, 0.0],
    [0.5, 0.0, 0.5],
    [0.0, 0.5, 0.5],
    [0.5, 0.5, 0.5],
];

#[derive(Debug, Clone)]
struct Band {
    centre: f64,
    first: [f64; 3],
    second: f64,
}

impl Band {
    fn random(rng: &mut ChaCha8Rng, centre: f64) -> Self {
        let mut amplitude = || {
            let size = rng.random_range(0.10..0.55);
            if rng.random_bool(0.5) { size } else { -size }
        };
        Self {
            centre,
            first: [amplitude(), amplitude(), amplitude()],
            second: rng.random_range(-0.12..0.12),
        }
    }

    fn energy(&self, k: KPoint) -> f64 {
        let [x, y, z] = k.map(|component| (std::f64::consts::TAU * component).cos());
        let first = self.first[0] * x + self.first[1] * y + self.first[2] * z;
        self.centre + first + self.second * (x * y + y * z + z * x)
    }
}

/// Occupied and empty bands on the true energy scale, `E - E_F`.
#[derive(Debug, Clone)]
pub struct Bands {
    occupied: Vec<Band>,
    empty: Vec<Band>,
    /// Where the highest occupied level stands.
    pub valence_k: KPoint,
    /// Where the lowest empty level stands.
    pub conduction_k: KPoint,
}

impl Bands {
    /// Five to seven occupied and four to six empty bands with their edges at the given energies.
    pub fn random(rng: &mut ChaCha8Rng, valence_edge: f64, conduction_edge: f64) -> Self {
        let mut occupied = random_group(rng, 5..=7, -1.0);
        let mut empty = random_group(rng, 4..=6, 1.0);
        let valence_k = move_edge(&mut occupied, valence_edge, -1.0);
        let conduction_k = move_edge(&mut empty, conduction_edge, 1.0);
        Self {
            occupied,
            empty,
            valence_k,
            conduction_k,
        }
    }

    /// Energies of the occupied levels at a k-point, lowest first.
    pub fn occupied(&self, k: KPoint) -> Vec<f64> {
        sorted(&self.occupied, k)
    }

    /// Energies of the empty levels at a k-point, lowest first.
    pub fn empty(&self, k: KPoint) -> Vec<f64> {
        sorted(&self.empty, k)
    }
}

/// Bands with their centres spread over 5.5 eV away from an edge at about zero: downwards for a
/// `direction` of -1, upwards for 1.
fn random_group(
    rng: &mut ChaCha8Rng,
    count: std::ops::RangeInclusive<usize>,
    direction: f64,
) -> Vec<Band> {
    let count = rng.random_range(count);
    (0..count)
        .map(|_| {
            let centre = direction * rng.random_range(0.0..5.5);
            Band::random(rng, centre)
        })
        .collect()
}

/// Moves a group of bands so that the extremum nearest the gap is at `edge`; gives its k-point.
fn move_edge(bands: &mut [Band], edge: f64, direction: f64) -> KPoint {
    let (extremum, k) = CORNERS
        .iter()
        .flat_map(|&k| {
            bands
                .iter()
                .map(move |band| (direction * band.energy(k), k))
        })
        .min_by(|one, other| one.0.total_cmp(&other.0))
        .expect("there are bands");
    for band in bands {
        band.centre += edge - direction * extremum;
    }
    k
}

fn sorted(bands: &[Band], k: KPoint) -> Vec<f64> {
    let mut energies: Vec<f64> = bands.iter().map(|band| band.energy(k)).collect();
    energies.sort_by(f64::total_cmp);
    energies
}
