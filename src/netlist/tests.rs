//! Behaviour of the whole room on small texts.

use proptest::prelude::*;

use super::limits::{Limits, MAX_DEPTH, MAX_FIELDS, MAX_PROBLEMS};
use super::read::read_within;
use super::{Format, Netlist, read};
use crate::source::{Problem, Severity};

const BOARD_D: &str = r#"(export (version D)
  (design
    (source C:\work\board.sch)
    (tool "Eeschema 4.0.7"))
  (components
    (comp (ref C1)
      (value 10uF,X5R)
      (footprint Caps:C_0805)
      (fields
        (field (name MPN) "AB 12")
        (field (name Fit) 0805))
      (libsource (lib device) (part C))
      (sheetpath (names /Power/) (tstamps /5B9D7D87/))
      (tstamp 5319F3F3))
    (comp (ref U1) (value INF) (libsource (lib reg) (part LD_X))))
  (libparts
    (libpart (lib reg) (part LD)
      (aliases
        (alias LD_X))
      (description "fixed ; 3.3V")
      (docs ~)
      (pins
        (pin (num 1) (name +) (type power_in))
        (pin (num 0805) (name ~) (type power_out)))))
  (libraries (library (logical reg) (uri I:\lib\..\reg.lib)))
  (nets
    (net (code 1) (name -12V)
      (node (ref C1) (pin 1))
      (node (ref U1) (pin 0805)))
    (net (code 2) (name MCLR'/VPP;RA3)
      (node (ref U1) (pin 1)))))
"#;

const BOARD_XML: &str = r#"<?xml version="1.0" encoding="UTF-8"?>
<export version="E">
  <design><source>board.sch</source><tool>Eeschema 7</tool></design>
  <components>
    <comp ref="C&lt;1">
      <value>10u &amp; more</value>
      <fields><field name="MPN">AB 12</field></fields>
      <libsource lib="Device" part="C" description="a capacitor"/>
      <property name="Sheetfile" value="power.kicad_sch"/>
      <property name="dnp"/>
      <sheetpath names="/Power/" tstamps="/aa/"/>
      <tstamps>aa bb</tstamps>
    </comp>
  </components>
  <libparts>
    <libpart lib="Device" part="C">
      <aliases><alias>CP</alias></aliases>
      <pins><pin num="1" name="~" type="passive"/></pins>
    </libpart>
  </libparts>
  <nets>
    <net code="1" name="/a"><node ref="C&lt;1" pin="1" pinfunction="P_1" pintype="passive"/></net>
  </nets>
</export>
"#;

fn good(text: &str) -> Netlist {
    let netlist = read("board.net", text.as_bytes()).unwrap();
    assert!(netlist.problems.is_empty(), "{:?}", netlist.problems);
    netlist
}

/// The netlist of a damaged text and its errors.
fn damaged(text: &str) -> (Netlist, Vec<Problem>) {
    let netlist = read("board.net", text.as_bytes()).unwrap();
    let errors: Vec<Problem> =
        netlist.problems.iter().filter(|problem| problem.severity() == Severity::Error).cloned().collect();
    assert!(!errors.is_empty());
    (netlist, errors)
}

fn refused(bytes: &[u8]) -> Problem {
    let problems = read("board.net", bytes).unwrap_err();
    assert!(problems[0].advice().is_some(), "{problems:?}");
    problems[0].clone()
}

fn references(netlist: &Netlist) -> Vec<&str> {
    netlist.components.iter().map(|component| component.reference.as_str()).collect()
}

