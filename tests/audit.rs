//! The audit: it passes on the library as shipped, and each rule fails on an overlay that breaks it.

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use serde_json::Value;

fn halfcell(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_halfcell")).args(arguments).output().expect("the program runs")
}

fn overlay(name: &str, text: &str) -> PathBuf {
    let path = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join(format!("overlay-{name}.toml"));
    std::fs::write(&path, text).expect("written");
    path
}

fn path(path: &Path) -> &str {
    path.to_str().expect("a path")
}

/// Rules that fail with the overlay, as the JSON of the audit names them.
fn failures(name: &str, text: &str) -> Vec<String> {
    let file = overlay(name, text);
    let output = halfcell(&["audit", "--json", "--materials", path(&file)]);
    assert_eq!(output.status.code(), Some(2), "{}", String::from_utf8_lossy(&output.stdout));
    let report: Value = serde_json::from_slice(&output.stdout).expect("JSON");
    let open = report["open"].as_array().expect("a list");
    open.iter().filter(|c| c["failed"] == true).filter_map(|c| c["rule"].as_str().map(str::to_owned)).collect()
}

fn assert_fails(name: &str, rule: &str, text: &str) {
    let rules = failures(name, text);
    assert!(rules.iter().any(|r| r == rule), "`{rule}` does not fail: {rules:?}");
}

#[test]
fn library_passes_its_own_audit() {
    let output = halfcell(&["audit"]);
    let said = String::from_utf8_lossy(&output.stdout).into_owned();
    assert_eq!(output.status.code(), Some(0), "{said}");
    assert!(said.contains("standard potentials") && !said.contains("failed:"), "{said}");
}

/// The breadth that a plant laboratory expects, and check tables of a size that can find a fault.
#[test]
fn tables_are_as_broad_as_a_plant_laboratory_needs() {
    use halfcell::library::Library;
    let library = Library::embedded().expect("the embedded library");
    let checks = Library::checks().expect("check tables");
    assert!(library.species().len() >= 1200, "{} species", library.species().len());
    assert!(library.minerals.len() >= 90 && library.reagents.len() >= 70, "minerals, reagents");
    assert!(
        library.alloys.iter().filter(|a| a.uns.is_some()).count() >= 45 && library.linings.len() >= 15,
        "alloys, linings"
    );
    let solubility =
        checks.constants.iter().filter(|c| c.kind == halfcell::library::checks::ConstantKind::Solubility).count();
    assert!(checks.potentials.len() >= 110 && checks.ions.len() >= 120 && checks.heat.len() >= 30);
    assert!(solubility >= 60 && checks.constants.len() - solubility >= 120, "{solubility} solubilities");
    let explained = checks.potentials.iter().filter(|c| c.explained.is_some()).count();
    assert!(explained < checks.potentials.len() / 2, "{explained} potentials differ on purpose");
}

#[test]
fn energies_that_do_not_close_fail() {
    assert_fails(
        "closure",
        "G = H − TS closes",
        "[[species]]\nformula = \"Zn^2+\"\nstate = \"aq\"\nname = \"zinc ion\"\nG_kJ_mol = { value = -147.0, u = 0.3 }\nH_kJ_mol = { value = -120.0, u = 0.3 }\nS_J_mol_K = { value = -112.1, u = 1.0 }\nsource = \"nbs1982\"\nstatus = \"published\"\n",
    );
}

#[test]
fn number_without_uncertainty_fails() {
    assert_fails(
        "uncertainty",
        "uncertainty is given",
        "[[species]]\nformula = \"Zn^2+\"\nstate = \"aq\"\nname = \"zinc ion\"\nG_kJ_mol = { value = -147.0, u = 0.0 }\nsource = \"nbs1982\"\nstatus = \"published\"\n",
    );
}

#[test]
fn source_without_citation_fails() {
    assert_fails(
        "source",
        "source is cited",
        "[[species]]\nformula = \"Zn^2+\"\nstate = \"aq\"\nname = \"zinc ion\"\nG_kJ_mol = { value = -147.06, u = 0.3 }\nsource = \"nowhere\"\nstatus = \"published\"\n",
    );
}

#[test]
fn species_written_twice_fails() {
    assert_fails(
        "duplicate",
        "no species twice",
        "[[species]]\nformula = \"AlO2^-\"\nstate = \"aq\"\nname = \"aluminate, anhydrous writing\"\nG_kJ_mol = { value = -830.9, u = 3.0 }\nsource = \"nbs1982\"\nstatus = \"published\"\n",
    );
}

#[test]
fn solid_with_nowhere_to_go_fails() {
    assert_fails(
        "dissolution",
        "solids' reactions balance",
        "[[species]]\nformula = \"XeO3\"\nstate = \"cr\"\nname = \"xenon trioxide\"\nG_kJ_mol = { value = 500.0, u = 3.0 }\nsource = \"nbs1982\"\nstatus = \"published\"\n",
    );
}

#[test]
fn step_in_temperature_fails() {
    assert_fails(
        "temperature",
        "G(T) finite and smooth, 0–300 °C",
        "[[species]]\nformula = \"Zn^2+\"\nstate = \"aq\"\nname = \"zinc ion\"\nG_kJ_mol = { value = -147.06, u = 0.3 }\ncurve = { reaction = \"ZnO(cr) + 2 H^+ = Zn^2+ + H2O\", a = 0.0, c = 4000.0, from_K = 273.15, to_K = 573.15, source = \"nbs1982\", status = \"published\" }\nsource = \"nbs1982\"\nstatus = \"published\"\n",
    );
}

const SILVER: &str = "[[species]]\nformula = \"Ag^+\"\nstate = \"aq\"\nname = \"silver ion\"\nG_kJ_mol = { value = 90.0, u = 0.3 }\nsource = \"nbs1982\"\nstatus = \"published\"\n";

