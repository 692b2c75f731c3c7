//! Equivalence points: by stoichiometry, and where the curve is steepest.

use crate::solution::Unsolvable;
use crate::solution::answer::{CurvePoint, EquivalencePoint};
use crate::solution::assembly::Assembly;
use crate::solution::burette::{Burette, Titrated};
use crate::substance::Component;

/// One place for a proton in a liquid: a step of a ligand, in mol/L.
#[derive(Clone, Debug)]
struct Site {
    ligand: String,
    /// The step, counted from 1.
    step: usize,
    pk: f64,
    /// Places in mol/L.
    places: f64,
    /// Places that hold a proton, in mol/L.
    filled: f64,
}

/// Protons of a liquid by their strength: places filled from the weakest acid up, and what is beyond all places.
#[derive(Clone, Debug)]
struct ProtonLevels {
    /// Strongest acid first.
    sites: Vec<Site>,
    /// Strong acid beyond all places (positive), or strong base (negative), in mol/L.
    excess: f64,
}

/// pK that divides what counts as acid from what counts as base in a titrant.
const DIVIDE: f64 = 7.0;

impl ProtonLevels {
    fn of(assembly: &Assembly) -> Self {
        let worked = assembly.recipe.tape.evaluate(&assembly.stated());
        let mut sites: Vec<Site> = Vec::new();
        for pk in &assembly.pks {
            let total = assembly
                .parts
                .iter()
                .filter(|part| !part.held)
                .find(|part| matches!(&part.component, Component::Ligand(ligand) if ligand.name == pk.ligand.name))
                .and_then(|part| Some(worked.at(part.concentration?).to_f64()));
            if let Some(places) = total.filter(|total| *total > 0.0) {
                sites.push(Site {
                    ligand: pk.ligand.name.clone(),
                    step: pk.step + 1,
                    pk: pk.found.value,
                    places,
                    filled: 0.0,
                });
            }
        }
        sites.sort_by(|a, b| a.pk.total_cmp(&b.pk));
        let mut protons = worked.at(assembly.recipe.protons).to_f64();
        for site in sites.iter_mut().rev() {
            site.filled = protons.clamp(0.0, site.places);
            protons -= site.filled;
        }
        Self {
            sites,
            excess: protons,
        }
    }

    /// Protons that a titrant takes up, in mol/L.
    fn as_base(&self) -> f64 {
        let free: f64 = self
            .sites
            .iter()
            .filter(|site| site.pk > DIVIDE)
            .map(|site| site.places - site.filled)
            .sum();
        free + (-self.excess).max(0.0)
    }

    /// Protons that a titrant gives off, in mol/L.
    fn as_acid(&self) -> f64 {
        let held: f64 = self
            .sites
            .iter()
            .filter(|site| site.pk < DIVIDE)
            .map(|site| site.filled)
            .sum();
        held + self.excess.max(0.0)
    }
}

/// What is complete at an equivalence point, and the amount of protons moved until then by volume of the sample, in mol/L.
fn stages(sample: &ProtonLevels, with_base: bool) -> Vec<(String, f64)> {
    let mut moved = 0.0;
    let mut stages = Vec::new();
    let mut push = |what: String, amount: f64| {
        if amount > 0.0 {
            moved += amount;
            stages.push((what, moved));
        }
    };
    if with_base {
        push("strong acid neutralised".to_owned(), sample.excess.max(0.0));
        for site in &sample.sites {
            push(
                format!("proton {} of {} taken", site.step, site.ligand),
                site.filled,
            );
        }
    } else {
        push(
            "strong base neutralised".to_owned(),
            (-sample.excess).max(0.0),
        );
        for site in sample.sites.iter().rev() {
            push(
                format!("{} protonated at step {}", site.ligand, site.step),
                site.places - site.filled,
            );
        }
    }
    stages
}

/// The equivalence points up to a volume in L.
///
/// # Errors
/// [`Unsolvable::Uncertified`].
pub(super) fn points(
    titrated: &Titrated,
    sample: &Assembly,
    titrant: &Assembly,
    curve: &[CurvePoint],
    to: f64,
) -> Result<Vec<EquivalencePoint>, Unsolvable> {
    let titrant = ProtonLevels::of(titrant);
    let (base, acid) = (titrant.as_base(), titrant.as_acid());
    let strength = base.max(acid);
    if strength <= 0.0 {
        return Ok(Vec::new());
    }
    let mut burette = Burette::stated(titrated);
    let mut points = Vec::new();
    for (what, moved) in stages(&ProtonLevels::of(sample), base >= acid) {
        let volume = moved * titrated.sample_volume / strength;
        if volume > to {
            break;
        }
        let point = burette.point(volume)?;
        points.push(EquivalencePoint {
            what,
            volume_ml: point.volume_ml,
            ph: point.ph,
            slope: point.slope,
            steepest_ml: None,
        });
    }
    steepest(&mut burette, &mut points, curve)?;
    Ok(points)
}

/// Gives each equivalence point the nearest place at which the slope is largest.
fn steepest(
    burette: &mut Burette<'_>,
    points: &mut [EquivalencePoint],
    curve: &[CurvePoint],
) -> Result<(), Unsolvable> {
    let mut maxima = Vec::new();
    for triple in curve.windows(3) {
        let [before, here, after] = triple else {
            continue;
        };
        let top = here.slope.abs();
        if top > before.slope.abs() && top >= after.slope.abs() {
            maxima.push(refined(burette, before.volume_ml, after.volume_ml)?);
        }
    }
    let volumes: Vec<f64> = points.iter().map(|point| point.volume_ml).collect();
    for (place, point) in points.iter_mut().enumerate() {
        let neighbour = |other: Option<&f64>| {
            other.map_or(f64::INFINITY, |other| (other - point.volume_ml).abs())
        };
        let before = place.checked_sub(1).and_then(|before| volumes.get(before));
        let room = neighbour(before).min(neighbour(volumes.get(place + 1)));
        let room = 0.5 * room.min(point.volume_ml);
        point.steepest_ml = maxima
            .iter()
            .copied()
            .filter(|volume| (volume - point.volume_ml).abs() < room)
            .min_by(|a, b| {
                let away = |volume: &f64| (volume - point.volume_ml).abs();
                away(a).total_cmp(&away(b))
            });
    }
    Ok(())
}

/// The volume in mL of the steepest slope between two, by golden section.
fn refined(burette: &mut Burette<'_>, from: f64, to: f64) -> Result<f64, Unsolvable> {
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    let (mut lower, mut upper) = (from, to);
    let mut slope =
        |volume: f64| -> Result<f64, Unsolvable> { Ok(burette.point(1e-3 * volume)?.slope.abs()) };
    let mut left = upper - GOLDEN * (upper - lower);
    let mut right = lower + GOLDEN * (upper - lower);
    let (mut at_left, mut at_right) = (slope(left)?, slope(right)?);
    for _ in 0..40 {
        if at_left > at_right {
            upper = right;
            (right, at_right) = (left, at_left);
            left = upper - GOLDEN * (upper - lower);
            at_left = slope(left)?;
        } else {
            lower = left;
            (left, at_left) = (right, at_right);
            right = lower + GOLDEN * (upper - lower);
            at_right = slope(right)?;
        }
    }
    Ok(0.5 * (lower + upper))
}