#[test]
fn version_d_is_read_with_every_atom_as_written() {
    let netlist = good(BOARD_D);
    assert_eq!((netlist.format, netlist.version.as_str()), (Format::D, "D"));
    assert_eq!((netlist.schematic.as_str(), netlist.tool.as_str()), (r"C:\work\board.sch", "Eeschema 4.0.7"));
    let [capacitor, regulator] = netlist.components.as_slice() else { panic!() };
    assert_eq!((capacitor.value.as_str(), regulator.value.as_str()), ("10uF,X5R", "INF"));
    let fields: Vec<_> = capacitor.fields.iter().map(|field| (field.name.as_str(), field.value.as_str())).collect();
    assert_eq!(fields, [("MPN", "AB 12"), ("Fit", "0805")]);
    assert_eq!((capacitor.library.as_str(), capacitor.part.as_str()), ("device", "C"));
    assert_eq!((capacitor.sheet.as_str(), capacitor.ids.as_slice()), ("/Power/", &["5319F3F3".to_owned()][..]));
    let part = &netlist.parts[0];
    assert_eq!((part.aliases.as_slice(), part.description.as_str()), (&["LD_X".to_owned()][..], "fixed ; 3.3V"));
    assert_eq!((part.pins[1].number.as_str(), part.pins[1].name.as_str()), ("0805", "~"));
    let names: Vec<_> = netlist.nets.iter().map(|net| net.name.as_str()).collect();
    assert_eq!(names, ["-12V", "MCLR'/VPP;RA3"]);
    assert_eq!(netlist.node_count(), 3);
    assert_eq!(netlist.source.slice(netlist.components[1].reference_span), "U1");
    assert_eq!(netlist.source.slice(netlist.nets[0].nodes[1].span), "(node (ref U1) (pin 0805))");
}

#[test]
fn the_xml_form_is_read_with_entities_resolved() {
    let netlist = good(BOARD_XML);
    assert_eq!((netlist.format, netlist.version.as_str()), (Format::Xml, "E"));
    let component = &netlist.components[0];
    assert_eq!((component.reference.as_str(), component.value.as_str()), ("C<1", "10u & more"));
    assert_eq!((component.description.as_str(), component.sheet_file.as_str()), ("a capacitor", "power.kicad_sch"));
    assert_eq!(component.ids, ["aa", "bb"]);
    let fields: Vec<_> = component.fields.iter().map(|field| (field.name.as_str(), field.value.as_str())).collect();
    assert_eq!(fields, [("MPN", "AB 12"), ("Sheetfile", "power.kicad_sch"), ("dnp", "")]);
    assert_eq!(netlist.parts[0].aliases, ["CP"]);
    let node = &netlist.nets[0].nodes[0];
    assert_eq!((node.function.as_str(), node.kind.as_str()), ("P_1", "passive"));
    assert_eq!(netlist.source.slice(component.reference_span), "C&lt;1");
    assert!(netlist.source.slice(component.span).starts_with("<comp ref"));
}

#[test]
fn the_file_of_a_sheet_comes_from_the_component_else_from_the_list_of_sheets_else_from_the_source() {
    let sheet_files = |design: &str, property: &str| {
        let netlist = good(&format!(
            r#"(export (version D) (design (source /home/u/gauge.sch) {design})
               (components (comp (ref U1) (sheetpath (names /Power/) (tstamps /5B9D7D87/)) {property})
                 (comp (ref U2) (sheetpath (names /) (tstamps /)))) (nets))"#
        ));
        assert_eq!(netlist.source.slice(netlist.schematic_span), "/home/u/gauge.sch");
        netlist.components.into_iter().map(|component| component.sheet_file).collect::<Vec<_>>()
    };
    let listed = "(sheet (number 1) (name /) (tstamps /) (title_block (title) (source top.sch)))
        (sheet (number 2) (name /Power/) (tstamps /5B9D7D87/) (title_block (rev A) (source \"power 2.sch\")))";
    let own = "(property (name Sheetfile) (value own.kicad_sch))";
    assert_eq!(sheet_files(listed, own), ["own.kicad_sch", "top.sch"]);
    assert_eq!(sheet_files(listed, ""), ["power 2.sch", "top.sch"]);
    assert_eq!(sheet_files("", ""), ["", "/home/u/gauge.sch"]);
}

#[test]
fn fields_and_properties_merge_and_the_first_text_wins() {
    let netlist = good(
        r#"(export (version "E") (components (comp (ref "U1") (value "x\\y\"z\r\n\q")
           (fields (field (name "MPN")) (field (name "Fit") "yes"))
           (property (name "MPN") (value "A")) (property (name "MPN") (value "B")) (property (name "dnp"))
           (tstamps "aa" "bb"))) (nets))"#,
    );
    let component = &netlist.components[0];
    assert_eq!(component.value, "x\\y\"z\r\n\\q");
    let fields: Vec<_> = component.fields.iter().map(|field| (field.name.as_str(), field.value.as_str())).collect();
    assert_eq!(fields, [("MPN", "A"), ("Fit", "yes"), ("dnp", "")]);
    assert_eq!(component.ids, ["aa", "bb"]);
}

