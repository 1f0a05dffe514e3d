//! Builds anew when a file is added to or taken out of `rules/`, whose files are compiled in.

#[allow(clippy::print_stdout)] // this is how a build script speaks
fn main() {
    println!("cargo:rerun-if-changed=rules");
}
