//! The page `rules/PARTS.md`: what the built-in files hold, with sources and grades.

use std::collections::BTreeMap;
use std::fmt::Write;
use std::fs;

use railworthy::knowledge::{
    Cited, Family, FamilyKind, FigureKey, Knowledge, Sign, SourceNote, Supply, Technology, is_relative,
};
use railworthy::quantity::{Dimension, Range, print_range};
use railworthy::report::part_rows;

use crate::project::{root, text};

const PAGE: &str = "rules/PARTS.md";
/// The same variable as for the documents.
const UPDATE: &str = "RAILWORTHY_UPDATE";

/// What was read and what was recalled.
#[derive(Default)]
struct Count {
    read: usize,
    recalled: usize,
}

impl Count {
    fn add(&mut self, recalled: bool) {
        *(if recalled { &mut self.recalled } else { &mut self.read }) += 1;
    }
}

/// Figures by what they rest on: whether recalled, then the source.
type Grouped = BTreeMap<(bool, String), Vec<String>>;

fn lines(grouped: Grouped) -> String {
    let line = |((recalled, source), figures): ((bool, String), Vec<String>)| {
        format!("- {} {source}: {}\n", if recalled { "recalled," } else { "read," }, figures.join("; "))
    };
    grouped.into_iter().map(line).collect()
}

fn family(family: &Family, count: &mut Count) -> String {
    let sign = if family.polarity == Sign::Negative { ", negative" } else { "" };
    let (names, file) = (family.names.join(" "), &family.file);
    let version = family.version_of.as_ref().map(|parent| format!(", also sold under the names of {parent}"));
    let mut text = format!(
        "\n### {}\n\n{}, {}{sign}: `{names}`{} ([{file}]({file}))\n\n",
        family.name,
        family.maker,
        family.kind.name(),
        version.unwrap_or_default()
    );
    let mut grouped = Grouped::new();
    for row in part_rows(family) {
        let shown = format!("{} {}", row.what, row.figure);
        match row.recalled {
            None => {
                let _ = writeln!(text, "- {shown}");
            }
            Some(recalled) => {
                count.add(recalled);
                grouped.entry((recalled, row.source)).or_default().push(shown);
            }
        }
    }
    text.push_str(&lines(grouped));
    let idle: Vec<&SourceNote> = family.sources.iter().filter(|source| !text.contains(&source.title)).collect();
    for source in idle {
        let _ = writeln!(text, "- also: {}{}", source.title, if source.read { "" } else { " (not read)" });
    }
    if let Some(note) = &family.note {
        let _ = writeln!(text, "- note: {note}");
    }
    text
}

fn shown(key: &str, range: Range, dimension: Dimension) -> String {
    if !is_relative(key) {
        return print_range(range, dimension);
    }
    let percent = Range::clamped(range.low() * 100.0, range.nominal() * 100.0, range.high() * 100.0);
    format!("{} %", print_range(percent, dimension))
}

fn plain(keys: &[FigureKey], figures: &BTreeMap<String, Cited<Range>>, grouped: &mut Grouped, count: &mut Count) {
    for (key, dimension, _) in keys {
        let Some(figure) = figures.get(*key) else { continue };
        count.add(figure.recalled);
        let shown = format!("{} {}", key.replace('_', " "), shown(key, figure.value, *dimension));
        grouped.entry((figure.recalled, figure.source.clone())).or_default().push(shown);
    }
}

fn technology(technology: &Technology, count: &mut Count) -> String {
    let (words, file) = (technology.words.join(", "), &technology.file);
    let text = format!("\n### {}\n\nalso {words} ([{file}]({file}))\n\n", technology.name);
    let mut grouped = Grouped::new();
    plain(Technology::FIGURES, &technology.figures, &mut grouped, count);
    for (table, dimension, _) in Technology::TABLES {
        for (row, figure) in technology.tables.get(*table).into_iter().flatten() {
            count.add(figure.recalled);
            let shown = format!("{} of {row} {}", table.replace('_', " "), shown(table, figure.value, *dimension));
            grouped.entry((figure.recalled, figure.source.clone())).or_default().push(shown);
        }
    }
    text + &lines(grouped)
}

