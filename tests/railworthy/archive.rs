//! Reads the compressed collections of shared test data without help from outside.

use std::collections::BTreeMap;
use std::fs::File;
use std::io::{BufReader, Read};
use std::path::Path;

/// The files of a `.tar.xz` by their path in it.
pub(crate) fn unpack(path: &Path) -> BTreeMap<String, Vec<u8>> {
    let mut tar_bytes = Vec::new();
    lzma_rs::xz_decompress(&mut BufReader::new(File::open(path).unwrap()), &mut tar_bytes).unwrap();
    let mut archive = tar::Archive::new(tar_bytes.as_slice());
    let mut files = BTreeMap::new();
    for entry in archive.entries().unwrap() {
        let mut entry = entry.unwrap();
        let name = entry.path().unwrap().to_string_lossy().trim_start_matches("./").to_owned();
        let mut bytes = Vec::new();
        entry.read_to_end(&mut bytes).unwrap();
        files.insert(name, bytes);
    }
    files
}
