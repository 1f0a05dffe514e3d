//! Real boards without a board file: no failure is claimed on guesses, and every warning was read and judged.

use railworthy::checks::Level;

use crate::judge::Rules;
use crate::shared::shared_folder;

/// Every warning on the collected boards, by number of the file, check and part. Each was judged by reading the netlist:
///
/// - 007: an adjustable part whose input net holds no capacitor at all: fair.
/// - 030: an LD3985M47R, which is made for 4.7 V, on a net called +5V: real.
/// - 033, 034: an LM1117 with nothing but ceramics at its output, below the window that its sheet states: real.
const KNOWN: &[&str] = &["007 input-capacitor U3", "030 set-point U6", "033 esr-window U2", "034 esr-window U2"];

/// Every error on them, read and judged likewise:
///
/// - 034: an LM1117 in SOT-223 under a symbol with the order of the 78 series; as drawn its ground is at the input, its
///   output at ground, its input at the output: real.
const WRONG: &[&str] = &["034 pin-meaning U2"];

#[test]
fn real_boards_without_a_board_file_stay_quiet() {
    let Some(folder) = shared_folder().map(|shared| shared.join("corpus/files")) else { return };
    let rules = Rules::built_in();
    let mut files: Vec<_> = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    files.sort();
    assert_eq!(files.len(), 99);
    let (mut wrong, mut loud) = (Vec::new(), Vec::new());
    for file in files {
        let number = file.file_name().unwrap().to_string_lossy()[..3].to_owned();
        for reviewed in rules.judge(&file).findings {
            let finding = &reviewed.finding;
            let told = format!("{number} {} {}", finding.check, reviewed.parts[0]);
            match finding.level {
                Level::Error => wrong.push(told),
                Level::Warning => loud.push(told),
                Level::Note => {}
            }
        }
    }
    assert_eq!(wrong, WRONG);
    assert_eq!(loud, KNOWN);
}
