//! Each kind of mistake, as a reader is told it.

use super::{circuit_of, good, house, read, told};
use crate::board::{Board, Options};
use crate::source::Source;

/// One kind of mistake a line: its file.
const MISTAKES: &[&str] = &[
    "[board]\ntitel = \"x\"\n",
    "[suply]\nnet = \"VBAT\"\n",
    "[[supply]]\nvoltage = \"12 V\"\n",
    "[[supply]]\nnet = \"VBAT\"\nbetween = [\"A\", \"B\"]\n",
    "[[supply]]\nbetween = [\"A\"]\n",
    "[[supply]]\nbetween = [\"A\", \"A\"]\n",
    "[[supply]]\nnet = \"\"\n",
    "[[supply]]\nnet = \"VBAT\"\nvoltage = 12\n",
    "[[supply]]\nnet = \"VBAT\"\nvoltage = \"12\"\n",
    "[[supply]]\nnet = \"VBAT\"\nvoltage = \"12 A\"\n",
    "[[supply]]\nnet = \"VBAT\"\nvoltage = \"14.4 .. 10.8 V\"\n",
    "[[supply]]\nnet = \"VBAT\"\nvoltage = \"12 V\"\nstandard = \"USB 2.0 bus\"\n",
    "[[supply]]\nnet = \"/AC1\"\nvoltage = \"12 V\"\nac = \"9 V\"\n",
    "[[supply]]\nnet = \"VBAT\"\nresistance = \"-50 mΩ\"\n",
    "[[supply]]\nnet = \"VBAT\"\nvoltage = \"12 V\"\nsurge = \"9 V\"\n",
    "[[supply]]\nnet = \"VBAT\"\nhot_plug = \"yes\"\n",
    "[[supply]]\nnet = \"VBAT\"\n\n[[supply]]\nnet = \"VBAT\"\n",
    "[[supply]]\nbetween = [\"A\", \"B\"]\n[[supply]]\nbetween = [\"B\", \"A\"]\n",
    "[[load]]\ncurrent = \"1 A\"\n",
    "[[load]]\nnet = \"+5V\"\ncurrent = \"-2 .. -1 A\"\n",
    "[[load]]\nnet = \"+5V\"\ncurrent = \"0 .. 100 mA\"\ncontinuous = \"200 mA\"\n",
    "[[load]]\nnet = \"+5V\"\nkind = \"resistiv\"\n",
    "[[rail]]\nnet = \"+5V\"\noff_board_capacitance = \"1 F .. 2 V\"\n",
    "[[part]]\nesr = \"1 ohm\"\n",
    "[[part]]\nref = \"C1\"\nrating = \"10 .. 16 V\"\n",
    "[[part]]\nref = \"C1\"\ntolerance = \"large\"\n",
    "[[part]]\nref = \"C1\"\ntolerance = \"±120 %\"\n",
    "[[part]]\nref = \"C1\"\ntolerance = \"5 .. 10 %\"\n",
    "[[part]]\nref = \"U1\"\nheatsink = \"3 °C/W\"\njunction_to_ambient = \"62 °C/W\"\n",
    "[[part]]\nref = \"U1\"\nrole = \"ignore\"\nfamily = \"1117\"\n",
    "[[part]]\nref = \"U1\"\nrole = \"skip\"\n",
    "[[part]]\nref = \"U1\"\ndropout = \"1.3 V\"\n",
    "[[part]]\nref = \"U1\"\ndropout = \"1.3 V at 1 V\"\n",
    "[[part]]\nref = \"U1\"\nesr_window = \"0.3 ohm\"\n",
    "[[part]]\nref = \"U1\"\nesr_window = \".. 5 V\"\n",
    "[[part]]\nref = \"U1\"\nrated_curent = \"1 A\"\n",
    "[[part]]\nref = \"U1\"\npins = { 1 = \"outptu\" }\n",
    "[[part]]\nref = \"Q1\"\nmodel = \"pmos VT0=-2 KP=0 RD=1..0.5\"\n",
    "[[part]]\nref = \"Q1\"\n[[part]]\nref = \"Q1\"\n",
    "[[accept]]\ncheck = \"headroom\"\nreason = \"fine\"\n",
    "[[accept]]\ncheck = \"headroom\"\npart = \"U1\"\n",
    "[[accept]]\npart = \"U1\"\nreason = \"fine\"\nuntil = \"soon\"\nslack = \"little\"\n",
    "[rules]\nfolders = [\"/etc\", \"~/rules\", \"C:/rules\", \"\"]\n",
    "[check.headroom]\nspare = { a = 1 }\n",
    "[check]\nheadroom = 1\n",
    "[expect]\nheadroom = { U1 = \"fails\" }\n",
    "[board]\nambient = \"-300 .. 20 °C\"\n",
    "[board\n",
    "[board]\nambient = \"1e400 °C\"\n",
    "[[load]]\nnet = \"+5V\"\ncurrent = \"nan A\"\n",
    "[[load]]\nnet = \"+5V\"\ncurrent = inf\n",
];

