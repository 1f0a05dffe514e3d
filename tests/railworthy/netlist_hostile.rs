//! Inputs meant to do harm: each is read or refused, at once, in little room, and never ends the process.

use std::fmt::Write;
use std::time::{Duration, Instant};

use railworthy::netlist::{self, Netlist};
use railworthy::source::Problem;

/// A netlist of one part whose pins are on nets of these names.
fn board(names: &[String]) -> String {
    let mut text = String::from("(export (version \"E\") (components (comp (ref \"U1\"))) (nets ");
    for (code, name) in names.iter().enumerate() {
        let name = name.replace('\\', "\\\\").replace('"', "\\\"");
        let _ = writeln!(text, "(net (code \"{code}\") (name \"{name}\") (node (ref \"U1\") (pin \"{code}\")))");
    }
    text + "))\n"
}

fn read(bytes: &[u8]) -> Result<Netlist, Vec<Problem>> {
    netlist::read("hostile.net", bytes)
}

/// The message of a refusal that came within a second or two of a debug build.
fn refused_at_once(bytes: &[u8]) -> String {
    let started = Instant::now();
    let problems = read(bytes).unwrap_err();
    assert!(started.elapsed() < Duration::from_secs(5), "{:?}", started.elapsed());
    problems[0].message().to_owned()
}

#[test]
fn names_with_control_signs_and_markup_come_out_as_written() {
    let names = [
        "\u{1b}[2J\u{1b}]0;owned\u{7}",
        "GND\u{202e}DNG\u{2066}",
        "\u{9b}31mX",
        "\u{2028}line",
        "x\n::error file=a::forged",
        "\r::add-mask::a",
        "</script><script>",
        "]]></title>",
        "\0",
        "\u{1}",
        "\u{fffe}",
        "\u{7f}",
        "; not a comment",
        "a\\b\"c",
        "GND",
        "gnd",
        "GND\u{200b}",
        "cafe\u{301}",
        "caf\u{e9}",
        " GND",
    ]
    .map(String::from);
    let netlist = read(board(&names).as_bytes()).unwrap();
    assert!(netlist.is_complete() && netlist.problems.is_empty(), "{:?}", netlist.problems);
    let read: Vec<&String> = netlist.nets.iter().map(|net| &net.name).collect();
    assert_eq!(read, names.iter().collect::<Vec<_>>());
}

#[test]
fn deep_nesting_is_refused_even_in_a_small_thread() {
    let count = 200_000;
    let lists = format!("(export {}{})", "(a ".repeat(count), ")".repeat(count));
    let inside = format!("(export (components (comp (ref A1) {}{})))", "(a ".repeat(count), ")".repeat(count));
    let open = format!("(export (nets (net {}", "(".repeat(count));
    let elements = "<a>".repeat(count) + &"</a>".repeat(count);
    let export = format!("<export>{elements}</export>");
    let thread = std::thread::Builder::new()
        .stack_size(2 * 1024 * 1024)
        .spawn(move || [lists, inside, open, export].map(|text| refused_at_once(text.as_bytes())));
    for message in thread.unwrap().join().unwrap() {
        assert!(message.contains("nest more than 64 deep"), "{message}");
    }
    assert!(refused_at_once(elements_alone().as_bytes()).contains("XML of another kind"));
}

fn elements_alone() -> String {
    "<a>".repeat(200_000) + &"</a>".repeat(200_000)
}

#[test]
fn a_document_type_is_refused_before_any_entity_is_read() {
    let mut bomb = String::from("<?xml version=\"1.0\"?><!DOCTYPE a [<!ENTITY l0 \"lol\">");
    for level in 1..10 {
        let _ = write!(bomb, "<!ENTITY l{level} \"{}\">", format!("&l{};", level - 1).repeat(10));
    }
    bomb += "]><export><name>&l9;</name></export>";
    let long =
        format!("<!DOCTYPE a [<!ENTITY x \"{}\">]><export>{}</export>", "A".repeat(100_000), "&x;".repeat(20_000));
    let outside = "<!DOCTYPE a [<!ENTITY x SYSTEM \"file:///etc/hostname\">]><export>&x;</export>";
    for text in [bomb.as_str(), long.as_str(), outside] {
        assert_eq!(refused_at_once(text.as_bytes()), "a document type is not allowed");
    }
}