#[test]
fn a_byte_order_mark_and_any_line_ends_are_fine() {
    let netlist = good(&format!("\u{feff}{}", BOARD_D.replace('\n', "\r\n")));
    assert_eq!(netlist.components.len(), 2);
    assert_eq!(netlist.source.slice(netlist.components[0].reference_span), "C1");
    assert_eq!(good(&format!("\u{feff}{BOARD_XML}")).components.len(), 1);
}

#[test]
fn a_component_without_its_closing_bracket_is_lost_alone() {
    let (netlist, errors) = damaged(&BOARD_D.replace("(tstamp 5319F3F3))", "(tstamp 5319F3F3)"));
    assert_eq!(references(&netlist), ["U1"]);
    assert_eq!((netlist.nets.len(), netlist.parts.len()), (2, 1));
    assert!(errors[0].message().contains("not closed"), "{errors:?}");
    let (source, span) = errors[0].place().unwrap();
    assert!(source.slice(span).starts_with("(comp (ref C1)"));
}

#[test]
fn a_bracket_too_many_is_told_once_and_all_is_read() {
    let (netlist, errors) = damaged(&BOARD_D.replace("(tstamp 5319F3F3))", "(tstamp 5319F3F3)))"));
    assert_eq!((references(&netlist), netlist.nets.len()), (vec!["C1", "U1"], 2));
    assert_eq!(errors.len(), 1, "{errors:?}");
}

#[test]
fn a_quote_that_is_not_closed_loses_its_component_alone() {
    for cut in [r#"(value "10uF)"#, "(value \"10uF,X5R)"] {
        let text = BOARD_D.replace("(value 10uF,X5R)", cut);
        let (netlist, errors) = damaged(&text);
        assert_eq!((references(&netlist), netlist.nets.len(), netlist.parts.len()), (vec!["U1"], 2, 1));
        assert!(errors[0].message().contains("quote"), "{errors:?}");
        let (source, span) = errors[0].place().unwrap();
        assert_eq!((source.slice(span), span.start()), ("\"", text.find("\"10uF").unwrap()));
    }
}

#[test]
fn what_lacks_its_key_is_an_error_at_its_place() {
    for (from, to, message, place) in [
        ("(ref U1) (value INF)", "(value INF)", "a component has no reference", "(comp (value"),
        ("(ref U1) (value INF)", "(ref U1 U2) (value INF)", "`ref` does not hold", "(ref U1 U2)"),
        ("(code 2) ", "", "a net has no code", "(net (name"),
        ("(name -12V)", "", "a net has no name", "(net (code 1)"),
        ("(node (ref U1) (pin 1))", "(node (pin 1))", "a pin on a net is not complete", "(node (pin 1))"),
        ("))\n    (net (code 2)", ") (code 2)", "a net has two of `code`", "(code 2)"),
        ("(ref U1) (pin 1)", "(ref U1) (pin 1) x", "a pin on a net holds a text", "(node (ref U1) (pin 1) x"),
        ("(ref U1) (value INF)", "(ref U1) (value INF) (ref U2)", "a component has two references", "(ref U2)"),
        ("(part LD)\n", "\n", "a library part has no name", "(libpart (lib reg)"),
        ("(num 1) ", "", "a pin of a library part has no number", "(pins"),
    ] {
        let text = BOARD_D.replace(from, to);
        assert_ne!(text, BOARD_D);
        let (netlist, errors) = damaged(&text);
        let error =
            errors.iter().find(|error| error.message().contains(message)).unwrap_or_else(|| panic!("{errors:?}"));
        let (source, span) = error.place().unwrap();
        assert!(source.slice(span).starts_with(place), "{}", source.slice(span));
        assert!(netlist.components.iter().any(|component| component.reference == "C1"));
    }
}

