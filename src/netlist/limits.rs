//! How much of a file is read: past a limit reading stops with an error, so that no file can take the machine down.

/// Largest file, in bytes: some ten times a board of ten thousand parts in the widest layout.
pub const MAX_BYTES: usize = 256 * 1024 * 1024;

/// Deepest nesting of lists or elements; exports nest 8 deep.
pub const MAX_DEPTH: usize = 64;

/// Most texts and lists in one component, library part or net: a net of 500 000 pins with all that a pin can carry.
pub const MAX_ITEMS: usize = 8_000_000;

/// Most components.
pub const MAX_COMPONENTS: usize = 500_000;

/// Most library parts.
pub const MAX_PARTS: usize = 100_000;

/// Most nets.
pub const MAX_NETS: usize = 1_000_000;

/// Most pins on nets, over the whole board.
pub const MAX_NODES: usize = 2_000_000;

/// Most fields on one component or library part; those behind are an error.
pub const MAX_FIELDS: usize = 256;

/// Most attributes on one XML element; exports write 4.
pub const MAX_ATTRIBUTES: usize = 64;

/// A net that is longer than this many bytes is parsed in pieces: the lists of a ground net of a large board are many
/// times as large as what is kept of them.
pub const PIECE_BYTES: usize = 16 * 1024;

/// Most errors, and most warnings, told one by one; the rest is counted.
pub const MAX_PROBLEMS: usize = 200;

/// The limits in force, so that tests can meet small ones.
#[derive(Debug, Clone, Copy)]
pub(super) struct Limits {
    pub(super) bytes: usize,
    pub(super) depth: usize,
    pub(super) items: usize,
    pub(super) components: usize,
    pub(super) parts: usize,
    pub(super) nets: usize,
    pub(super) nodes: usize,
    pub(super) attributes: usize,
    pub(super) piece: usize,
}

impl Default for Limits {
    fn default() -> Self {
        Self {
            bytes: MAX_BYTES,
            depth: MAX_DEPTH,
            items: MAX_ITEMS,
            components: MAX_COMPONENTS,
            parts: MAX_PARTS,
            nets: MAX_NETS,
            nodes: MAX_NODES,
            attributes: MAX_ATTRIBUTES,
            piece: PIECE_BYTES,
        }
    }
}
