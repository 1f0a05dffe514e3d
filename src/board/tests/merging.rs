//! Laws of merging.

use super::{good, house};
use crate::board::{Board, SettingValue};

const ONE: &str = "[board]\ntitle = \"one\"\nground = [\"GND\"]\n[[supply]]\nnet = \"VBAT\"\nvoltage = \"9 .. 15 V\"\n\
    hot_plug = true\n[[load]]\nnet = \"+5V\"\ncurrent = \"1 A\"\nkind = \"constant\"\n[[rail]]\nnet = \"+5V\"\n\
    voltage = \"5 V\"\n[[part]]\nref = \"U1\"\nheatsink = \"3 °C/W\"\nrated_current = \"1 A\"\ninput_max = \"20 V\"\n\
    [check.headroom]\nspare = \"0.1 V\"\nother = 1\n[[accept]]\ncheck = \"a\"\npart = \"U1\"\nreason = \"r\"\n";
const TWO: &str = "[board]\nambient = \"0 .. 40 °C\"\nground = [\"AGND\"]\n[[supply]]\nnet = \"VBAT\"\nstandard = \
    \"lead-acid 12 V\"\n[[supply]]\nnet = \"VIN\"\n[[load]]\nnet = \"+5V\"\ncurrent = \"2 A\"\n[[rail]]\nnet = \
    \"+5V\"\nmay_sag = true\n[[part]]\nref = \"U1\"\njunction_to_ambient = \"62 °C/W\"\nrated_current = \"2 A\"\n\
    [check.headroom]\nspare = \"0.2 V\"\n[[accept]]\ncheck = \"b\"\npart = \"U1\"\nreason = \"r\"\n";

/// All that a board declares, and where.
fn whole(board: &Board) -> String {
    format!("{board:?}")
}

#[test]
fn the_own_file_wins_key_by_key() {
    let board = Board::merge(house(ONE), good(TWO));
    assert_eq!(board.title.as_ref().unwrap().value, "one");
    assert!(board.ambient.is_some());
    let grounds: Vec<&str> = board.grounds.iter().map(|net| net.value.as_str()).collect();
    assert_eq!(grounds, ["GND", "AGND"]);
    let load = board.load("+5V").unwrap();
    assert!((load.current.as_ref().unwrap().value.nominal() - 2.0).abs() < 1e-12 && load.kind.is_some());
    let rail = board.rail("+5V").unwrap();
    assert!(rail.voltage.is_some() && rail.may_sag.is_some());
    let part = board.part("U1").unwrap();
    assert!((part.figures["rated_current"].value.nominal() - 2.0).abs() < 1e-12);
    assert!(part.figures.contains_key("input_max"));
    assert_eq!(part.reference.place.shown(), "gauge.railworthy.toml:16");
    let spare = board.setting("headroom", "spare").unwrap();
    assert_eq!(spare.value, SettingValue::Text("0.2 V".to_owned()));
    assert_eq!(board.setting("headroom", "other").unwrap().value, SettingValue::Number(1.0));
    let accepted: Vec<&str> = board.accepts.iter().map(|accept| accept.check.value.as_str()).collect();
    assert_eq!(accepted, ["a", "b"]);
    assert_eq!(board.sources.len(), 2);
}

#[test]
fn a_key_that_excludes_others_drops_them_from_the_house_file() {
    let board = Board::merge(house(ONE), good(TWO));
    let supply = board.supply("VBAT").unwrap();
    assert!(supply.voltage.is_none() && supply.standard.is_some() && supply.hot_plug.is_some());
    let part = board.part("U1").unwrap();
    assert!(part.heatsink.is_none() && part.junction_to_ambient.is_some());
    let ignored = "[[part]]\nref = \"U1\"\nrole = \"ignore\"\n";
    let board = Board::merge(house("[[part]]\nref = \"U1\"\nfamily = \"78xx\"\n"), good(ignored));
    assert!(board.part("U1").unwrap().family.is_none());
}

#[test]
fn nothing_on_either_side_changes_nothing_and_merging_is_associative() {
    let empty = Board::default;
    assert_eq!(whole(&Board::merge(house(ONE), empty())), whole(&house(ONE)));
    assert_eq!(whole(&Board::merge(empty(), good(TWO))), whole(&good(TWO)));
    let three = "[board]\ntitle = \"three\"\n[[part]]\nref = \"U1\"\nheatsink = \"5 °C/W\"\n[[supply]]\nnet = \"VIN\"\n\
                 ac = \"9 V\"\n";
    let left = Board::merge(Board::merge(house(ONE), good(TWO)), good(three));
    let right = Board::merge(house(ONE), Board::merge(good(TWO), good(three)));
    assert_eq!(whole(&left), whole(&right));
}

#[test]
fn a_winding_is_the_same_in_either_order() {
    let one = "[[supply]]\nbetween = [\"/AC1\", \"/AC2\"]\nac = \"9 V\"\n";
    let other = "[[supply]]\nbetween = [\"/AC2\", \"/AC1\"]\nfrequency = \"50 Hz\"\n";
    let board = Board::merge(house(one), good(other));
    assert_eq!(board.supplies.len(), 1);
    assert!(board.supplies[0].ac.is_some() && board.supplies[0].frequency.is_some());
}