#[test]
fn a_truncated_file_keeps_what_is_complete_and_says_where_it_ends() {
    let end = BOARD_D.find("(node (ref U1) (pin 1))").unwrap();
    let (netlist, errors) = damaged(&BOARD_D[..end]);
    assert_eq!((netlist.components.len(), netlist.nets.len()), (2, 1));
    assert_eq!(errors.len(), 1, "{errors:?}");
    assert_eq!(errors[0].message(), "the file ends inside a net");
    let between = BOARD_D.find("(net (code 2)").unwrap();
    assert!(damaged(&BOARD_D[..between]).1[0].message().contains("still open"));
    let end = BOARD_XML.find("</nets>").unwrap();
    let (netlist, errors) = damaged(&BOARD_XML[..end]);
    assert_eq!((netlist.nets.len(), errors.len()), (1, 1));
    let end = BOARD_XML.find("<node").unwrap();
    assert_eq!(damaged(&BOARD_XML[..end]).1[0].message(), "the file ends inside a net");
}

#[test]
fn a_damaged_element_loses_itself_alone() {
    for (from, to) in [("</net>", ""), ("<tstamps>", ""), ("code=\"1\"", "code=\"1"), ("&lt;1\" pin", "&lol;\" pin")]
    {
        let text = BOARD_XML.replacen(from, to, 1);
        assert_ne!(text, BOARD_XML);
        let (netlist, errors) = damaged(&text);
        assert_eq!(netlist.components.len() + netlist.nets.len(), 1, "{to}: {errors:?}");
        assert!(errors[0].place().is_some() && errors[0].advice().is_some(), "{errors:?}");
    }
}

#[test]
fn two_components_of_one_reference_and_two_nets_of_one_code_are_errors() {
    let (netlist, errors) = damaged(&BOARD_D.replace("(ref U1) (value", "(ref C1) (value"));
    assert_eq!(references(&netlist), ["C1"]);
    assert!(errors[0].message().contains("the reference C1 is used twice"), "{errors:?}");
    assert!(errors.iter().any(|error| error.message().contains("U1 is on a net but not among the components")));
    let (netlist, errors) = damaged(&BOARD_D.replace("(code 2)", "(code 1)"));
    assert_eq!((netlist.nets.len(), errors.len()), (1, 1));
    assert!(errors[0].message().contains("the net code 1 is used twice"), "{errors:?}");
}

#[test]
fn a_repeated_name_and_a_pin_on_two_nets_are_warnings() {
    let text = BOARD_D.replace("MCLR'/VPP;RA3", "-12V").replace("(node (ref U1) (pin 1))", "(node (ref C1) (pin 1))");
    let netlist = read("board.net", text.as_bytes()).unwrap();
    assert!(netlist.is_complete());
    let messages: Vec<_> = netlist.problems.iter().map(Problem::message).collect();
    assert_eq!(messages, ["two nets are named -12V", "pin 1 of C1 is on several nets"]);
    let unnamed = BOARD_D.replace("MCLR'/VPP;RA3", "\"\"").replace("-12V", "\"\"");
    assert_eq!(good(&unnamed).nets.len(), 2);
}

