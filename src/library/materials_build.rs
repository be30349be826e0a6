//! Packs `materials/*.toml` into one postcard file at build time (the build script includes this module).

#[path = "checks.rs"]
mod checks;
#[path = "record.rs"]
mod record;
#[path = "tables.rs"]
mod tables;

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

use checks::Checks;
use serde::de::DeserializeOwned;
use tables::Materials;

/// Reads every file of `materials` and writes `materials.bin` into `out`.
///
/// # Errors
/// A file that cannot be read or does not fit the record definitions, with its name and the parser's message.
pub fn pack(materials: &Path, out: &Path) -> Result<(), String> {
    let mut all = Materials::default();
    for path in toml_files(&materials.join("species"))? {
        all.species.extend(read::<record::SpeciesFile>(&path)?.species);
    }
    all.gases = list(&materials.join("gases.toml"), "gas")?;
    all.alloys = list(&materials.join("alloys.toml"), "alloy")?;
    all.minerals = list(&materials.join("minerals.toml"), "mineral")?;
    all.electrodes = list(&materials.join("electrodes.toml"), "electrode")?;
    all.reagents = list(&materials.join("reagents.toml"), "reagent")?;
    all.linings = list(&materials.join("linings.toml"), "lining")?;
    all.electrode_kinetics = read(&materials.join("electrode_kinetics.toml"))?;
    all.kinetics = read(&materials.join("kinetics.toml"))?;
    all.activity = read(&materials.join("activity.toml"))?;
    all.sources = read(&materials.join("sources.toml"))?;
    write(&all, &out.join("materials.bin"))?;
    let checks = materials.join("checks");
    let published = Checks {
        potentials: list(&checks.join("potentials.toml"), "check")?,
        constants: list(&checks.join("constants.toml"), "check")?,
        ions: list(&checks.join("ions.toml"), "check")?,
        heat: list(&checks.join("heat.toml"), "check")?,
    };
    write(&published, &out.join("checks.bin"))
}

fn write<T: serde::Serialize>(value: &T, path: &Path) -> Result<(), String> {
    let bytes = postcard::to_stdvec(value).map_err(|e| format!("packing {}: {e}", path.display()))?;
    fs::write(path, bytes).map_err(|e| format!("writing {}: {e}", path.display()))
}

fn toml_files(folder: &Path) -> Result<Vec<PathBuf>, String> {
    let entries = fs::read_dir(folder).map_err(|e| format!("{}: {e}", folder.display()))?;
    let mut files: Vec<PathBuf> = entries
        .filter_map(|entry| entry.ok().map(|e| e.path()))
        .filter(|path| path.extension().is_some_and(|x| x == "toml"))
        .collect();
    files.sort();
    Ok(files)
}

fn list<T: DeserializeOwned>(path: &Path, key: &str) -> Result<Vec<T>, String> {
    let mut tables: BTreeMap<String, Vec<T>> = read(path)?;
    let records = tables.remove(key).unwrap_or_default();
    match tables.keys().next() {
        Some(other) => Err(format!("{}: unexpected table [[{other}]], only [[{key}]] belongs here", path.display())),
        None => Ok(records),
    }
}

fn read<T: DeserializeOwned>(path: &Path) -> Result<T, String> {
    let text = fs::read_to_string(path).map_err(|e| format!("{}: {e}", path.display()))?;
    toml::from_str(&text).map_err(|e| format!("{}: {e}", path.display()))
}
