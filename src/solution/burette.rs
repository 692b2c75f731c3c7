//! A sample under the burette: its pH at any volume of titrant.

use crate::equilibrium::{Solver, Start, System, Total};
use crate::problem::{Composition, Ingredient, Input, InputId, MadeUp, SolutionPortion, Titration};
use crate::quantity::{Decimal, Measured, Unit};
use crate::solution::Unsolvable;
use crate::solution::answer::CurvePoint;
use crate::solution::assembly::Assembly;
use crate::solution::conclusion::Bench;
use crate::solution::search::root;
use crate::solution::tape::VariableIndex;
use std::sync::Arc;

/// The identity of the volume of titrant that was added.
fn added_id() -> InputId {
    InputId::new("titrant").within("volume added")
}

/// Sample and titrant poured together, the volume of titrant left open.
#[derive(Debug)]
pub(super) struct Titrated {
    pub(super) assembly: Assembly,
    pub(super) index: VariableIndex,
    /// Volume of the sample in L.
    pub(super) sample_volume: f64,
}

impl Titrated {
    /// The mixture of a titration; `titrant` may differ from the task's, with what a fit supposes in it.
    ///
    /// # Errors
    /// [`Unsolvable::NoVolume`] where the sample has none, and as assembling does.
    pub(super) fn of(
        bench: &Bench<'_>,
        task: &Titration,
        titrant: &Composition,
    ) -> Result<Self, Unsolvable> {
        let sample = bench.assemble(&task.sample)?;
        let worked = sample.recipe.tape.evaluate(&sample.stated());
        let none = || Unsolvable::NoVolume {
            input: InputId::new("sample"),
        };
        let volume = sample.recipe.volume_of(&worked);
        let sample_volume = volume.filter(|volume| *volume > 0.0).ok_or_else(none)?;
        let millilitres = |id: InputId, litres: f64| {
            Measured::new(Decimal::shortest(1e3 * litres), Unit::Millilitre)
                .map(|measured| Input::new(id, measured))
                .ok_or_else(none)
        };
        let portion = |volume, composition: &Composition| {
            Ingredient::Solution(SolutionPortion {
                volume,
                reference: None,
                composition: Arc::new(composition.clone()),
            })
        };
        let sample_input = match &task.sample.made_up {
            MadeUp::To(volume) => volume.clone(),
            MadeUp::SumOfPortions | MadeUp::Unstated => {
                millilitres(InputId::new("sample").within("volume"), sample_volume)?
            }
        };
        let mixture = Composition {
            made_up: MadeUp::SumOfPortions,
            ingredients: vec![
                portion(sample_input, &task.sample),
                portion(millilitres(added_id(), 0.001)?, titrant),
            ],
        };
        let assembly = bench.assemble(&mixture)?;
        let index = assembly.variable(&added_id()).ok_or_else(none)?;
        Ok(Self {
            assembly,
            index,
            sample_volume,
        })
    }
}

/// A titration at work: one solver that starts each point from the last.
#[derive(Debug)]
pub(super) struct Burette<'a> {
    assembly: &'a Assembly,
    index: VariableIndex,
    solver: Solver<'a>,
    values: Vec<Total>,
    last: Option<Start>,
}

impl<'a> Burette<'a> {
    /// Over a tableau of the shape of the titrated assembly, at values of its variables.
    pub(super) fn over(titrated: &'a Titrated, system: &'a System, values: Vec<Total>) -> Self {
        Self {
            assembly: &titrated.assembly,
            index: titrated.index,
            solver: Solver::new(system),
            values,
            last: None,
        }
    }

    /// As stated.
    pub(super) fn stated(titrated: &'a Titrated) -> Self {
        let values = titrated.assembly.stated();
        Self::over(titrated, &titrated.assembly.system, values)
    }

    fn set(&mut self, volume: f64) {
        if let Some(place) = self.values.get_mut(self.index.place()) {
            *place = Total::from_f64(volume);
        }
    }

    /// pH at a volume of titrant in L.
    ///
    /// # Errors
    /// [`Unsolvable::Uncertified`].
    pub(super) fn ph(&mut self, volume: f64) -> Result<f64, Unsolvable> {
        self.set(volume);
        let (ph, start) = self
            .assembly
            .ph(&mut self.solver, &self.values, self.last)
            .or_else(|_error| self.assembly.ph(&mut self.solver, &self.values, None))?;
        self.last = Some(start);
        Ok(ph)
    }

    /// pH and slope at a volume of titrant in L; the point itself is in mL.
    ///
    /// # Errors
    /// [`Unsolvable::Uncertified`].
    pub(super) fn point(&mut self, volume: f64) -> Result<CurvePoint, Unsolvable> {
        self.set(volume);
        let solved = self.assembly.solve(&self.values)?;
        let (gradient, _) = self.assembly.gradient(&solved);
        let by_litre = gradient.get(self.index.place()).copied().unwrap_or(0.0);
        Ok(CurvePoint {
            volume_ml: 1e3 * volume,
            ph: solved.certified.ph(),
            slope: 1e-3 * by_litre,
        })
    }

    /// The volume in L, between two, at which the pH is a target; `None` where it is not passed there.
    ///
    /// # Errors
    /// [`Unsolvable::Uncertified`].
    pub(super) fn volume_at(
        &mut self,
        target: f64,
        (from, to): (f64, f64),
    ) -> Result<Option<f64>, Unsolvable> {
        let at = (self.ph(from)? - target, self.ph(to)? - target);
        if at.0.signum() * at.1.signum() > 0.0 {
            return Ok(None);
        }
        root((from, to), at, |volume| Ok(self.ph(volume)? - target)).map(Some)
    }
}