#[test]
fn a_second_netlist_in_one_file_is_an_error() {
    let (netlist, errors) = damaged(&format!("{BOARD_D}{BOARD_D}"));
    assert_eq!((netlist.components.len(), errors.len()), (2, 1));
    assert!(errors[0].message().contains("second netlist"));
}

#[test]
fn what_is_no_netlist_is_refused_by_what_it_looks_like() {
    for (bytes, what) in [
        (&b""[..], "empty"),
        (b" \r\n\t", "empty"),
        (b"# EESchema Netlist Version 1.1 created  x\n(\n", "a netlist of a much older format"),
        (b"(kicad_pcb (version 20211014)", "a board layout"),
        (b"(kicad_sch (version 20211014)", "a schematic"),
        (b"EESchema Schematic File Version 4\n", "a schematic of an older format"),
        (b"(kicad_symbol_lib", "a symbol library"),
        (b"EESchema-LIBRARY Version 2.4\n", "a symbol library of an older format"),
        (b"* rail\nV1 1 0 5\n.end\n", "a SPICE deck"),
        (b"rail\nV1 1 0 5\n.TRAN 1u 1m\n", "a SPICE deck"),
        (b"\x89PNG\r\n\x1a\n\0\0", "a PNG image"),
        (b"PK\x03\x04aaa", "a ZIP archive"),
        (b"%PDF-1.7\n", "a PDF document"),
        (b"\x01\x00\x02\x00\x03", "binary data"),
        (b"<!DOCTYPE html>\n<html>", "an HTML page"),
        (b"<html><body>", "an HTML page"),
        (b"<?xml version='1.0'?><!-- x --><svg>", "an SVG drawing"),
        (b"<a><b/></a>", "XML of another kind"),
        (b"{\"board\": {}}", "JSON"),
        (b"good morning", "text of another kind"),
        (b"(export\xff)", "not UTF-8 at byte 7"),
        (b"\xff\xfe(\0e\0", "UTF-16"),
        (b"(\0e\0x\0", "UTF-16"),
    ] {
        let problem = refused(bytes);
        assert!(problem.message().contains(what), "{what}: {}", problem.message());
        assert!(problem.advice().unwrap().contains("export a netlist"), "{what}");
    }
}

#[test]
fn the_place_of_a_bad_byte_is_shown() {
    let problem = refused("(export (nets \u{b5}".bytes().chain([0xC3, b'(']).collect::<Vec<_>>().as_slice());
    assert_eq!(problem.message(), "the text is not UTF-8 at byte 16");
    let (source, span) = problem.place().unwrap();
    assert_eq!(source.slice(span), "\u{fffd}");
}

#[test]
fn a_lost_head_or_section_is_an_error() {
    for (from, to, message) in [
        ("(comp (ref U1)", "(cmp (ref U1)", "a list of an unknown kind"),
        ("(nets", "(nts", "no section `nets`"),
        ("(components", "(cmponents", "no section `components`"),
    ] {
        let (_, errors) = damaged(&BOARD_D.replace(from, to));
        assert!(errors.iter().any(|error| error.message().contains(message)), "{errors:?}");
    }
    let (_, errors) = damaged(&BOARD_XML.replace("net>", "nat>").replace("<net ", "<nat "));
    assert!(errors[0].message().contains("an unknown element"), "{errors:?}");
}

#[test]
fn an_unknown_version_is_read_with_a_warning() {
    let netlist = read("board.net", BOARD_D.replace("(version D)", "(version F)").as_bytes()).unwrap();
    assert!(netlist.is_complete() && netlist.problems.len() == 1);
    assert_eq!((netlist.format, netlist.version.as_str(), netlist.components.len()), (Format::D, "F", 2));
}

