//! Reading a whole board file.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

use crate::quantity::Dimension;
use crate::source::toml::{Date, Document, Spanned, Table, Value};
use crate::source::{Problem, Source};

use super::declared::{Declared, Place};
use super::files::{Links, find, find_house, read_source};
use super::model::{Accept, Board, SettingValue};
use super::reader::Reader;
use super::texts::read_slack;
use crate::knowledge::Allowed::Any;

/// What a board file may hold, by what it is for.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Options {
    /// It is the house file: written for more boards than one, so that nets and parts that this one lacks are passed
    /// over.
    pub shared: bool,
    /// It belongs to a case of a check: `[expect]` is allowed.
    pub case: bool,
}

/// The words for verdicts in `[expect]`.
const VERDICTS: &[(&str, &str)] =
    &[("fails", "fails"), ("doubtful", "doubtful"), ("tight", "tight"), ("holds", "holds"), ("unknown", "unknown")];

impl Board {
    /// Reads a board file. What is wrong is left out and told in the problems, in order of the file; each is an
    /// error, for a declaration that is passed over would change the judgement.
    #[must_use]
    pub fn read(source: &Source, options: Options) -> (Self, Vec<Problem>) {
        let mut board = Self { sources: vec![source.clone()], ..Self::default() };
        let document = match Document::parse(source) {
            Ok(document) => document,
            Err(problem) => return (board, vec![*problem]),
        };
        let reader = Reader { document: &document, shared: options.shared };
        let mut root = document.root();
        reader.board_table(&mut root, &mut board);
        board.supplies = reader.supplies(&mut root);
        board.loads = reader.loads(&mut root);
        board.rails = reader.rails(&mut root);
        board.parts = reader.parts(&mut root);
        board.accepts = root.tables("accept").into_iter().filter_map(|table| reader.accept(table)).collect();
        board.rule_folders = reader.rules(&mut root);
        board.settings = reader.settings(&mut root);
        board.expect = reader.expect(&mut root, options.case);
        root.finish();
        (board, document.into_problems())
    }

    /// Everything that the two files of a netlist declare, the own one laid over the house file. `netlist` is `None`
    /// where it comes from standard input; `own` replaces the file that lies beside it. `case` allows `[expect]`.
    #[must_use]
    pub fn open(netlist: Option<&Path>, own: Option<&Path>, case: bool) -> (Self, Vec<Problem>) {
        let (house, beside) = netlist.map_or_else(|| (find_house(Path::new("")), None), find);
        let own = own.map(|path| (path, Links::Follow));
        let own = own.or_else(|| beside.as_deref().map(|path| (path, Links::Refuse)));
        let house = house.as_deref().map(|path| (path, Links::Refuse));
        let mut problems = Vec::new();
        let mut one = |file: Option<(&Path, Links)>, options| {
            let Some((path, links)) = file else { return Self::default() };
            let source = match read_source(path, links) {
                Ok(source) => source,
                Err(error) => {
                    problems.push(Problem::error(error.to_string()));
                    return Self::default();
                }
            };
            let (board, found) = Self::read(&source, options);
            problems.extend(found);
            board
        };
        let house = one(house, Options { shared: true, case: false });
        let own = one(own, Options { shared: false, case });
        (Self::merge(house, own), problems)
    }
}

impl<'a> Reader<'a> {
    /// `[board]`
    fn board_table(self, root: &mut Table<'a>, board: &mut Board) {
        let Some(mut table) = root.table("board") else { return };
        board.title = self.name(&mut table, "title");
        board.ambient = self.figure(&mut table, "ambient", Dimension::TEMPERATURE, Any);
        if let Some(Declared { value, place: Place::File { span, .. } }) = &board.ambient
            && (value.low() < -273.15 || value.high() > 1000.0)
        {
            let help = "write the air around the board, as in \"-10 .. 50 °C\"";
            self.document.refuse(*span, "no board is at such a temperature", "not possible", help);
            board.ambient = None;
        }
        board.grounds = table.texts("ground").into_iter().filter_map(|text| self.name_of(text, "ground")).collect();
        table.finish();
    }

