//! What templates see: a documented contract, versioned, apart from the types of an answer.
//!
//! Numbers are unrounded; a template chooses a filter (`ph`, `shift`, `uncertainty`, `sig`, `places`, `percent`, `unrounded`, `subscript`).
//! Texts are plain; they are escaped when printed. What does not apply is `none` or an empty list, never missing. A change that could
//! break a template raises [`VERSION`].

mod conditions;
mod constants;
mod judgement;
mod preparation;
mod state;
mod titration;
mod uncertainty;

use crate::problem::{Problem, Statement};
use crate::report::figures::Figures;
use crate::report::headline;
use crate::report::plot::Plot;
use crate::report::working::Working;
use crate::solution::answer::{Answer, Outcome};
use serde::Serialize;

/// Version of the contract.
const VERSION: u32 = 1;

/// Everything that a template may print.
#[derive(Debug, Serialize)]
pub(super) struct View {
    /// Version of this contract.
    #[serde(rename = "view")]
    pub(super) version: u32,
    /// The block's label.
    pub(super) label: String,
    /// The task's name.
    pub(super) task: &'static str,
    /// The record's line: the answer in one line.
    pub(super) result: String,
    /// Temperature, model, air.
    pub(super) conditions: conditions::ConditionsView,
    /// The solution that the task ends in.
    pub(super) state: state::StateView,
    /// Of a preparation.
    pub(super) preparation: Option<preparation::PreparationView>,
    /// Of an adjustment.
    pub(super) adjustment: Option<preparation::AdjustmentView>,
    /// Of a mixing.
    pub(super) mixing: Option<preparation::MixingView>,
    /// Of a titration.
    pub(super) titration: Option<titration::TitrationView>,
    /// The uncertainty budget.
    pub(super) budget: Option<uncertainty::BudgetView>,
    /// The simulation.
    pub(super) simulation: Option<uncertainty::SimulationView>,
    /// The shortcuts that bear on this solution.
    pub(super) shortcuts: Vec<judgement::ShortcutView>,
    /// Whether a recorded hand value stands.
    pub(super) hand_value: Option<judgement::HandValueView>,
    /// The reading beside the computed value.
    pub(super) comparison: Option<judgement::ComparisonView>,
    /// Stated assumptions and what each costs.
    pub(super) assumptions: Vec<judgement::AssumptionView>,
    /// Cautions.
    pub(super) cautions: Vec<judgement::CautionView>,
    /// Constants with their sources.
    pub(super) constants: constants::ConstantsView,
    /// The balances, term by term.
    pub(super) working: Working,
    /// The plots beside the page.
    pub(super) plots: Vec<PlotView>,
    /// What was stated besides the chemistry.
    pub(super) annotations: AnnotationsView,
}

/// A plot beside the page.
#[derive(Debug, Serialize)]
pub(super) struct PlotView {
    /// Its kind: `curve`, `residuals`, `distribution`.
    pub(super) kind: &'static str,
    /// Its file name; safe in a link.
    pub(super) file_name: String,
    /// What it shows, in a sentence, for those who do not see it.
    pub(super) alt: String,
}

/// What goes into the record as written.
#[derive(Debug, Serialize)]
pub(super) struct AnnotationsView {
    /// Procedure and revision.
    pub(super) method: Option<String>,
    /// Balances, pipettes, meters.
    pub(super) equipment: Vec<String>,
    /// Free text.
    pub(super) notes: Option<String>,
    /// Substances with their lots and expiry dates.
    pub(super) lots: Vec<conditions::LotView>,
}

impl View {
    /// The view of an answer.
    pub(super) fn of(statement: &Statement, answer: &Answer, plots: &[Plot]) -> Self {
        let figures = Figures::new(statement.reporting);
        let reporting = statement.reporting;
        let mut view = Self {
            version: VERSION,
            label: statement.label.as_str().to_owned(),
            task: statement.problem.task(),
            result: headline::record_line(statement, answer),
            conditions: conditions::ConditionsView::of(statement, answer),
            state: state::StateView::of(&answer.state),
            preparation: None,
            adjustment: None,
            mixing: None,
            titration: None,
            budget: answer
                .budget
                .as_ref()
                .map(|budget| uncertainty::BudgetView::of(figures, budget)),
            simulation: answer
                .simulation
                .as_ref()
                .map(uncertainty::SimulationView::of),
            shortcuts: judgement::shortcuts(&answer.shortcuts),
            hand_value: answer.hand_value.as_ref().map(judgement::HandValueView::of),
            comparison: answer
                .comparison
                .as_ref()
                .map(judgement::ComparisonView::of),
            assumptions: judgement::assumptions(&answer.assumptions),
            cautions: judgement::cautions(&answer.cautions),
            constants: constants::ConstantsView::of(
                statement.conditions.pkw.as_ref(),
                &answer.constants,
            ),
            working: Working::of(reporting, answer),
            plots: plots.iter().map(PlotView::of).collect(),
            annotations: AnnotationsView::of(statement),
        };
        view.add_outcome(figures, statement, answer);
        view
    }

    fn add_outcome(&mut self, figures: Figures, statement: &Statement, answer: &Answer) {
        match &answer.outcome {
            Outcome::Speciation => {}
            Outcome::Preparation(made) => {
                self.preparation = Some(preparation::PreparationView::of(
                    figures, statement, answer, made,
                ));
            }
            Outcome::Adjustment(adjusted) => {
                self.adjustment = Some(preparation::AdjustmentView::of(
                    figures, statement, adjusted,
                ));
            }
            Outcome::Mixing(mixed) => self.mixing = Some(preparation::MixingView::of(mixed)),
            Outcome::Titration(titrated) => {
                let readings = match &statement.problem {
                    Problem::Titration(asked) => asked.readings.as_ref(),
                    _ => None,
                };
                self.titration = Some(titration::TitrationView::of(figures, titrated, readings));
            }
        }
    }
}

impl PlotView {
    fn of(plot: &Plot) -> Self {
        Self {
            kind: plot.kind,
            file_name: plot.attachment.file_name.clone(),
            alt: plot.description.clone(),
        }
    }
}

impl AnnotationsView {
    fn of(statement: &Statement) -> Self {
        let annotations = &statement.annotations;
        Self {
            method: annotations.method.clone(),
            equipment: annotations.equipment.clone(),
            notes: annotations.notes.clone(),
            lots: conditions::lots(statement),
        }
    }
}