#[test]
fn each_limit_is_told_and_what_came_before_is_kept() {
    let limits = Limits::default();
    let small = [
        (Limits { components: 1, ..limits }, "more than 1 components"),
        (Limits { parts: 0, ..limits }, "more than 0 library parts"),
        (Limits { nets: 1, ..limits }, "more than 1 nets"),
        (Limits { nodes: 2, ..limits }, "more than 2 pins on nets"),
        (Limits { items: 20, ..limits }, "holds more than 20 texts and lists"),
    ];
    for (limits, message) in small {
        let problems = match read_within("board.net", BOARD_D.as_bytes(), &limits) {
            Ok(netlist) => netlist.problems,
            Err(problems) => problems,
        };
        assert!(problems.iter().any(|problem| problem.message().contains(message)), "{message}: {problems:?}");
    }
    let too_long = read_within("board.net", BOARD_D.as_bytes(), &Limits { bytes: 100, ..limits }).unwrap_err();
    assert!(too_long[0].message().contains("more than the 100"), "{too_long:?}");
}

#[test]
fn a_net_that_is_read_in_pieces_is_the_same_net() {
    let pieces = Limits { piece: 0, ..Limits::default() };
    let messages =
        |netlist: &Netlist| netlist.problems.iter().map(|each| each.message().to_owned()).collect::<Vec<_>>();
    let lost_pin = BOARD_D.replace("(ref U1) (pin 1)", "(ref U1)");
    let twice_named = BOARD_D.replace("(name -12V)", "(name -12V) (name -12V)");
    let stray = BOARD_D.replace("(name -12V)", "(name -12V) stray");
    for text in [BOARD_D, &lost_pin, &twice_named, &stray] {
        let whole = read("board.net", text.as_bytes()).unwrap();
        let cut = read_within("board.net", text.as_bytes(), &pieces).unwrap();
        assert_eq!((&cut.nets, &cut.components, &cut.parts), (&whole.nets, &whole.components, &whole.parts));
        assert_eq!(messages(&cut), messages(&whole));
    }
}

#[test]
fn a_net_that_is_read_in_pieces_and_damaged_is_left_out_whole() {
    let pieces = Limits { piece: 0, ..Limits::default() };
    let open_quote = BOARD_D.replace("(ref U1) (pin 0805)", "(ref U1) (pin \"0805)");
    let unclosed = BOARD_D.replace("(node (ref U1) (pin 0805)))", "(node (ref U1) (pin 0805))");
    for text in [open_quote, unclosed] {
        let netlist = read_within("board.net", text.as_bytes(), &pieces).unwrap();
        assert!(!netlist.is_complete());
        let codes: Vec<&str> = netlist.nets.iter().map(|net| net.code.as_str()).collect();
        assert_eq!(codes, ["2"], "{:?}", netlist.problems);
        assert_eq!(netlist.nets[0].nodes.len(), 1);
    }
    let cut_off = BOARD_D.split_once("(node (ref U1) (pin 0805)").unwrap().0;
    let netlist = read_within("board.net", cut_off.as_bytes(), &pieces).unwrap();
    assert!(netlist.nets.is_empty() && netlist.components.len() == 2);
}

#[test]
fn nesting_is_read_up_to_the_limit() {
    let nested = |depth: usize| {
        let inner = depth - 3;
        format!("(export (components (comp (ref A1) {}{})) (nets))", "(x ".repeat(inner), ")".repeat(inner))
    };
    assert_eq!(good(&nested(MAX_DEPTH)).components.len(), 1);
    let message = refused(nested(MAX_DEPTH + 1).as_bytes()).message().to_owned();
    assert!(message.contains("nest more than 64 deep"), "{message}");
}

#[test]
fn fields_beyond_the_limit_are_an_error() {
    let fields: String = (0..MAX_FIELDS + 1).map(|at| format!("(field (name F{at}) x)")).collect();
    let (netlist, errors) = damaged(&format!("(export (components (comp (ref A1) (fields {fields}))) (nets))"));
    assert_eq!((netlist.components[0].fields.len(), errors.len()), (MAX_FIELDS, 1));
}

