//! Real netlists, where the folder with them stands beside the crate.

use super::show::file;
use gainsay::source::decode;
use std::path::Path;

#[test]
fn every_file_gives_elements_or_a_diagnostic() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../shared/corpus/files");
    let Ok(entries) = std::fs::read_dir(folder) else { return };
    for entry in entries {
        let path = entry.unwrap().path();
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        let Ok(text) = decode(&std::fs::read(&path).unwrap()) else { continue };
        let read = file(&name, &text);
        let elements = |scope: &gainsay::netlist::Scope| scope.elements.len();
        let count = elements(&read.netlist.top)
            + read.netlist.subcircuits.iter().map(|subcircuit| elements(&subcircuit.body)).sum::<usize>();
        assert!(0 < count || !read.faults.is_empty(), "{name}");
    }
}
