//! Entries for a board file that accept findings.

use super::inert::{guarded, inert};
use super::layout::wrapped;
use super::settle::text;
use crate::board::Slack;
use crate::quantity::{Dimension, print_amount};
use crate::review::Reviewed;

/// Widest line of a comment.
const WIDTH: usize = 118;
/// How far below a slack the one that is written may lie, as a part of it: three digits, rounded down.
const NEAR: f64 = 0.02;

/// What all entries say.
#[derive(Debug, Clone, Copy)]
pub struct Acceptance<'a> {
    /// The netlist, as its reader was given it.
    pub netlist: &'a str,
    /// Why they are accepted.
    pub reason: &'a str,
    /// The last day, `YYYY-MM-DD`.
    pub until: Option<&'a str>,
    /// The day on which they are drafted.
    pub today: &'a str,
}

/// An `[[accept]]` entry for each finding, under a comment that says what it is.
#[must_use]
pub fn acceptances(findings: &[&Reviewed], of: Acceptance<'_>) -> String {
    let netlist = of.netlist.rsplit(['/', '\\']).next().unwrap_or(of.netlist);
    let count = findings.len();
    let head =
        format!("Accepted on {}: {count} finding{} of {netlist}.", of.today, if count == 1 { "" } else { "s" });
    let mut all = wrapped(&inert(&head), "# ", "# ", WIDTH);
    for found in findings {
        all.push('\n');
        all.push_str(&wrapped(&inert(&found.finding.message), "# ", "# ", WIDTH));
        all.push_str(&entry(found, of));
    }
    guarded(&all)
}

fn entry(found: &Reviewed, of: Acceptance<'_>) -> String {
    // Part or net are for the reader: the fingerprint decides.
    let about = [("part", &found.parts), ("net", &found.nets)].into_iter().find(|(_, names)| !names.is_empty());
    let name = about.and_then(|(key, names)| Some((key, names.first().filter(|name| !name.trim().is_empty())?)));
    let mut rows = vec![("check", text(&found.finding.check))];
    rows.extend(name.map(|(key, name)| (key, text(name))));
    rows.push(("finding", text(&found.fingerprint)));
    let slack = found.finding.slack.and_then(|(value, dimension)| no_better(value, dimension));
    rows.extend(slack.map(|slack| ("slack", text(&slack))));
    rows.push(("reason", text(of.reason)));
    rows.extend(of.until.map(|until| ("until", until.to_owned())));
    let lines = rows.into_iter().map(|(key, value)| format!("{key:7} = {value}\n"));
    format!("[[accept]]\n{}", lines.collect::<String>())
}

/// A slack as text that reads back as the same or as a little less, so that the finding does not open again at once.
/// `None` where it has no bound, or no text of it reads back so.
fn no_better(value: f64, dimension: Dimension) -> Option<String> {
    if !value.is_finite() {
        return None;
    }
    let step = if value == 0.0 { 0.0 } else { 10_f64.powf(value.abs().log10().floor() - 2.0) };
    let down = if value == 0.0 { 0.0 } else { (value / step).floor() * step };
    // One step more where printing has rounded up.
    [down, down - step].into_iter().map(|rounded| print_amount(rounded, dimension)).find(|text| {
        Slack::read(text).is_some_and(|read| {
            read.dimension == dimension && read.value <= value && value - read.value <= value.abs() * NEAR
        })
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn a_slack_is_written_in_three_digits_rounded_down() {
        let volts = |value| no_better(value, Dimension::VOLTAGE);
        assert_eq!(volts(-1.2431).as_deref(), Some("-1.25 V"));
        assert_eq!(volts(-0.2).as_deref(), Some("-200 mV"));
        assert_eq!(volts(0.0).as_deref(), Some("0 V"));
        assert_eq!(no_better(-13.84e-6, Dimension::CAPACITANCE).as_deref(), Some("-13.9 µF"));
        assert_eq!(volts(f64::NEG_INFINITY), None);
        assert_eq!(volts(f64::NAN), None);
    }

    proptest! {
        #[test]
        fn a_slack_reads_back_as_no_better_in_every_unit(
            dimension in proptest::sample::select(Dimension::NAMED),
            digits in 1.0..10.0_f64,
            power in -9..4_i32,
            below in any::<bool>(),
        ) {
            let value = digits * 10_f64.powi(power) * if below { -1.0 } else { 1.0 };
            if let Some(text) = no_better(value, dimension) {
                let read = Slack::read(&text).unwrap();
                prop_assert_eq!(read.dimension, dimension);
                prop_assert!(read.value <= value && value - read.value <= 0.02 * value.abs());
            }
        }
    }

    #[test]
    fn a_slack_in_every_unit_of_a_requirement_has_a_text() {
        for dimension in [
            Dimension::VOLTAGE,
            Dimension::CURRENT,
            Dimension::RESISTANCE,
            Dimension::CAPACITANCE,
            Dimension::POWER,
            Dimension::TIME,
            Dimension::FREQUENCY,
            Dimension::ONE,
        ] {
            for value in [-0.123_456, 3.0e-3, -47.0] {
                assert!(no_better(value, dimension).is_some(), "{value} {dimension}");
            }
        }
    }
}