#[test]
fn potential_off_by_more_than_ten_millivolts_fails() {
    assert_fails("potential", "standard potentials", SILVER);
}

#[test]
fn constant_off_fails() {
    assert_fails("constant", "log K, log β, pKa", SILVER);
}

#[test]
fn ion_off_fails() {
    assert_fails("ion", "ions and solutes", SILVER);
}

#[test]
fn heat_capacity_off_fails() {
    assert_fails(
        "heat",
        "G(T) of solids and gases",
        "[[species]]\nformula = \"CO2\"\nstate = \"g\"\nname = \"carbon dioxide\"\nG_kJ_mol = { value = -394.359, u = 0.03 }\nS_J_mol_K = { value = 213.74, u = 0.1 }\nCp_J_mol_K = 300.0\nsource = \"nbs1982\"\nstatus = \"published\"\n",
    );
}

#[test]
fn alloy_that_does_not_sum_fails() {
    assert_fails(
        "composition",
        "alloys sum to 100 %",
        "[[alloy]]\nuns = \"UNS S31603\"\nname = \"low carbon austenitic stainless steel\"\nbase = \"Fe\"\ncomposition_wt_percent = { Fe = 60.0, Cr = 17.0 }\nsource = \"memory\"\nstatus = \"memory\"\n",
    );
}

#[test]
fn limits_that_disagree_fail() {
    assert_fails(
        "limit",
        "limits agree and stand in order",
        "[[gas]]\nformula = \"Cl2\"\nname = \"chlorine\"\ncas = \"7782-50-5\"\nshort_limit_ppm = { value = 0.5, kind = \"ceiling\", mg_m3 = 15.0 }\nwarning = \"pungent\"\nhazard = [\"toxic\"]\nsource = \"memory\"\nstatus = \"memory\"\n",
    );
}

#[test]
fn name_that_does_not_exist_fails() {
    assert_fails("reference", "names exist", "[[mineral]]\nname = \"unobtainite\"\nformula = \"Xe2O7\"\n");
}

#[test]
fn reagent_that_delivers_another_mass_fails() {
    assert_fails(
        "reagent",
        "reagents' mass and charge",
        "[[reagent]]\nname = \"table salt\"\ndelivers = { \"Na^+\" = 1.0, \"Cl^-\" = 2.0 }\nmolar_mass_g_mol = 58.44\nsource = \"common-practice\"\nstatus = \"memory\"\n",
    );
}

#[test]
fn parts_that_do_not_add_up_are_refused() {
    let file = overlay(
        "parts",
        "[[species]]\nformula = \"Fe3O4\"\nstate = \"cr\"\nname = \"magnetite\"\nG_kJ_mol = { value = -1015.4, u = 1.0 }\nparts = { \"Fe+2\" = 3 }\nsource = \"nbs1982\"\nstatus = \"published\"\n",
    );
    let output = halfcell(&["audit", "--materials", path(&file)]);
    assert_eq!(output.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&output.stderr).contains("Fe3O4"));
}

#[test]
fn broken_overlay_stops_a_screen_and_a_good_one_is_named_in_the_report() {
    let broken = overlay("broken", SILVER);
    let output = halfcell(&["screen", "--json", "--materials", path(&broken)]);
    assert_eq!(output.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&output.stderr).contains("audit"));
    let good = overlay(
        "good",
        "[[alloy]]\nuns = \"UNS S31603\"\nname = \"our own stainless steel\"\nbase = \"Fe\"\nfilm = true\ncomposition_wt_percent = { Fe = 67.9, Cr = 17.5, Ni = 12.2, Mo = 2.4 }\nsource = \"site\"\nstatus = \"memory\"\n[sources]\nsite = \"Site materials file, sheet 3\"\n",
    );
    let output = halfcell(&["screen", "--json", "--materials", path(&good)]);
    assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
    let report: Value = serde_json::from_slice(&output.stdout).expect("JSON");
    let overlays = report["program"]["overlays"].as_array().expect("a list");
    assert!(overlays.iter().any(|o| o["record"] == "alloy UNS S31603" && o["overrides"] == true), "{overlays:?}");
}

#[test]
fn field_that_does_not_fit_is_shown_with_its_line() {
    let file = overlay("field", "[[species]]\nformula = \"Zn^2+\"\nstate = \"solid\"\n");
    let output = halfcell(&["audit", "--materials", path(&file)]);
    assert_eq!(output.status.code(), Some(2));
    let said = String::from_utf8_lossy(&output.stderr).into_owned();
    assert!(said.contains("line 3") && said.contains("solid"), "{said}");
}

#[test]
fn records_are_found_by_element_state_synonym_and_number() {
    let found = |arguments: &[&str]| -> Value {
        let output = halfcell(&[&["show", "--json"], arguments].concat());
        assert!(output.status.success(), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
        serde_json::from_slice(&output.stdout).expect("JSON")
    };
    let copper = found(&["--element", "Cu", "--state", "solid"]);
    let records = copper["records"].as_array().expect("records");
    assert!(records.len() > 15 && records.iter().all(|r| r["state"] == "cr" || r["state"] == "am"));
    assert_eq!(found(&["UNS S31603"])["alloy"]["base"], "Fe");
    assert_eq!(found(&["7782-50-5"])["gas"]["formula"], "Cl2");
    assert_eq!(found(&["goethite"])["records"][0]["formula"], "FeOOH");
    let warm = found(&["Cu^2+", "--temperature", "150 degC"]);
    assert!(warm["records"][0]["G_at_temperature_kJ_mol"].as_f64() > warm["records"][0]["G_kJ_mol"].as_f64());
    let output = halfcell(&["show", "goetite"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&output.stderr).contains("goethite"));
}