#[test]
fn a_flood_of_problems_is_counted() {
    let nets: String =
        (0..2 * MAX_PROBLEMS).map(|at| format!("(net (code {at}) (name N) (node (ref U{at}) (pin 1)))")).collect();
    let netlist = read("board.net", format!("(export (components) (nets {nets}))").as_bytes()).unwrap();
    assert_eq!(netlist.problems.len(), 2 * MAX_PROBLEMS + 2);
    let last = &netlist.problems[2 * MAX_PROBLEMS..];
    assert_eq!(last[0].message(), "200 more errors are not listed");
    assert_eq!(last[1].message(), "199 more warnings are not listed");
}

#[test]
fn a_section_whose_name_was_lost_is_told() {
    let (netlist, errors) = damaged(&BOARD_D.replace("    (net (code 2)", "    )((net (code 2)"));
    assert_eq!(netlist.nets.len(), 1);
    assert!(errors[0].message().starts_with("a list without a name"), "{errors:?}");
}

/// A text as it may stand bare.
fn bare() -> impl Strategy<Value = String> {
    "[^ \t\r\n()\"][^ \t\r\n()]{0,12}"
}

/// A text inside quotes.
fn quoted(text: &str) -> String {
    let escaped = text.replace('\\', "\\\\").replace('"', "\\\"").replace('\n', "\\n").replace('\r', "\\r");
    format!("\"{escaped}\"")
}

proptest! {
    #[test]
    fn any_bare_text_comes_out_as_written(value in bare(), name in bare()) {
        let text = format!("(export (components (comp (ref A1) (value {value}))) (nets (net (code 1) (name {name}))))");
        let netlist = good(&text);
        prop_assert_eq!(&netlist.components[0].value, &value);
        prop_assert_eq!(&netlist.nets[0].name, &name);
        prop_assert_eq!(netlist.source.slice(netlist.nets[0].name_span), name);
    }

    #[test]
    fn any_quoted_text_comes_out_as_written(value in "\\PC{0,12}|[\\x00-\\x7f]{0,12}", blank in "[ \t\r\n]{1,3}") {
        let text = format!("(export (components (comp (ref{blank}\"A1\") (value{blank}{}))) (nets))", quoted(&value));
        let netlist = good(&text);
        prop_assert_eq!(&netlist.components[0].value, &value);
        prop_assert_eq!(netlist.source.slice(netlist.components[0].reference_span), "\"A1\"");
    }

    #[test]
    fn any_damage_is_survived_and_what_is_left_is_in_order(
        xml in any::<bool>(), start in 0_usize..1500, length in 0_usize..40, put in "[()\"<>/= a\\\\]{0,3}", cut in any::<bool>(),
    ) {
        let board = if xml { BOARD_XML } else { BOARD_D };
        let mut bytes = board.as_bytes().to_vec();
        let start = start.min(bytes.len());
        let end = if cut { bytes.len() } else { (start + length).min(bytes.len()) };
        bytes.splice(start..end, put.bytes());
        match read("board.net", &bytes) {
            Err(problems) => prop_assert!(problems.iter().any(|problem| problem.severity() == Severity::Error)),
            Ok(netlist) => {
                let spans = netlist.components.iter().map(|each| each.span).chain(netlist.nets.iter().map(|each| each.span));
                let starts: Vec<_> = spans.map(|span| span.start()).collect();
                prop_assert!(starts.is_sorted(), "{starts:?}");
                let lost = netlist.components.len() + netlist.nets.len() < good(board).components.len() + good(board).nets.len();
                prop_assert!(!lost || !netlist.is_complete(), "something was lost silently");
            }
        }
    }

    #[test]
    fn any_bytes_are_survived(bytes in proptest::collection::vec(any::<u8>(), 0..200), start in "(\\(export |<export>)?") {
        let all: Vec<u8> = start.bytes().chain(bytes).collect();
        prop_assert!(read("board.net", &all).is_ok() || read("board.net", &all).is_err());
    }
}
