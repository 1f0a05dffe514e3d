//! The objects of the format that are written, by the names of the standard.

use std::collections::BTreeMap;

use serde::Serialize;

use crate::report::json_value::Bounds;

/// The published schema of the version.
pub(super) const SCHEMA: &str =
    "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json";
/// The version.
pub(super) const VERSION: &str = "2.1.0";

#[derive(Debug, Serialize)]
pub(super) struct Log {
    #[serde(rename = "$schema")]
    pub(super) schema: &'static str,
    pub(super) version: &'static str,
    pub(super) runs: Vec<Run>,
}

#[derive(Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct Run {
    pub(super) tool: Tool,
    pub(super) invocations: Vec<Invocation>,
    pub(super) original_uri_base_ids: BTreeMap<&'static str, Base>,
    pub(super) artifacts: Vec<Artifact>,
    pub(super) column_kind: &'static str,
    pub(super) newline_sequences: [&'static str; 2],
    pub(super) language: &'static str,
    pub(super) results: Vec<ResultEntry>,
}

#[derive(Debug, Serialize)]
pub(super) struct Base {
    pub(super) description: Text,
}

#[derive(Debug, Serialize)]
pub(super) struct Tool {
    pub(super) driver: Driver,
}

#[derive(Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct Driver {
    pub(super) name: &'static str,
    pub(super) version: &'static str,
    pub(super) semantic_version: &'static str,
    pub(super) information_uri: &'static str,
    pub(super) short_description: Text,
    pub(super) language: &'static str,
    pub(super) rules: Vec<Descriptor>,
    pub(super) notifications: Vec<Descriptor>,
}

/// A rule, or a kind of notification.
#[derive(Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct Descriptor {
    pub(super) id: String,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) name: Option<String>,
    pub(super) short_description: Text,
    pub(super) full_description: Text,
    pub(super) help: Help,
    pub(super) default_configuration: Configuration,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) properties: Option<RuleProperties>,
}

#[derive(Debug, Serialize)]
pub(super) struct Configuration {
    pub(super) level: &'static str,
}

#[derive(Debug, Serialize)]
pub(super) struct RuleProperties {
    #[serde(rename = "problem.severity")]
    pub(super) severity: &'static str,
    pub(super) tags: Vec<String>,
}

/// A message in plain text.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub(super) struct Text {
    text: String,
}

impl Text {
    pub(super) fn new(text: String) -> Self {
        Self { text }
    }

    pub(super) fn as_str(&self) -> &str {
        &self.text
    }
}

#[derive(Debug, Serialize)]
pub(super) struct Help {
    pub(super) text: String,
    pub(super) markdown: String,
}

#[derive(Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct Invocation {
    pub(super) execution_successful: bool,
    pub(super) tool_configuration_notifications: Vec<Notification>,
    pub(super) tool_execution_notifications: Vec<Notification>,
}

#[derive(Debug, Serialize)]
pub(super) struct Notification {
    pub(super) descriptor: DescriptorReference,
    pub(super) level: &'static str,
    pub(super) message: Text,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub(super) locations: Vec<Location>,
}

#[derive(Debug, Serialize)]
pub(super) struct DescriptorReference {
    pub(super) id: &'static str,
    pub(super) index: usize,
}

#[derive(Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct Artifact {
    pub(super) location: ArtifactLocation,
    pub(super) roles: [&'static str; 1],
    pub(super) mime_type: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) encoding: Option<&'static str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) length: Option<usize>,
    #[serde(skip_serializing_if = "BTreeMap::is_empty")]
    pub(super) hashes: BTreeMap<&'static str, String>,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct ArtifactLocation {
    pub(super) uri: String,
    pub(super) uri_base_id: &'static str,
    pub(super) index: usize,
}

#[derive(Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct ResultEntry {
    pub(super) rule_id: String,
    pub(super) rule_index: usize,
    pub(super) kind: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) baseline_state: Option<&'static str>,
    pub(super) level: &'static str,
    pub(super) message: Text,
    pub(super) locations: [Location; 1],
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub(super) related_locations: Vec<Location>,
    pub(super) partial_fingerprints: BTreeMap<&'static str, String>,
    pub(super) suppressions: Vec<Suppression>,
    pub(super) properties: ResultProperties,
}

#[derive(Debug, Default, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct Location {
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) id: Option<usize>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) message: Option<Text>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) physical_location: Option<PhysicalLocation>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub(super) logical_locations: Vec<LogicalLocation>,
}

#[derive(Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct PhysicalLocation {
    pub(super) artifact_location: ArtifactLocation,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) region: Option<Region>,
}

/// A run of characters by lines, characters and bytes; the end column is the one behind the last.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct Region {
    pub(super) start_line: usize,
    pub(super) start_column: usize,
    pub(super) end_line: usize,
    pub(super) end_column: usize,
    pub(super) char_offset: usize,
    pub(super) char_length: usize,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) byte_offset: Option<usize>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) byte_length: Option<usize>,
}

#[derive(Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub(super) struct LogicalLocation {
    pub(super) name: String,
    pub(super) fully_qualified_name: String,
    pub(super) kind: &'static str,
}

#[derive(Debug, Serialize)]
pub(super) struct Suppression {
    pub(super) kind: &'static str,
    pub(super) status: &'static str,
    pub(super) justification: String,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) location: Option<Location>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) properties: Option<SuppressionProperties>,
}

#[derive(Debug, Serialize)]
pub(super) struct SuppressionProperties {
    pub(super) until: String,
}

/// What the tool knows beyond what the format has a place for.
#[derive(Debug, Serialize)]
pub(super) struct ResultProperties {
    pub(super) verdict: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) slack: Option<Slack>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub(super) quantities: Vec<QuantityEntry>,
}

#[derive(Debug, Serialize)]
pub(super) struct Slack {
    pub(super) value: Option<f64>,
    pub(super) unit: String,
}

#[derive(Debug, Serialize)]
pub(super) struct QuantityEntry {
    pub(super) name: String,
    #[serde(flatten)]
    pub(super) bounds: Bounds,
}