#[test]
fn each_mistake_is_told_with_its_place_and_what_to_do() {
    let mut all = String::new();
    for text in MISTAKES {
        let (_, problems) = read(text);
        assert!(!problems.is_empty(), "no problem with {text}");
        for problem in &problems {
            assert!(problem.place().is_some(), "{text}");
        }
        all.push_str(&format!("{}\n{}\n", text.replace('\n', " | "), told(&problems)));
    }
    insta::assert_snapshot!(all);
}

#[test]
fn a_case_may_expect_verdicts_and_only_verdicts() {
    let text = "[expect]\nheadroom = { U1 = \"fails\", U2 = \"hold\" }\n";
    let options = Options { case: true, ..Options::default() };
    let (board, problems) = Board::read(&Source::new("bad-1.railworthy.toml", text), options);
    assert_eq!(board.expect.unwrap()["headroom"]["U1"].value, "fails");
    assert_eq!(
        told(&problems),
        "error: `hold` is no verdict\n  at bad-1.railworthy.toml:2:33 `\"hold\"`\n  label: not one of its words\n  \
         help: did you mean `holds`?\n"
    );
}

#[test]
fn a_name_that_the_board_lacks_is_an_error_in_its_own_file_only() {
    let text = "[board]\nground = [\"GDN\"]\n[[supply]]\nnet = \"VBATT\"\n[[load]]\nnet = \"+3.3V\"\n[[part]]\nref = \
                \"C11\"\n[[accept]]\ncheck = \"headroom\"\npart = \"U7\"\nreason = \"seen\"\n[[accept]]\ncheck = \
                \"headroom\"\npart = \"U8\"\nfinding = \"abc\"\nreason = \"seen\"\n";
    let (_, circuit) = circuit_of("");
    insta::assert_snapshot!(told(&good(text).check_against(&circuit)));
    assert!(house(text).check_against(&circuit).is_empty());
}

#[test]
fn a_frequency_without_a_voltage_is_an_error_of_the_merged_board() {
    let (_, circuit) = circuit_of("");
    let own = "[[supply]]\nnet = \"VBAT\"\nfrequency = \"50 Hz\"\n";
    assert!(told(&good(own).check_against(&circuit)).contains("has a frequency and no `ac`"));
    let merged = Board::merge(house("[[supply]]\nnet = \"VBAT\"\nac = \"9 V\"\n"), good(own));
    assert!(merged.check_against(&circuit).is_empty());
}

#[test]
fn names_that_knowledge_lacks_are_errors_with_the_nearest() {
    let mut board = good(
        "[[supply]]\nnet = \"VBAT\"\nstandard = \"lead acid 12 V\"\n[[part]]\nref = \"C1\"\ntechnology = \
         \"Tantalun\"\n[[part]]\nref = \"U1\"\nfamily = \"1117 / LM117\"\n[[accept]]\ncheck = \"headrom\"\npart = \
         \"U1\"\nreason = \"x\"\n[check.esr-windw]\na = 1\n",
    );
    let mut problems = board.resolve_standards(|_| None, ["lead-acid 12 V", "USB 2.0 bus"]);
    problems.extend(board.resolve_technologies(|_| None, ["tantalum", "film"]));
    problems.extend(board.check_families(|_| false, ["1117 / LM1117", "78xx"]));
    problems.extend(board.check_checks(["headroom", "esr-window"]));
    insta::assert_snapshot!(told(&problems));
}

#[test]
fn hostile_files_are_refused_and_never_stop_the_reader() {
    let deep = format!("a = {}1{}", "[".repeat(5000), "]".repeat(5000));
    let tables = format!("[{}]\n", vec!["a"; 5000].join("."));
    let braces = format!("[check.x]\na = {}", "{a=".repeat(3000));
    let huge = format!("[board]\nambient = \"{} °C\"\n", "9".repeat(100_000));
    let number = format!("[[part]]\nref = \"Q1\"\nmodel = \"npn IS={}\"\n", "1".repeat(100_000));
    for text in [deep, tables, braces, huge, number, "[board]\ntitle = \"\u{0}\"\n".to_owned()] {
        let (_, problems) = read(&text);
        assert!(!problems.is_empty(), "{}", &text[..40.min(text.len())]);
    }
}

proptest::proptest! {
    #[test]
    fn any_text_is_read_or_refused(text in "\\PC{0,200}|(\\[\\[(part|supply|load)\\]\\]\n(net|ref|esr|tolerance|dropout|model|voltage|current) = \"[-0-9.± %a-zVΩµ]{0,20}\"\n){1,4}") {
        let (board, problems) = read(&text);
        for problem in &problems {
            proptest::prop_assert!(!problem.message().is_empty());
        }
        proptest::prop_assert!(board.sources.len() == 1);
    }
}
