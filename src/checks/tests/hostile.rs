//! Texts that nobody would write.

use std::collections::BTreeMap;

use proptest::prelude::*;

use super::fake::NAMES;
use crate::checks::Template;
use crate::checks::language::{Scope, sentence};
use crate::facts::SubjectKind;

/// Pieces of the language and of nothing, in any order.
fn text() -> impl Strategy<Value = String> {
    let pieces = [
        "headroom", "kind", "x.y", "2 V", "4u7", "1e", "..", "(", ")", "{", "}", "min(", ",", "and", "or", "not",
        "-", "==", ">=", "<", "within", "is", "known", "in", "for", "each", ":", "'", "\"", "µ", "°", "\u{0}", "é",
        " ", "5 %",
    ];
    let piece = prop_oneof![4 => proptest::sample::select(pieces.to_vec()).prop_map(str::to_owned), 1 => ".{0,3}"];
    proptest::collection::vec(piece, 0..40).prop_map(|pieces| pieces.concat())
}

proptest! {
    #[test]
    fn every_text_is_read_or_refused_inside_itself(text in text()) {
        let settings = BTreeMap::new();
        let mut scope = Scope { names: &NAMES, about: SubjectKind::Regulator, settings: &settings, each: None };
        let template = Template::read(&text, &scope).err();
        let read = sentence(&text).and_then(|sentence| scope.requirement(&sentence)).err();
        for refusal in [template, read].into_iter().flatten() {
            let span = refusal.span;
            prop_assert!(text.get(span.start()..span.end()).is_some(), "{text:?} {refusal:?}");
            prop_assert!(!refusal.message.is_empty());
        }
    }
}

#[test]
fn long_and_deep_texts_are_refused() {
    for text in ["not ".repeat(10_000), "-".repeat(10_000), "(".repeat(100_000), "headroom + ".repeat(100_000)] {
        assert!(sentence(&text).is_err());
    }
    assert!(sentence(&vec!["headroom"; 200].join(" + ")).is_err());
}