#[test]
fn floods_of_attributes_and_namespaces_are_refused() {
    let mut flood = String::from("<export ");
    for at in 0..100_000 {
        let _ = write!(flood, "a{at}=\"1\" ");
    }
    assert!(refused_at_once((flood + "/>").as_bytes()).contains("more than 64 attributes"));
    let scopes = "<export><nets><net code=\"1\" name=\"N\"><a xmlns:b=\"c\"/></net></nets></export>";
    assert!(refused_at_once(scopes.as_bytes()).contains("declares a namespace"));
}

#[test]
fn a_net_of_very_many_pins_takes_time_in_proportion() {
    let text = |count: usize| {
        let nodes: String = (0..count).map(|at| format!("(node (ref \"U{at}\") (pin \"1\"))")).collect();
        format!("(export (components) (nets (net (code \"1\") (name \"GND\"){nodes})))")
    };
    let (small, large) = (text(20_000), text(80_000));
    let time = |text: &str| {
        let times = (0..3).map(|_| {
            let started = Instant::now();
            assert!(read(text.as_bytes()).is_ok_and(|netlist| !netlist.is_complete()));
            started.elapsed()
        });
        times.min().unwrap_or_default()
    };
    let (small, large) = (time(&small), time(&large));
    assert!(large < small * 12, "4 times the pins took {large:?} after {small:?}");
}

#[test]
fn one_net_repeated_on_one_line_is_told_in_few_words() {
    let text = format!(
        "(export (nets {}))",
        "(net (code \"1\") (name \"N\") (node (ref \"U1\") (pin \"1\")))".repeat(50_000)
    );
    let netlist = read(text.as_bytes()).unwrap();
    assert_eq!(netlist.nets.len(), 1);
    assert!(!netlist.is_complete() && netlist.problems.len() < 500);
    let (source, span) = netlist.problems[1].place().unwrap();
    assert_eq!(source.position(span.start()).line, 1);
}

#[test]
fn texts_that_look_like_numbers_stay_texts() {
    for value in ["1e400", "NaN", "-0", "99999999999999999999999", "1e-5000", "10kk", "inf", "0805", "+1", ".5"] {
        for written in [value.to_owned(), format!("\"{value}\"")] {
            let text = format!(
                "(export (components (comp (ref R1) (value {written}))) (nets (net (code -1) (name A)) (net (code 18446744073709551616) (name B))))"
            );
            let netlist = read(text.as_bytes()).unwrap();
            assert_eq!(netlist.components[0].value, value);
            assert_eq!(netlist.nets[1].code, "18446744073709551616");
        }
    }
}

#[test]
fn encodings_are_told_apart() {
    assert_eq!(
        refused_at_once(b"(export (nets (net (name \"\xc3\x28\xff\") (code \"1\"))))"),
        "the text is not UTF-8 at byte 26"
    );
    let utf16: Vec<u8> = "\u{feff}(export)".encode_utf16().flat_map(u16::to_le_bytes).collect();
    assert!(refused_at_once(&utf16).contains("UTF-16"));
    assert!(refused_at_once(&utf16[2..]).contains("UTF-16"));
    let mixed = "\u{feff}(export\r\n(nets\r(net (code \"1\")\n(name \"\u{85}\u{2028}\u{1f600}Q\")))\n)";
    let netlist = read(mixed.as_bytes()).unwrap();
    assert_eq!(netlist.nets[0].name, "\u{85}\u{2028}\u{1f600}Q");
    let position = netlist.source.position(netlist.nets[0].name_span.start());
    assert_eq!((position.line, position.column), (3, 7));
}

#[test]
fn many_open_quotes_and_brackets_take_no_more_than_a_walk() {
    let shapes = ["\"a\n", "(comp \"\n", "(net (", ")", "<comp a=\"", "<net><", "(nets ", "\"\\\" "];
    for shape in shapes {
        for start in ["(export (components ", "<export><components>"] {
            let text = format!("{start}{}", shape.repeat(100_000));
            let started = Instant::now();
            let outcome = read(text.as_bytes());
            assert!(outcome.is_err() || outcome.is_ok_and(|netlist| !netlist.is_complete()), "{shape}");
            assert!(started.elapsed() < Duration::from_secs(10), "{shape}: {:?}", started.elapsed());
        }
    }
}