fn supply(supply: &Supply, count: &mut Count) -> String {
    let mut grouped = Grouped::new();
    count.add(supply.voltage.recalled);
    let volts = format!("voltage {}", print_range(supply.voltage.value, Dimension::VOLTAGE));
    grouped.entry((supply.voltage.recalled, supply.voltage.source.clone())).or_default().push(volts);
    plain(Supply::FIGURES, &supply.figures, &mut grouped, count);
    let nets = if supply.nets.is_empty() { String::new() } else { format!(", nets `{}`", supply.nets.join(" ")) };
    let file = &supply.file;
    format!(
        "\n### {}\n\nalso {}{nets} ([{file}]({file}))\n\n{}",
        supply.name,
        supply.words.join(", "),
        lines(grouped)
    )
}

/// The page as the files have it.
fn page() -> String {
    let knowledge = Knowledge::built_in();
    let mut counts = [Count::default(), Count::default(), Count::default()];
    let [parts, technologies, supplies] = &mut counts;
    let mut body = String::from("\n## Part families\n");
    body.extend(knowledge.families.iter().map(|each| family(each, parts)));
    body.push_str("\n## Capacitor technologies\n");
    body.extend(knowledge.technologies.iter().map(|each| technology(each, technologies)));
    body.push_str("\n## Standard supplies\n");
    body.extend(knowledge.supplies.iter().map(|each| supply(each, supplies)));

    let mut head = String::from(
        "# What is known\n\nGenerated from the files beside this page; a test keeps it current, and \
         `RAILWORTHY_UPDATE=1 cargo test --test railworthy parts_page` writes it anew. A figure that was *read* stands in \
         the source named; one that was *recalled* did not come from reading it, and is a guess.\n\n\
         | | files | figures read | figures recalled |\n| --- | --- | --- | --- |\n",
    );
    let number = [knowledge.families.len(), knowledge.technologies.len(), knowledge.supplies.len()];
    for ((what, number), count) in ["part families", "technologies", "supplies"].iter().zip(number).zip(&counts) {
        let _ = writeln!(head, "| {what} | {number} | {} | {} |", count.read, count.recalled);
    }
    head.push('\n');
    for (kind, name) in FamilyKind::ALL {
        let families = knowledge.families.iter().filter(|family| family.kind == *kind);
        let recalled = families.clone().filter(|family| family.is_recalled()).count();
        let _ = writeln!(head, "- {name}: {} families, {recalled} of them recalled as a whole", families.count());
    }
    head + &body
}

#[test]
fn the_page_of_parts_is_that_of_the_files() {
    let page = page();
    if std::env::var_os(UPDATE).is_some() {
        fs::write(root().join(PAGE), page).unwrap();
        return;
    }
    let found = text(PAGE);
    let strange = found.lines().zip(page.lines()).find(|(found, wanted)| found != wanted);
    assert!(strange.is_none(), "{PAGE} is not current, run this test with {UPDATE}=1: {strange:#?}");
    assert_eq!(found, page, "{PAGE} is not current, run this test with {UPDATE}=1");
}

#[test]
fn the_page_tells_each_family_with_its_figures_and_sources() {
    let page = page();
    for family in &Knowledge::built_in().families {
        let heading = format!("\n### {}\n", family.name);
        assert_eq!(page.matches(&heading).count(), 1, "{}", family.name);
        let own = page.split(&heading).nth(1).unwrap().split("\n### ").next().unwrap();
        assert!(family.sources.iter().all(|source| own.contains(&source.title)), "{own}");
    }
    // TI SNOS412N: 2 % at room temperature, 3 % over temperature for some versions.
    assert!(
        page.contains("tolerance 2 .. 3 %") && page.contains("1.2 .. 1.3 V")
            || page.contains("at most 1.3 V at 800 mA")
    );
}
