//! The figures of regulators that are built up from single parts, solved as circuits.

mod bias;
mod breaking;
mod darlington;
mod exploring;
mod figures;
mod memory;
mod models;
mod parts;
mod place;
mod recipe;
mod rest;
mod series;
mod shunt;
mod stability;
mod start;

use std::rc::Rc;

use super::{Facts, Flag, Value};
use crate::board::SettingValue;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, read_amount};
use crate::recognize::{BuiltUp, ReferenceFeed, Regulator};
use crate::solve::{Goal, LINE_STEP, SolveError, USUAL_PHASE, Window, WindowKind};

pub(in crate::facts) use figures::DEFINITIONS;
pub(in crate::facts) use recipe::Recipe;
use start::Decides;
pub(in crate::facts) use start::Start;

/// Most circuits that are solved of one board: each takes up to seconds.
const MOST_CIRCUITS: usize = 200;
/// The ESR that stands for the least of a window with none in it, and for the largest of one without an upper end, ohms.
const NOWHERE: f64 = 30.0;

impl Facts<'_> {
    /// How a regulator is built up, where it is one of its own.
    fn own_circuit<'r>(&self, regulator: &'r Regulator) -> Option<&'r BuiltUp> {
        regulator.built_up.as_deref().filter(|built| !built.outboard)
    }

    /// The circuit at rest of a regulator with transistors, a packaged one with an outboard transistor among them.
    fn circuit_at_rest(&self, regulator: &Regulator) -> Option<Rc<Result<Recipe, Box<Evidence>>>> {
        let built = regulator.built_up.as_deref()?;
        Some(self.recipe_once(regulator.device, || {
            let before = self.design().regulators.iter().take_while(|one| !std::ptr::eq(*one, regulator));
            if before.filter(|one| one.built_up.is_some()).count() >= MOST_CIRCUITS {
                let why = format!(
                    "the board has more than {MOST_CIRCUITS} built-up regulators, of which no more are solved"
                );
                return Err(Box::new(Evidence::new(Grade::Assumed, self.about(regulator, "circuit"), why)));
            }
            self.recipe(regulator, built)
        }))
    }

    /// The circuit of a built-up regulator, made once; `None` for any other part.
    fn circuit_of(&self, regulator: &Regulator) -> Option<Rc<Result<Recipe, Box<Evidence>>>> {
        self.own_circuit(regulator)?;
        self.circuit_at_rest(regulator)
    }

    /// A figure that the circuit gives; what is missing for it is told.
    pub(super) fn solved_figure(
        &self,
        regulator: &Regulator,
        noun: &str,
        dimension: Dimension,
        solve: impl FnOnce(&Recipe) -> Result<Option<Quantity>, SolveError>,
    ) -> Value {
        if self.own_circuit(regulator).is_none() {
            return Value::inapplicable("not built up from single parts");
        }
        self.figure_at_rest(regulator, noun, dimension, solve)
    }

    /// The same, of a packaged regulator with an outboard transistor too.
    fn figure_at_rest(
        &self,
        regulator: &Regulator,
        noun: &str,
        dimension: Dimension,
        solve: impl FnOnce(&Recipe) -> Result<Option<Quantity>, SolveError>,
    ) -> Value {
        let Some(recipe) = self.circuit_at_rest(regulator) else {
            return Value::inapplicable("not built up from single parts");
        };
        let missing = |evidence| Value::Figure(Quantity::missing(dimension, limits(dimension), evidence));
        match &*recipe {
            Err(evidence) => missing((**evidence).clone()),
            Ok(recipe) => match solve(recipe) {
                Ok(Some(figure)) => Value::Figure(figure),
                Ok(None) => Value::inapplicable("there is no such loop"),
                Err(error) => missing(self.not_solved(regulator, noun, error.to_string())),
            },
        }
    }

    /// The output of a built-up regulator as solved, signed.
    pub(super) fn solved_output(&self, regulator: &Regulator) -> Option<Quantity> {
        let found = self.figure_at_rest(regulator, "output voltage", Dimension::VOLTAGE, |recipe| {
            recipe.output_voltage().map(Some)
        });
        found.figure().filter(|figure| !figure.is_missing()).cloned()
    }

    /// The dropout of a built-up regulator: at a load in amperes, or at its own load. Of a packaged one `None` where its
    /// circuit is not whole.
    pub(super) fn solved_dropout(&self, regulator: &Regulator, load: Option<f64>) -> Option<Value> {
        let outboard = regulator.built_up.as_ref()?.outboard;
        let noun = if load.is_some() { "dropout at light load" } else { "dropout" };
        let found = self.figure_at_rest(regulator, noun, Dimension::VOLTAGE, |recipe| recipe.dropout(load).map(Some));
        let known = found.figure().is_some_and(|figure| !figure.is_missing());
        (known || !outboard).then_some(found)
    }

    /// The whole range of the input, volts.
    fn whole_input(&self, regulator: &Regulator) -> (f64, f64) {
        let input = self.input_voltage(regulator).worst();
        (input.low(), input.high())
    }

    /// A tenth around the nominal input, within its range, volts.
    fn tenth_of_input(&self, regulator: &Regulator) -> (f64, f64) {
        let input = self.input_voltage(regulator);
        let nominal = input.nominal().unwrap_or(f64::NAN);
        let (one, other) = (nominal * (1.0 - LINE_STEP), nominal * (1.0 + LINE_STEP));
        (one.min(other).max(input.worst().low()), one.max(other).min(input.worst().high()))
    }

    fn line_change(&self, regulator: &Regulator, ends: fn(&Self, &Regulator) -> (f64, f64)) -> Value {
        let (low, high) = ends(self, regulator);
        if regulator.built_up.is_some() && !(low.is_finite() && high.is_finite()) {
            return Value::inapplicable("the range of the input is not known");
        }
        let found = self.figure_at_rest(regulator, "line change", Dimension::VOLTAGE, |recipe| {
            recipe.change_between(low, high).map(Some)
        });
        let missing = found.figure().is_some_and(Quantity::is_missing);
        if missing && self.own_circuit(regulator).is_none() {
            return Value::inapplicable("its circuit is not whole");
        }
        found
    }

    fn operating_points(&self, regulator: &Regulator) -> Value {
        self.solved_figure(regulator, "operating points", Dimension::ONE, |recipe| {
            let [nominal, declared, all] =
                recipe.count()?.map(|count| u32::try_from(count).map_or(f64::NAN, f64::from));
            let grade = if all > declared { Grade::Assumed } else { Grade::Drawn };
            let evidence =
                Evidence::new(grade, self.about(regulator, "operating points"), "every one that was found");
            let range = Range::clamped(nominal.min(declared), declared, all);
            let figure = Quantity::given(Dimension::ONE, range, Pair::NOT_NEGATIVE, evidence);
            Ok(Some(recipe.rests.iter().fold(figure, |figure, one| figure.also_resting_on(one))))
        })
    }

    /// What was found about its start, once.
    fn start_of(&self, regulator: &Regulator) -> Result<Rc<Start>, String> {
        let Some(recipe) = self.circuit_of(regulator) else {
            return Err("not built up from single parts".to_owned());
        };
        let recipe = match &*recipe {
            Ok(recipe) => recipe,
            Err(evidence) => return Err(format!("{}: {}", evidence.what, evidence.source)),
        };
        let built = self.own_circuit(regulator);
        let references: Vec<String> = built
            .into_iter()
            .flat_map(|built| &built.reference.devices)
            .map(|device| self.circuit().device(*device).reference.clone())
            .collect();
        let bootstrapped = built.is_some_and(|built| built.feed == Some(ReferenceFeed::Output));
        let found = self.start_once(regulator.device, || {
            let lifting = bootstrapped.then(|| recipe.lifting(&references));
            recipe.start(lifting.as_ref())
        });
        found.map_err(|error| error.to_string())
    }

    /// Whether the circuit could be solved for its start.
    pub(super) fn start_is_known(&self, regulator: &Regulator) -> bool {
        self.start_of(regulator).is_ok()
    }

    fn starts(&self, regulator: &Regulator) -> Value {
        let start = match self.start_of(regulator) {
            Ok(start) => start,
            Err(why) => return Value::inapplicable(why),
        };
        let recipe = self.circuit_of(regulator);
        let Some(Ok(recipe)) = recipe.as_deref() else { return Value::inapplicable("its circuit is not whole") };
        let ends = recipe.parameters.iter().take(2).map(|one| &one.quantity);
        let grades = recipe.rests.iter().chain(ends).filter_map(Quantity::grade);
        let grade = grades.fold(if start.guessed { Grade::Assumed } else { Grade::Drawn }, Grade::weaker);
        let source = match (start.starts, start.decides) {
            (true, Decides::Nothing) => "one operating point, which regulates".to_owned(),
            (true, decides) => format!("solved operating points; {} decides", decides.words()),
            (false, decides) => format!("a solved state that does not regulate; {} decides", decides.words()),
        };
        let mut evidence = Evidence::new(grade, self.about(regulator, "start"), source);
        if !grade.is_fact()
            && let Some(settle) =
                recipe.rests.iter().chain(recipe.offsets().map(|(_, offset)| offset)).find_map(|one| {
                    one.evidence()
                        .find(|evidence| !evidence.grade.is_fact())
                        .and_then(|evidence| evidence.settle.clone())
                })
        {
            evidence = evidence.settled_by(settle);
        }
        Value::Flag(Flag { holds: start.starts, evidence: Some(evidence) })
    }

    fn of_start(
        &self,
        regulator: &Regulator,
        dimension: Dimension,
        noun: &str,
        pick: fn(&Start) -> Option<f64>,
    ) -> Value {
        let start = match self.start_of(regulator) {
            Ok(start) => start,
            Err(why) => return Value::inapplicable(why),
        };
        let Some(value) = pick(&start) else { return Value::inapplicable("it starts") };
        let evidence =
            Evidence::new(Grade::Drawn, self.about(regulator, noun), "solved in the state that does not start");
        Value::Figure(Quantity::fact(dimension, Range::exactly(value), evidence))
    }

    /// What the margins of a loop should be.
    fn margin_goal(&self) -> Goal {
        let setting = self.board().settings.get("phase-margin").and_then(|settings| settings.get("goal"));
        let text = setting.and_then(|declared| match &declared.value {
            SettingValue::Text(text) => read_amount(text, Dimension::ANGLE).ok(),
            _ => None,
        });
        Goal { phase: text.unwrap_or(USUAL_PHASE), modulus: 0.0 }
    }

    /// The window of the bulk capacitor's ESR at nominal values.
    fn solved_window(&self, regulator: &Regulator) -> Result<Window, String> {
        let Some(recipe) = self.circuit_of(regulator) else {
            return Err("not built up from single parts".to_owned());
        };
        match &*recipe {
            Ok(recipe) if recipe.has_loop() => match recipe.window(&self.margin_goal()) {
                Ok(Some(window)) => Ok(window),
                Ok(None) => Err("no output capacitor".to_owned()),
                Err(error) => Err(error.to_string()),
            },
            Ok(_) => Err("there is no such loop".to_owned()),
            Err(evidence) => Err(format!("{}: {}", evidence.what, evidence.source)),
        }
    }

    /// The end of the solved window; `None` for a part that is not built up.
    pub(super) fn solved_window_end(&self, regulator: &Regulator, low: bool) -> Option<Value> {
        self.own_circuit(regulator)?;
        let window = match self.solved_window(regulator) {
            Ok(window) => window,
            Err(why) => return Some(Value::inapplicable(why)),
        };
        let end = if low { window.low() } else { window.high() };
        if end.is_none() {
            return Some(Value::inapplicable("no bound"));
        }
        let goal = self.margin_goal();
        let noun = if low { "least ESR" } else { "largest ESR" };
        Some(self.solved_figure(regulator, noun, Dimension::RESISTANCE, |recipe| {
            let found = if low { recipe.window_edge(&goal, low_edge) } else { recipe.window_edge(&goal, high_edge) };
            found.map(Some)
        }))
    }
}

/// The least ESR that will do; where none will, more than any capacitor has.
fn low_edge(window: &Window) -> f64 {
    if window.kind == WindowKind::None { NOWHERE } else { window.low().unwrap_or(0.0) }
}

/// The largest ESR that will do.
fn high_edge(window: &Window) -> f64 {
    if window.kind == WindowKind::None { 0.0 } else { window.high().unwrap_or(NOWHERE) }
}

fn limits(dimension: Dimension) -> Pair {
    if dimension == Dimension::ANGLE { Pair::ANY } else { Pair::NOT_NEGATIVE }
}
