//! Files: netlists with their includes, budgets, profiles, packs. Includes stay inside the netlist's folder.

use crate::check::embedded;
use crate::device::{Catalogue, read_assumed, read_profiles};
use crate::diagnostic::{Diagnostic, Severity};
use crate::figure::Kind;
use crate::netlist::Include;
use crate::quantity::Unit;
use crate::rule::{Finding, Rule, read_pack};
use crate::source::{FileId, Sources, Span, decode};
use std::collections::BTreeMap;
use std::io::Read;
use std::path::{Path, PathBuf};

/// Files larger than this, in bytes, aren't read: 64 MiB.
const LARGEST: u64 = 64 << 20;

/// Endings of netlists in a folder.
const ENDINGS: [&str; 8] = ["cir", "net", "sp", "spi", "spice", "ckt", "cki", "nsp"];

/// Reads a file as text and adds it under the name it is shown by.
///
/// # Errors
/// Why it can't be read, in words.
pub(super) fn load(sources: &mut Sources, path: &Path, shown: &str) -> Result<FileId, String> {
    let text = read_text(path)?;
    Ok(sources.add(shown, text))
}

/// The same; a file that can't be read is a finding, at the beginning of an empty text of its name.
pub(super) fn open(
    sources: &mut Sources,
    path: &Path,
    shown: &str,
    findings: &mut Vec<Finding>,
) -> Option<FileId> {
    load(sources, path, shown)
        .map_err(|reason| findings.push(unreadable(sources, shown, &reason).into()))
        .ok()
}

fn unreadable(sources: &mut Sources, shown: &str, reason: &str) -> Diagnostic {
    let file = sources.add(shown, String::new());
    let message = format!("expected a text that can be read: {reason}");
    Diagnostic::at("unreadable-file", Severity::Error, Span { file, start: 0, end: 0 }, message)
}

fn read_text(path: &Path) -> Result<String, String> {
    let file = std::fs::File::open(path).map_err(|fault| reason(&fault))?;
    let facts = file.metadata().map_err(|fault| reason(&fault))?;
    if !facts.is_file() {
        return Err("it is no plain file".to_owned());
    }
    let mut bytes = Vec::new();
    // A file may grow while it is read: the bound holds for what is read, not for what was promised.
    file.take(LARGEST + 1).read_to_end(&mut bytes).map_err(|fault| reason(&fault))?;
    if LARGEST < bytes.len() as u64 {
        return Err(format!("it is larger than {} MiB, the largest that is read", LARGEST >> 20));
    }
    decode(&bytes).map_err(|fault| fault.to_string())
}

/// The kind of fault alone: an operating system's own words differ from one to the next.
fn reason(fault: &std::io::Error) -> String {
    match fault.kind() {
        std::io::ErrorKind::NotFound => "there is no such file".to_owned(),
        std::io::ErrorKind::PermissionDenied => "it may not be read".to_owned(),
        std::io::ErrorKind::IsADirectory => "it is a folder".to_owned(),
        _ => "it can't be read".to_owned(),
    }
}

/// Netlists that a path names: itself, or those of a folder and the folders in it, in the order of their names.
pub(super) fn netlists(path: &Path) -> Vec<PathBuf> {
    const DEEPEST: usize = 16;
    fn visit(folder: &Path, depth: usize, found: &mut Vec<PathBuf>) {
        let Ok(entries) = std::fs::read_dir(folder) else { return };
        let mut paths: Vec<PathBuf> = entries.filter_map(|entry| Some(entry.ok()?.path())).collect();
        paths.sort();
        for path in paths {
            let linked = path.is_symlink();
            if path.is_dir() && !linked && depth < DEEPEST {
                visit(&path, depth + 1, found);
            } else if path.is_file() && is_netlist(&path) {
                found.push(path);
            }
        }
    }
    let mut found = Vec::new();
    if path.is_dir() {
        visit(path, 0, &mut found);
    } else {
        found.push(path.to_owned());
    }
    found
}

fn is_netlist(path: &Path) -> bool {
    let ending = path.extension().and_then(|ending| ending.to_str()).unwrap_or("");
    ENDINGS.iter().any(|known| known.eq_ignore_ascii_case(ending))
}

/// Answers include lines of one netlist; files outside its folder are refused, links followed.
pub(super) struct Includer {
    root: Option<PathBuf>,
    folders: BTreeMap<FileId, (PathBuf, String)>,
    /// Files that have been read, by their true path: a file is itself under every name.
    read: BTreeMap<PathBuf, FileId>,
}

impl Includer {
    /// For a netlist at `path`, shown as `shown`.
    pub(super) fn new(path: &Path, shown: &str, file: FileId) -> Includer {
        let folder = path.parent().filter(|folder| !folder.as_os_str().is_empty()).unwrap_or(Path::new("."));
        let root = folder.canonicalize().ok();
        let shown = Path::new(shown).parent().map(|folder| folder.display().to_string()).unwrap_or_default();
        let folders = root.iter().map(|root| (file, (root.clone(), shown.clone()))).collect();
        let read = path.canonicalize().ok().into_iter().map(|path| (path, file)).collect();
        Includer { root, folders, read }
    }

