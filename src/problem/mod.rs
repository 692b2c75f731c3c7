//! What is asked, in types.
//!
//! A [`Statement`] is one `equilibrium` block after reading: every amount has its dimension, every substance is found,
//! every default is filled in and remembers where it came from. This module knows no text positions (an input has an
//! [`InputId`]), no Markdown and no numerics.

mod adjustment;
mod composition;
mod conditions;
mod input;
mod mixing;
mod preparation;
mod speciation;
mod statement;
mod titration;

pub use adjustment::{Adjustment, AdjustmentGoal};
pub use composition::{
    Composition, Content, ContentAmount, Corrections, Ingredient, MadeUp, SolutionPortion,
    SolutionReference, Strength, Taken, Trace,
};
pub use conditions::{
    Acceptance, ActivityChoice, Air, Conditions, Origin, Stated, UncertaintyMode,
};
pub use input::{Input, InputId};
pub use mixing::{DilutionSeries, Mixing};
pub use preparation::{
    BufferChoice, IonicStrengthTarget, Preparation, PreparationTarget, Readability, Source,
    SourceKind, Weighed,
};
pub use speciation::Speciation;
pub use statement::{
    AcceptanceLimit, Annotations, HandValue, Label, LabelError, MeasuredReading, Problem,
    Reporting, ShortcutName, Statement,
};
pub use titration::{FitParameter, Readings, ReadingsPoint, Signal, Titration};
