//! The pieces of a JSON Schema (draft 2020-12).

use serde_json::{Map, Value, json};

/// The dialect.
const DIALECT: &str = "https://json-schema.org/draft/2020-12/schema";

/// A key of a table: name, what it may hold, whether it must be there.
pub(super) struct Key(pub(super) &'static str, pub(super) Value, pub(super) Presence);

/// Whether a key must be there.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Presence {
    Required,
    Optional,
}

pub(super) use Presence::{Optional, Required};

/// A whole schema: that of its root with a title.
pub(super) fn document(title: &str, root: Value) -> Value {
    let mut all = Map::new();
    all.insert("$schema".to_owned(), json!(DIALECT));
    all.insert("title".to_owned(), json!(title));
    if let Value::Object(root) = root {
        all.extend(root);
    }
    Value::Object(all)
}

/// A table with these keys and no others.
pub(super) fn table(about: &str, keys: Vec<Key>) -> Value {
    let required: Vec<&str> = keys.iter().filter(|key| key.2 == Required).map(|key| key.0).collect();
    let properties: Map<String, Value> = keys.into_iter().map(|key| (key.0.to_owned(), key.1)).collect();
    let mut schema = json!({
        "type": "object", "description": about, "properties": properties, "additionalProperties": false,
    });
    if let (Some(map), false) = (schema.as_object_mut(), required.is_empty()) {
        map.insert("required".to_owned(), json!(required));
    }
    schema
}

/// A table whose keys the user names.
pub(super) fn table_of(about: &str, each: Value) -> Value {
    json!({ "type": "object", "description": about, "additionalProperties": each })
}

/// A list of these.
pub(super) fn list(about: &str, each: Value) -> Value {
    json!({ "type": "array", "description": about, "items": each })
}

/// Any text.
pub(super) fn text(about: &str) -> Value {
    json!({ "type": "string", "description": about })
}

/// A figure with its unit, with one as it may be written.
pub(super) fn figure(about: &str, example: &str) -> Value {
    json!({ "type": "string", "description": about, "examples": [example] })
}

/// The loop that a maker publishes.
pub(super) fn published_loop(mut more: Vec<Key>) -> Value {
    let corner = |about: &str| list(about, figure("", "1 kHz"));
    let mut keys = vec![
        Key("gain", figure("At low frequencies, a ratio or in dB", "75 / 80 / 85 dB"), Required),
        Key("poles", corner("Inside the part, without that of the output"), Required),
        Key("zeros", corner("Inside the part, without that of the ESR; fewer than the poles"), Optional),
        Key("output_resistance", figure("Of the output, without the loop", "20 ohm"), Optional),
    ];
    keys.append(&mut more);
    table("The loop, where its maker publishes it", keys)
}

/// True or false.
pub(super) fn flag(about: &str) -> Value {
    json!({ "type": "boolean", "description": about })
}

/// One of these words.
pub(super) fn word<'a>(about: &str, words: impl IntoIterator<Item = &'a str>) -> Value {
    let words: Vec<&str> = words.into_iter().collect();
    json!({ "type": "string", "description": about, "enum": words })
}

/// One of several.
pub(super) fn either(about: &str, all: Vec<Value>) -> Value {
    json!({ "description": about, "anyOf": all })
}

/// The same, or nothing.
pub(super) fn or_null(mut schema: Value) -> Value {
    if let Some(kind) = schema.get_mut("type") {
        *kind = json!([kind.clone(), "null"]);
        if let Some(Value::Array(words)) = schema.get_mut("enum") {
            words.push(Value::Null);
        }
        return schema;
    }
    json!({ "anyOf": [schema, { "type": "null" }] })
}

/// Any number.
pub(super) fn number(about: &str) -> Value {
    json!({ "type": "number", "description": about })
}

/// A whole number from zero.
pub(super) fn count(about: &str) -> Value {
    json!({ "type": "integer", "minimum": 0, "description": about })
}

/// A piece that is described once.
pub(super) fn reference(name: &str) -> Value {
    json!({ "$ref": format!("#/$defs/{name}") })
}

/// A schema with pieces that it refers to.
pub(super) fn with_pieces(mut schema: Value, pieces: Vec<(&str, Value)>) -> Value {
    if let Some(map) = schema.as_object_mut() {
        let pieces: Map<String, Value> = pieces.into_iter().map(|(name, piece)| (name.to_owned(), piece)).collect();
        map.insert("$defs".to_owned(), Value::Object(pieces));
    }
    schema
}