    /// The answer to an include of `name` from a file.
    pub(super) fn answer(&mut self, sources: &mut Sources, name: &str, from: FileId) -> Include {
        let Some(root) = &self.root else { return Include::Missing("its folder can't be read".to_owned()) };
        let name = name.replace('\\', "/");
        let scheme = name.split_once(':').is_some_and(|(head, _)| {
            !head.is_empty() && head.bytes().all(|byte| byte.is_ascii_alphanumeric())
        });
        if scheme || name.starts_with('~') || name.contains('$') || name.contains('%') {
            return Include::Missing("it names a place of another machine".to_owned());
        }
        let (folder, shown) = match self.folders.get(&from) {
            Some((folder, shown)) => (folder.clone(), shown.clone()),
            None => (root.clone(), String::new()),
        };
        let Ok(path) = folder.join(&name).canonicalize() else {
            let outside = Path::new(&name).is_absolute() || climbs(&name);
            return match outside {
                true => Include::Refused("it lies outside the netlist's folder".to_owned()),
                false => Include::Missing("there is no such file".to_owned()),
            };
        };
        if !path.starts_with(root) {
            return Include::Refused("it lies outside the netlist's folder".to_owned());
        }
        if let Some(file) = self.read.get(&path) {
            return Include::Found(*file);
        }
        let label = if shown.is_empty() { name } else { format!("{shown}/{name}") };
        match load(sources, &path, &label) {
            Ok(file) => {
                let folder = path.parent().map(Path::to_owned).unwrap_or(folder);
                let shown = Path::new(&label).parent().map(|folder| folder.display().to_string());
                self.folders.insert(file, (folder, shown.unwrap_or_default()));
                self.read.insert(path, file);
                Include::Found(file)
            }
            Err(reason) => Include::Refused(reason),
        }
    }
}

/// Whether a relative path leaves the folder it starts in.
fn climbs(name: &str) -> bool {
    let mut depth = 0i32;
    name.split('/').any(|part| {
        depth += match part {
            ".." => -1,
            "" | "." => 0,
            _ => 1,
        };
        depth < 0
    })
}

/// Profiles and rules of a run, with what is wrong in the user's own.
pub(super) struct Packs {
    pub(super) catalogue: Catalogue,
    pub(super) rules: Vec<Rule>,
    pub(super) faults: Vec<Diagnostic>,
    /// Files that were named and can't be read or used.
    pub(super) unusable: Vec<String>,
}

/// Reads the embedded profiles and rules, then the user's own; later ones win.
pub(super) fn packs(sources: &mut Sources, devices: &[PathBuf], rules: &[PathBuf]) -> Packs {
    let mut packs = Packs {
        catalogue: Catalogue::default(),
        rules: Vec::new(),
        faults: Vec::new(),
        unusable: Vec::new(),
    };
    let file = sources.add(embedded::ASSUMED.0, embedded::ASSUMED.1.to_owned());
    let (assumed, faults) = read_assumed(sources, file);
    packs.catalogue.assumed = assumed;
    packs.faults.extend(faults);
    for (name, text) in embedded::PROFILES {
        let file = sources.add(*name, (*text).to_owned());
        packs.profiles(sources, file);
    }
    for (name, text) in embedded::PACKS {
        let file = sources.add(*name, (*text).to_owned());
        packs.pack(sources, file);
    }
    for path in devices.iter().filter(|path| path.is_dir() && yaml_files(path).is_empty()) {
        packs.lacking(sources, path, "no YAML file in it");
    }
    for path in devices.iter().flat_map(|path| yaml_files(path)) {
        match load(sources, &path, &path.display().to_string()) {
            Ok(file) => packs.profiles(sources, file),
            Err(reason) => packs.lacking(sources, &path, &reason),
        }
    }
    for path in rules {
        match load(sources, path, &path.display().to_string()) {
            Ok(file) => packs.pack(sources, file),
            Err(reason) => packs.lacking(sources, path, &reason),
        }
    }
    packs
}

impl Packs {
    fn profiles(&mut self, sources: &Sources, file: FileId) {
        let (profiles, faults) = read_profiles(sources, file);
        self.catalogue.profiles.extend(profiles);
        self.take(sources, file, faults);
    }

    fn pack(&mut self, sources: &Sources, file: FileId) {
        let known: Vec<(&str, Option<Unit>)> = Kind::ALL
            .iter()
            .map(|kind| (kind.doc().slug, Some(kind.doc().unit)))
            .chain([("lost-zero", None)])
            .collect();
        let (rules, faults) = read_pack(sources, file, &known);
        self.rules.extend(rules);
        self.take(sources, file, faults);
    }

    fn lacking(&mut self, sources: &mut Sources, path: &Path, reason: &str) {
        let shown = path.display().to_string();
        self.faults.push(unreadable(sources, &shown, reason));
        self.unusable.push(format!("{shown}: {reason}"));
    }

    fn take(&mut self, sources: &Sources, file: FileId, faults: Vec<Diagnostic>) {
        if faults.iter().any(|fault| fault.severity == Severity::Error) {
            self.unusable.push(format!("{}: it has faults", sources.file(file).path));
        }
        self.faults.extend(faults);
    }
}

fn yaml_files(path: &Path) -> Vec<PathBuf> {
    if !path.is_dir() {
        return vec![path.to_owned()];
    }
    let Ok(entries) = std::fs::read_dir(path) else { return Vec::new() };
    let is_yaml = |path: &PathBuf| {
        path.extension().is_some_and(|ending| ending == "yaml" || ending == "yml") && path.is_file()
    };
    let mut paths: Vec<PathBuf> =
        entries.filter_map(|entry| Some(entry.ok()?.path())).filter(is_yaml).collect();
    paths.sort();
    paths
}
