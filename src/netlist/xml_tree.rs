//! An XML element as the nested lists that the S-expression form gives.

use roxmltree::Node;
use sexp::{Atom, Sexp};

use super::island::Place;
use crate::source::Span;

/// A text as the parser gives it.
pub(super) fn atom(text: &str) -> Sexp {
    Sexp::Atom(Atom::S(text.to_owned()))
}

/// An element whose content is being gathered.
struct Frame<'a, 'input> {
    children: roxmltree::Children<'a, 'input>,
    list: Vec<Sexp>,
    text: String,
    has_elements: bool,
}

impl<'a, 'input> Frame<'a, 'input> {
    fn of(node: Node<'a, 'input>) -> Self {
        let mut list = vec![atom(node.tag_name().name())];
        list.extend(node.attributes().map(|each| Sexp::List(vec![atom(each.name()), atom(each.value())])));
        Self { children: node.children(), list, text: String::new(), has_elements: false }
    }

    /// The finished list; blanks between elements are layout, not text.
    fn finish(mut self) -> Vec<Sexp> {
        let layout = self.has_elements && self.text.trim_ascii().is_empty();
        if !self.text.is_empty() && !layout {
            self.list.push(Sexp::Atom(Atom::S(self.text)));
        }
        self.list
    }
}

/// What stands in an element as lists: its name, its attributes, its elements in order, then its text.
pub(super) fn items(root: Node<'_, '_>) -> Vec<Sexp> {
    let (mut frame, mut around) = (Frame::of(root), Vec::new());
    loop {
        match frame.children.next() {
            Some(node) if node.is_element() => {
                frame.has_elements = true;
                around.push(std::mem::replace(&mut frame, Frame::of(node)));
            }
            Some(node) if node.is_text() => frame.text.push_str(node.text().unwrap_or("")),
            Some(_) => {}
            None => {
                let list = frame.finish();
                match around.pop() {
                    Some(outer) => frame = outer,
                    None => return list,
                }
                frame.list.push(Sexp::List(list));
            }
        }
    }
}

/// The places of the lists that [`items`] puts right inside the root.
pub(super) fn places(root: Node<'_, '_>, offset: usize) -> Vec<Place> {
    let of_attributes = root.attributes().map(|each| Place {
        whole: Span::from(each.range()).shifted(offset),
        value: Span::from(each.range_value()).shifted(offset),
    });
    let of_elements = root.children().filter(Node::is_element).map(|each| {
        let whole = Span::from(each.range()).shifted(offset);
        let text = each.children().find(Node::is_text).map(|text| Span::from(text.range()).shifted(offset));
        Place { whole, value: text.unwrap_or(Span::new(whole.start(), whole.start())) }
    });
    of_attributes.chain(of_elements).collect()
}
