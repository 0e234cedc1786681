//! `gainsay devices`: the profiles at hand.

use super::{complain, print, style};
use crate::check::reference;
use crate::device::Catalogue;
use crate::report::{device_text, devices_text};
use crate::source::{nearest, quote};
use std::path::PathBuf;

/// What `devices` takes.
#[derive(Debug, clap::Args)]
pub(super) struct Devices {
    /// A profile, or a model name that leads to one; without one all profiles are listed.
    #[arg(value_name = "NAME")]
    name: Option<String>,
    /// Further device profiles: a YAML file or a folder of them. Later ones win.
    #[arg(long, value_name = "PATH")]
    devices: Vec<PathBuf>,
}

pub(super) fn run(asked: &Devices) -> u8 {
    let found = reference(&asked.devices, &[]);
    complain(&found.unusable);
    let catalogue = &found.catalogue;
    let text = match &asked.name {
        None => devices_text(&catalogue.profiles, style(true)),
        Some(name) => match catalogue.find(name) {
            Some(at) => device_text(&catalogue.profiles[at], name, style(true)),
            None => {
                complain(&[unknown(name, catalogue)]);
                return 2;
            }
        },
    };
    if print(&text) && found.unusable.is_empty() { 0 } else { 2 }
}

fn unknown(name: &str, catalogue: &Catalogue) -> String {
    let names = catalogue.profiles.iter().flat_map(|profile| {
        std::iter::once(&profile.name).chain(&profile.aliases).filter(|name| !name.contains('*'))
    });
    match nearest(name, names.map(String::as_str)) {
        Some(near) => format!("no profile is named {}; the nearest is {}", quote(name), quote(near)),
        None => format!("no profile is named {}; `gainsay devices` lists what there is", quote(name)),
    }
}
