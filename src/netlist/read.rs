//! From bytes to a netlist.

use super::build::Builder;
use super::limits::Limits;
use super::model::{Format, Netlist};
use super::problems::Problems;
use super::refuse;
use super::scan::Scanner;
use super::verify::verify;
use super::xml::XmlScanner;
use crate::source::{Problem, Source};

/// Reads a netlist export: S-expressions of version `D` or `E`, or the XML form of either, told apart by content.
///
/// `name` is what messages call the file.
///
/// What is damaged is left out and told in [`Netlist::problems`] as an error; the rest is read.
///
/// # Errors
///
/// The reasons, when nothing useful could be read: the file is no netlist export, no UTF-8, too large (see
/// [`limits`](super::limits)), or so damaged that neither component nor net is left.
pub fn read(name: &str, bytes: &[u8]) -> Result<Netlist, Vec<Problem>> {
    read_within(name, bytes, &Limits::default())
}

/// [`read`] within given limits.
pub(super) fn read_within(name: &str, bytes: &[u8], limits: &Limits) -> Result<Netlist, Vec<Problem>> {
    if bytes.len() > limits.bytes {
        let problem = Problem::error(format!(
            "the file has {} bytes, more than the {} that are read",
            bytes.len(),
            limits.bytes
        ));
        return Err(vec![problem.help("check that this is the netlist of one board")]);
    }
    if let Some(problem) = refuse::not_text(name, bytes) {
        return Err(vec![problem]);
    }
    let text = refuse::text(name, bytes)?;
    let source = Source::new(name, text);
    if let Some(problem) = refuse::not_a_netlist(&source) {
        return Err(vec![problem]);
    }
    let is_xml = text.trim_start_matches('\u{feff}').trim_start().starts_with('<');
    let mut built = Builder::new(&source, limits);
    if is_xml {
        XmlScanner::new(&source, limits, &mut built).run();
    } else {
        Scanner::new(&source, limits, &mut built).run();
    }
    finish(&source, is_xml, built)
}

fn finish(source: &Source, is_xml: bool, mut built: Builder<'_>) -> Result<Netlist, Vec<Problem>> {
    built.complete_sheet_files();
    let Builder { version, schematic, schematic_span, tool, mut components, parts, mut nets, mut problems, .. } =
        built;
    verify(source, &mut components, &parts, &mut nets, &mut problems);
    let (format, version) = format(source, is_xml, version, &mut problems);
    if problems.has_error() && components.is_empty() && nets.is_empty() {
        return Err(problems.settle());
    }
    let problems = problems.settle();
    Ok(Netlist {
        source: source.clone(),
        format,
        version,
        schematic,
        schematic_span,
        tool,
        components,
        parts,
        nets,
        problems,
    })
}

/// The format by the version; where that is missing or not known, by whether references are quoted.
fn format(source: &Source, is_xml: bool, version: Option<String>, problems: &mut Problems) -> (Format, String) {
    let written = version.unwrap_or_default();
    let guessed = || if source.text().contains("(ref \"") { Format::E } else { Format::D };
    let of_lists = match written.as_str() {
        "D" => Format::D,
        "E" => Format::E,
        "" => guessed(),
        _ => {
            let shown: String = written.chars().take(40).collect();
            problems.push(
                Problem::warning(format!("the format version `{shown}` is not known"))
                    .help("it is read as if it were the nearest known one; versions D and E are known"),
            );
            guessed()
        }
    };
    (if is_xml { Format::Xml } else { of_lists }, written)
}
