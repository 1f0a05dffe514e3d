//! Built-up regulators with packaged parts inside: a programmable shunt that drives a pass transistor, and a packaged
//! regulator with an outboard transistor. Their dropouts are those of a circuit simulator; no loop is claimed where the
//! inside of the packaged part is not known.

use std::path::Path;

use crate::rails_figures::{facts, rows};

#[test]
fn dropouts_with_packaged_parts_inside_are_the_simulators() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/railworthy/built_up");
    let expected = rows(&folder.join("expected.tsv"));
    let mut compared = 0;
    for case in ["shunt_npn", "outboard"] {
        let own: Vec<_> = expected.iter().filter(|row| row.case == case).collect();
        let found = facts(&folder.join("nets"), case, &own[0].regulator);
        for row in own {
            let value = found[&row.fact]["nominal"].as_f64().unwrap_or_else(|| panic!("{case}: no {}", row.fact));
            let (wanted, share) = (row.number(), if row.fact == "output_voltage" { 0.01 } else { 0.03 });
            assert!((value / wanted - 1.0).abs() < share, "{case} {}: {value} against {wanted}", row.fact);
            compared += 1;
        }
        assert_eq!(found["phase_margin"].is_null(), case == "outboard", "{case}");
        assert!(found["line_change"]["nominal"].as_f64().unwrap() < 0.02, "{case}");
    }
    assert_eq!(compared, 6);
}

/// What comes of a packaged regulator alone is not taken for the whole: the drop of the transistor's base adds to it.
#[test]
fn an_outboard_transistor_adds_its_base_emitter_drop() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/railworthy/built_up/nets");
    let found = facts(&folder, "outboard", "U1");
    let dropout = &found["dropout"];
    // 2 V of the regulator alone, and 0.6 to 1 V of a junction.
    let [low, high] = ["low", "high"].map(|end| dropout[end].as_f64().unwrap());
    assert!(low > 2.55 && high < 3.0, "{dropout}");
    // The input is the supply ahead of the transistor, not the pin behind its resistor.
    assert_eq!(found["input_voltage"]["low"].as_f64(), Some(16.2));
}
