//! JSON as bytes that act on nothing: what is not plain in a text is written as an escape, which reads back the same.

use std::io::{self, Write};

use serde::Serialize;
use serde_json::ser::{Formatter, PrettyFormatter, Serializer};

use super::inert::acts;

/// Something as indented JSON with a line feed at its end.
pub(super) fn text(value: &impl Serialize) -> String {
    let mut bytes = Vec::new();
    let mut serializer = Serializer::with_formatter(&mut bytes, Inert(PrettyFormatter::with_indent(b"  ")));
    // Writing into memory does not fail, and every key is a text.
    if value.serialize(&mut serializer).is_err() {
        return String::new();
    }
    let mut text = String::from_utf8_lossy(&bytes).into_owned();
    text.push('\n');
    text
}

/// The pretty layout with escapes for what acts on terminals and for what logs take for commands.
struct Inert<'a>(PrettyFormatter<'a>);

impl Formatter for Inert<'_> {
    fn write_string_fragment<W: ?Sized + Write>(&mut self, writer: &mut W, fragment: &str) -> io::Result<()> {
        let mut last = ' ';
        for sign in fragment.chars() {
            if acts(sign) || (sign == '#' && last == '#') {
                let mut units = [0; 2];
                for unit in sign.encode_utf16(&mut units) {
                    write!(writer, "\\u{unit:04x}")?;
                }
            } else {
                let mut bytes = [0; 4];
                writer.write_all(sign.encode_utf8(&mut bytes).as_bytes())?;
            }
            last = sign;
        }
        Ok(())
    }

    fn begin_array<W: ?Sized + Write>(&mut self, writer: &mut W) -> io::Result<()> {
        self.0.begin_array(writer)
    }

    fn end_array<W: ?Sized + Write>(&mut self, writer: &mut W) -> io::Result<()> {
        self.0.end_array(writer)
    }

    fn begin_array_value<W: ?Sized + Write>(&mut self, writer: &mut W, first: bool) -> io::Result<()> {
        self.0.begin_array_value(writer, first)
    }

    fn end_array_value<W: ?Sized + Write>(&mut self, writer: &mut W) -> io::Result<()> {
        self.0.end_array_value(writer)
    }

    fn begin_object<W: ?Sized + Write>(&mut self, writer: &mut W) -> io::Result<()> {
        self.0.begin_object(writer)
    }

    fn end_object<W: ?Sized + Write>(&mut self, writer: &mut W) -> io::Result<()> {
        self.0.end_object(writer)
    }

    fn begin_object_key<W: ?Sized + Write>(&mut self, writer: &mut W, first: bool) -> io::Result<()> {
        self.0.begin_object_key(writer, first)
    }

    fn begin_object_value<W: ?Sized + Write>(&mut self, writer: &mut W) -> io::Result<()> {
        self.0.begin_object_value(writer)
    }

    fn end_object_value<W: ?Sized + Write>(&mut self, writer: &mut W) -> io::Result<()> {
        self.0.end_object_value(writer)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn a_text_reads_back_the_same_and_acts_on_nothing(value in "(?s).{0,40}|[#\\[\\\\\"\u{0}-\u{20}\u{fe}-\u{ff}]{0,20}") {
            let text = text(&[value.as_str()]);
            let read: Vec<String> = serde_json::from_str(&text).unwrap();
            prop_assert_eq!(&read[0], &value);
            prop_assert!(!text.replace('\n', "").contains(acts));
            prop_assert!(!text.contains("##"));
        }
    }
}
