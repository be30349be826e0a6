//! Reads `materials/` and the report's fonts once, at build time, into compact files that the binary embeds.

#[path = "report/fonts_build.rs"]
mod fonts_build;
#[path = "library/materials_build.rs"]
mod materials_build;

use std::path::Path;
use std::process::ExitCode;

fn main() -> ExitCode {
    println!("cargo::rerun-if-changed=src/build.rs");
    println!("cargo::rerun-if-changed=materials");
    println!("cargo::rerun-if-changed=templates/fonts");
    let out = std::env::var("OUT_DIR").unwrap_or_default();
    let done = materials_build::pack(Path::new("materials"), Path::new(&out))
        .and_then(|()| fonts_build::cut_fonts(Path::new("templates/fonts"), Path::new(&out)));
    match done {
        Ok(()) => ExitCode::SUCCESS,
        Err(message) => {
            println!("cargo::error={}", message.replace('\n', " | "));
            ExitCode::FAILURE
        }
    }
}