    /// One `[[accept]]`.
    fn accept(self, mut table: Table<'a>) -> Option<Accept> {
        let check = self.required(&mut table, "check");
        let reason = self.required(&mut table, "reason");
        let part = self.name(&mut table, "part");
        let net = self.name(&mut table, "net");
        let finding = self.name(&mut table, "finding");
        let until = table.take("until").and_then(|value| self.spanned(day(value)));
        let slack = table.text("slack").and_then(|text| match read_slack(text.as_str()) {
            Ok(slack) => Some(self.declared(slack, text.span())),
            Err(fault) => {
                self.fault(text, fault);
                None
            }
        });
        if part.is_none() && net.is_none() && finding.is_none() && check.is_some() {
            let help = "add `part`, `net` or `finding`: a check is not accepted as a whole";
            table.refuse("the acceptance names no finding", "which one is accepted?", help);
        }
        let named = part.is_some() || net.is_some() || finding.is_some();
        table.finish();
        Some(Accept { check: check?, part, net, reason: reason?, until, finding, slack }).filter(|_| named)
    }

    /// `[rules]`
    fn rules(self, root: &mut Table<'a>) -> Vec<Declared<PathBuf>> {
        let Some(mut table) = root.table("rules") else { return Vec::new() };
        let base = Path::new(self.document.source().name()).parent().unwrap_or(Path::new("")).to_owned();
        let mut folders = Vec::new();
        for text in table.texts("folders") {
            let Some(folder) = self.name_of(text, "folders") else { continue };
            // A path from the root means another folder on each machine, and a stranger's file must not choose it.
            if Path::new(&folder.value).has_root() || folder.value.starts_with('~') || folder.value.contains(':') {
                let help = "write it relative to this file, or name it on the command line with --rules";
                text.refuse("a rule folder cannot be given from the root", "not a relative path", help);
                continue;
            }
            folders.push(folder.map(|folder| base.join(folder)));
        }
        table.finish();
        folders
    }

    /// `[check.NAME]`
    fn settings(self, root: &mut Table<'a>) -> BTreeMap<String, BTreeMap<String, Declared<SettingValue>>> {
        let Some(mut checks) = root.table("check") else { return BTreeMap::new() };
        let mut settings = BTreeMap::new();
        for check in checks.entries() {
            let Some(mut table) = check.table() else { continue };
            let keys = table.entries().into_iter().filter_map(|value| {
                let setting = setting(value)?;
                Some((value.key().to_owned(), self.declared(setting, value.span())))
            });
            settings.insert(check.key().to_owned(), keys.collect());
        }
        settings
    }

    /// `[expect]`
    fn expect(
        self,
        root: &mut Table<'a>,
        case: bool,
    ) -> Option<BTreeMap<String, BTreeMap<String, Declared<String>>>> {
        let value = root.take("expect")?;
        if !case {
            let help = "take it out: it belongs into the cases of a check, which `railworthy vet` runs";
            value.refuse("a board file cannot say what it expects of the checks", "`[expect]` stands here", help);
            return None;
        }
        let mut checks = BTreeMap::new();
        for check in value.table()?.entries() {
            let Some(mut table) = check.table() else { continue };
            let subjects = table.entries().into_iter().filter_map(|subject| {
                let text = subject.text()?;
                let verdict = self.word_of(text, "verdict", VERDICTS)?;
                Some((subject.key().to_owned(), self.declared(verdict.to_owned(), text.span())))
            });
            checks.insert(check.key().to_owned(), subjects.collect());
        }
        Some(checks)
    }
}

/// A day, as a date or as a text that reads like one.
fn day(value: Value<'_>) -> Option<Spanned<Date>> {
    if !value.is_text() {
        return value.date();
    }
    let text = value.text()?;
    match Date::read(text.as_str()) {
        Some(value) => Some(Spanned { value, span: text.span() }),
        None => {
            text.refuse(format!("`{}` must be a date", value.key()), "not a date", "write a date: 2027-06-30");
            None
        }
    }
}

fn setting(value: Value<'_>) -> Option<SettingValue> {
    match value.noun() {
        "a text" => Some(SettingValue::Text(value.text()?.as_str().to_owned())),
        "a number" => Some(SettingValue::Number(value.number()?.value)),
        "true or false" => Some(SettingValue::Flag(value.boolean()?.value)),
        "a list" => Some(SettingValue::Texts(value.texts()?.iter().map(|text| text.as_str().to_owned()).collect())),
        noun => {
            let help = "write a text, a number, true, false or a list of texts";
            value.refuse(format!("the setting `{}` cannot be {noun}", value.key()), "not a setting", help);
            None
        }
    }
}
