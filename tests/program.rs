//! The whole program on scenario files: what the reports must and must not say.

use std::path::PathBuf;
use std::process::{Command, Output};

use serde_json::Value;

fn halfcell(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_halfcell")).args(arguments).output().expect("the program runs")
}

fn stdout(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).expect("UTF-8")
}

/// A folder of this test's own.
fn folder(name: &str) -> PathBuf {
    let path = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join(name);
    let _ = std::fs::remove_dir_all(&path);
    std::fs::create_dir_all(&path).expect("a folder");
    path
}

/// The JSON report of a scenario given as text.
fn report(name: &str, scenario: &str) -> Value {
    let path = folder(name).join("scenario.toml");
    std::fs::write(&path, scenario).expect("written");
    let output = halfcell(&["screen", path.to_str().expect("a path"), "--json"]);
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    serde_json::from_str(&stdout(&output)).expect("JSON")
}

fn findings(report: &Value) -> &[Value] {
    report["findings"].as_array().expect("findings")
}

/// Findings of a question on a subject.
fn about<'r>(report: &'r Value, question: &str, subject: &str) -> Vec<&'r Value> {
    findings(report).iter().filter(|f| f["question"] == question && f["subject"] == subject).collect()
}

fn against<'r>(report: &'r Value, question: &str, subject: &str, other: &str) -> &'r Value {
    about(report, question, subject)
        .into_iter()
        .find(|f| f["against"] == other)
        .unwrap_or_else(|| panic!("no {question} finding of {subject} against {other}"))
}

fn liquor(ph: f64, dissolved: &str, rest: &str) -> String {
    format!(
        "[scenario]\ntitle = \"test\"\n[liquor]\npH = {ph}\ntemperature = \"25 degC\"\ndissolved = {{ {dissolved} }}\n{rest}\n"
    )
}

/// Silence would read as resistance. That tantalum rests on its oxide and that fluoride breaks it: common practice, no source.
#[test]
fn solid_that_cannot_be_screened_is_said_to_be_so() {
    let part = "[[metal]]\nname = \"patch\"\nmaterial = \"Ta\"\nduty = \"resist\"\n";
    for (name, fluoride, attention) in [("ta", "", "note"), ("ta-f", ", \"F^-\" = \"0.01 mol/L\"", "review")] {
        let dissolved = format!("\"Fe^3+\" = \"0.05 mol/L\", \"SO4^2-\" = \"0.3 mol/L\"{fluoride}");
        let report = report(name, &liquor(1.5, &dissolved, part));
        let found = about(&report, "dissolution", "patch");
        assert_eq!(found.len(), 1, "{found:?}");
        assert_eq!((&found[0]["verdict"], &found[0]["attention"]), (&"not assessed".into(), &attention.into()));
    }
}

const GOLD: &str = "[[metal]]\nname = \"gold\"\nmaterial = \"Au\"\nduty = \"dissolve\"\namount = \"2 g/m3\"\n";

/// Copper(I) disproportionates in sulfate, log K of 2 Cu⁺ = Cu + Cu²⁺ near 6.2 (CRC and Bratsch potentials, 0.521 and 0.153 V).
#[test]
fn copper_one_is_unstable_in_sulfate_and_persists_in_strong_chloride() {
    let sulfate = report("cu-sulfate", &liquor(1.5, "\"Cu^2+\" = \"0.02 mol/L\", \"SO4^2-\" = \"0.3 mol/L\"", ""));
    let unstable = about(&sulfate, "state", "Cu(I)");
    assert_eq!(unstable.len(), 1);
    assert_eq!(unstable[0]["verdict"], "driven");
    let log_k = unstable[0]["log_K"].as_f64().expect("log K");
    assert!((log_k - 6.2).abs() < 0.4, "log K {log_k}");
    let chloride = report("cu-chloride", &liquor(0.5, "\"Cu^2+\" = \"0.02 mol/L\", \"Cl^-\" = \"3 mol/L\"", ""));
    assert!(about(&chloride, "state", "Cu(I)").is_empty(), "CuCl2^- and CuCl3^2- hold copper(I)");
}

/// Manganese(III) and manganate fall apart in acid (common practice, no source).
#[test]
fn manganese_three_and_six_are_unstable_in_acid() {
    let acid = report("mn-acid", &liquor(0.0, "\"MnO4^-\" = \"0.01 mol/L\", \"ClO4^-\" = \"1 mol/L\"", ""));
    for state in ["Mn(III)", "Mn(VI)"] {
        let found = about(&acid, "state", state);
        assert_eq!(found.len(), 1, "{state}");
        assert_eq!(found[0]["verdict"], "driven", "{state}");
        assert!(found[0]["reaction"].as_str().is_some_and(|r| r.contains("MnO2")), "{state}");
    }
}

/// Gold needs a ligand: opposed in ferric sulfate, driven in aerated cyanide with Elsner's reaction (common practice, no source).
#[test]
fn gold_is_opposed_in_ferric_sulfate_and_driven_in_aerated_cyanide() {
    let ferric = report(
        "au-ferric",
        &liquor(1.8, "\"Fe^3+\" = \"5 g/L\", \"Fe^2+\" = \"1 g/L\", \"SO4^2-\" = \"34 g/L\"", GOLD),
    );
    let finding = against(&ferric, "leaching", "gold", "Fe^3+/Fe^2+");
    assert_eq!(finding["verdict"], "opposed");
    let force = finding["driving_force_mV"].as_f64().expect("force");
    assert!((-1000.0..-400.0).contains(&force), "{force} mV");
    let cyanide = report(
        "au-cyanide",
        &liquor(10.3, "\"CN^-\" = \"7.1 mmol/L\"", &format!("gas = {{ O2 = \"0.21 atm\" }}\n{GOLD}")),
    );
    let finding = against(&cyanide, "leaching", "gold", "O2/H2O");
    assert_eq!(finding["verdict"], "driven");
    let force = finding["driving_force_mV"].as_f64().expect("force");
    assert!((1150.0..1350.0).contains(&force), "{force} mV");
    assert_eq!(finding["reaction"], "4 Au + 8 CN^- + O2(aq) + 2 H2O = 4 Au(CN)2^- + 4 OH^-");
}

fn chlorine(report: &Value) -> Vec<&Value> {
    about(report, "gas", "Cl2")
}

/// Chlorine from permanganate in acid chloride and from acidified hypochlorite; not from iron(III) alone (common practice, no
/// source).
#[test]
fn chlorine_is_flagged_where_it_forms_and_not_where_it_does_not() {
    let permanganate = "[[oxidant]]\nname = \"permanganate\"\nspecies = \"MnO4^-\"\namount = \"0.01 mol/L\"\n";
    let hypochlorite = "[[oxidant]]\nname = \"hypochlorite\"\nspecies = \"ClO^-\"\namount = \"20 mmol/L\"\n";
    let acid = report("cl2-permanganate", &liquor(0.5, "\"Cl^-\" = \"1 mol/L\"", permanganate));
    assert!(chlorine(&acid).iter().any(|f| f["attention"] == "act" && f["verdict"] == "driven"));
    let acidified = report("cl2-hypochlorite", &liquor(3.0, "\"Cl^-\" = \"60 mmol/L\"", hypochlorite));
    let bar = chlorine(&acidified)[0]["quantities"]["partial_pressure_bar"].as_f64().expect("pressure");
    // About 3 % at pH 3 with 20 mmol/L hypochlorite and 60 mmol/L chloride, from log K −3.34 of chlorine hydrolysis and 16.4
    // bar kg/mol of its solubility (NBS 1982).
    assert!((0.015..0.06).contains(&bar), "{bar} bar");
    assert_eq!(chlorine(&acidified)[0]["attention"], "act");
    let alkaline = report("cl2-alkaline", &liquor(10.5, "\"Cl^-\" = \"60 mmol/L\"", hypochlorite));
    assert!(chlorine(&alkaline).is_empty());
    let ferric = report("cl2-ferric", &liquor(0.5, "\"Cl^-\" = \"2 mol/L\", \"Fe^3+\" = \"0.3 mol/L\"", ""));
    assert!(chlorine(&ferric).is_empty(), "iron(III) alone does not make chlorine");
    let aerated = report("cl2-air", &liquor(0.5, "\"Cl^-\" = \"2 mol/L\"", "gas = { O2 = \"0.21 atm\" }"));
    assert!(chlorine(&aerated).is_empty(), "air alone does not make chlorine");
}

/// pKa 9.21 and the Henry constant of hydrogen cyanide (NBS 1982: 0.133 bar kg/mol) give about 75 ppm at pH 10.3 and 590 ppm at
/// pH 9.0 over 7.14 mmol/L; Sander's compilation leaves a factor of 1.5.
#[test]
fn hydrogen_cyanide_rises_as_ph_falls() {
    let ppm = |ph: f64| {
        let found = report(&format!("hcn-{ph}"), &liquor(ph, "\"CN^-\" = \"7.14 mmol/L\"", ""));
        let list = about(&found, "gas", "HCN");
        (
            list[0]["quantities"]["partial_pressure_bar"].as_f64().expect("pressure") / 1.013_25e-6,
            list[0]["attention"].clone(),
        )
    };
    let (design, attention) = ppm(10.3);
    assert!((50.0..110.0).contains(&design), "{design} ppm");
    assert_eq!(attention, "review");
    let (slaked_badly, attention) = ppm(9.0);
    assert!((420.0..800.0).contains(&slaked_badly), "{slaked_badly} ppm");
    assert_eq!(attention, "act");
}

/// Titanium is held by its film whatever its potential says; stainless steel is given up in strong oxidising chloride (iron(III)
/// chloride is the pitting test medium of ASTM G48); copper alloys are attacked (common practice, no source).
#[test]
fn parts_are_judged_by_their_films() {
    let parts = ["UNS R50400", "UNS S31603", "UNS C95400"];
    let metals: String = parts
        .iter()
        .map(|p| format!("[[metal]]\nname = \"{p}\"\nmaterial = \"{p}\"\nduty = \"resist\"\narea = \"1 m2\"\n"))
        .collect();
    let strong = report(
        "parts",
        &liquor(0.5, "\"Cl^-\" = \"3 mol/L\", \"Fe^3+\" = \"0.3 mol/L\", \"Fe^2+\" = \"0.1 mol/L\"", &metals),
    );
    let attention = |part: &str| against(&strong, "dissolution", part, "Fe^3+/Fe^2+")["attention"].clone();
    assert_eq!(attention("UNS R50400"), "note");
    assert_eq!(attention("UNS S31603"), "act");
    assert_eq!(attention("UNS C95400"), "act");
    let titanium =
        against(&strong, "dissolution", "UNS R50400", "Fe^3+/Fe^2+")["statement"].as_str().expect("statement");
    assert!(titanium.contains("film") && titanium.contains("practice relies on that film"), "{titanium}");
}

/// Sulfate is no oxidant in cold dilute liquor, and perchlorate none at all (kinetics records; common practice).
#[test]
fn inert_oxidants_drive_nothing() {
    let copper = "[[metal]]\nname = \"copper\"\nmaterial = \"Cu\"\nduty = \"dissolve\"\n";
    let found = report("inert", &liquor(1.0, "\"SO4^2-\" = \"1 mol/L\", \"ClO4^-\" = \"1 mol/L\"", copper));
    for finding in about(&found, "leaching", "copper") {
        let other = finding["against"].as_str().expect("against");
        assert!(!other.starts_with("SO4") && !other.starts_with("HSO4") && !other.starts_with("ClO4"), "{other}");
    }
}

#[test]
fn demonstration_writes_its_reports_and_the_same_bytes_again() {
    let out = folder("demonstration");
    let run = || {
        let output = halfcell(&["screen", "--out", out.to_str().expect("a path")]);
        assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
        (
            std::fs::read(out.join("TR-014-A.pdf")).expect("PDF"),
            std::fs::read(out.join("TR-014-A.json")).expect("JSON"),
            stdout(&output),
        )
    };
    let (pdf, json, summary) = run();
    let (pdf_again, json_again, _) = run();
    assert!(pdf == pdf_again && json == json_again, "same input and date give the same bytes");
    assert!(summary.contains("ACT") && summary.contains("Chlorine"), "{summary}");
    let report: Value = serde_json::from_slice(&json).expect("JSON");
    assert_eq!(report["format"], 1);
    let verdict = |subject: &str| {
        findings(&report).iter().filter(|f| f["subject"] == subject).map(|f| f["verdict"].clone()).collect::<Vec<_>>()
    };
    assert!(verdict("copper shred").contains(&Value::from("driven")), "something dissolves");
    assert!(verdict("solder dross").contains(&Value::from("opposed")), "something resists");
    assert_eq!(about(&report, "state", "Mn(III)")[0]["verdict"], "driven", "an intermediate state is unstable");
    assert!(report["liquor"]["worst_balance_error"].as_f64().is_some_and(|e| e <= 1e-10));
    let leftovers = std::fs::read_dir(&out).expect("folder").count();
    assert_eq!(leftovers, 2, "no temporary files stay behind");
}

/// The words of a page and everything that a reader must find on it.
#[test]
fn pdf_reads_back_with_date_verdicts_and_cautions_on_their_pages() {
    let out = folder("pdf");
    let scenario = halfcell::cli::DEMONSTRATION
        .replace("prepared_by = \"Process group\"", "prepared_by = \"Process group\"\ndate = 2026-11-30");
    let path = out.join("scenario.toml");
    std::fs::write(&path, scenario).expect("written");
    let output =
        halfcell(&["screen", path.to_str().expect("a path"), "--out", out.to_str().expect("a path"), "--write", "pdf"]);
    assert!(output.status.success());
    let document = lopdf::Document::load(out.join("TR-014-A.pdf")).expect("a PDF");
    let pages: Vec<u32> = document.get_pages().keys().copied().collect();
    let text =
        |page: u32| document.extract_text(&[page]).expect("text").split_whitespace().collect::<Vec<_>>().join(" ");
    let first = text(1);
    for word in ["2026-11-30", "TR-014", "What needs attention", "Chlorine", "act", "local codes", "MnO₄⁻"] {
        assert!(first.to_lowercase().contains(&word.to_lowercase()), "page 1 lacks `{word}`: {first}");
    }
    for page in &pages {
        assert!(text(*page).contains(&format!("page {page} of {}", pages.len())), "page {page} is not numbered");
    }
    let whole: String = pages.iter().map(|p| text(*p)).collect::<Vec<_>>().join(" ");
    for word in [
        "Cautions",
        "licensed",
        "Sign-off",
        "Method and limits",
        "driven",
        "opposed",
        "Data and sources",
        "NBS Tables",
        "Fe³⁺",
        "ΔfG°",
        "→",
    ] {
        assert!(whole.contains(word), "the report lacks `{word}`");
    }
    for promise in ["is safe", "are safe", "compatible", "approved", "guaranteed"] {
        assert!(!whole.to_lowercase().contains(promise), "the report promises: {promise}");
    }
}

#[test]
fn commands_answer_in_json_as_their_contract_says() {
    let json = |arguments: &[&str]| -> Value {
        let output = halfcell(arguments);
        assert!(output.status.success(), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
        serde_json::from_str(&stdout(&output)).expect("JSON")
    };
    let reaction = json(&["reaction", "CuFeS2 + Fe^3+ -> Cu^2+ + Fe^2+ + S", "--json"]);
    assert!(reaction["reaction"].as_str().is_some_and(|r| r.contains("4 Fe^3+") && r.contains("5 Fe^2+")));
    assert_eq!(reaction["electrons"], 4.0);
    assert!(reaction["log_K"].is_f64() && reaction["delta_G_kJ_mol"].is_f64() && reaction["delta_H_kJ_mol"].is_f64());
    let couple = json(&["couple", "Fe^3+/Fe^2+", "--json"]);
    assert!((couple["E_standard_V"].as_f64().expect("E°") - 0.771).abs() < 0.01);
    assert_eq!(couple["reaction"], "Fe^3+ + e^- = Fe^2+");
    // Chloride binds iron(III) more than iron(II): the potential falls.
    let with = json(&["couple", "Fe^3+/Fe^2+", "--with", "Cl^-=3 mol/L", "--json"]);
    assert!(with["E_V"].as_f64().expect("E") < couple["E_V"].as_f64().expect("E"));
    let show = json(&["show", "Cu^2+", "--json"]);
    assert_eq!(show["records"][0]["state"], "aq");
    assert!((show["records"][0]["G_kJ_mol"].as_f64().expect("G") - 65.49).abs() < 0.01);
    assert!(show["records"][0]["citation"].as_str().is_some_and(|c| c.contains("NBS Tables")));
    let path = folder("commands").join("scenario.toml");
    std::fs::write(&path, liquor(2.0, "\"Fe^3+\" = \"0.01 mol/L\", \"SO4^2-\" = \"0.1 mol/L\"", "")).expect("written");
    let scenario = path.to_str().expect("a path");
    let computed = json(&["liquor", scenario, "--json"]);
    assert_eq!(computed["pH"], 2.0);
    assert!(computed["species"].as_array().is_some_and(|s| s.iter().any(|x| x["species"] == "FeSO4^+")));
    assert_eq!(json(&["check", scenario, "--json"])["valid"], true);
}

#[test]
fn mistakes_are_shown_all_at_once_with_their_place_and_the_nearest_word() {
    let path = folder("mistakes").join("scenario.toml");
    let text = "[scenario]\ntitle = \"x\"\n[liquor]\npH = 41\ntemperature = \"45 C\"\ndissolved = { \"Fe^3+\" = \"1 g/L\" }\n[[metal]]\nname = \"a\"\nmaterial = \"Cu\"\nduty = \"disolve\"\n";
    std::fs::write(&path, text).expect("written");
    let output = halfcell(&["check", path.to_str().expect("a path")]);
    assert_eq!(output.status.code(), Some(2));
    let said = String::from_utf8(output.stderr).expect("UTF-8");
    for word in ["pH 41", "4.1", "degC", "dissolve"] {
        assert!(said.contains(word), "missing `{word}` in:\n{said}");
    }
    let unknown =
        text.replace("41", "4.1").replace("45 C", "45 degC").replace("disolve", "dissolve").replace("Fe^3+", "Fe^4+");
    std::fs::write(&path, unknown).expect("written");
    let output = halfcell(&["screen", path.to_str().expect("a path"), "--json"]);
    assert_eq!(output.status.code(), Some(2));
    let said = String::from_utf8(output.stderr).expect("UTF-8");
    assert!(said.contains("Fe^4+") && said.contains("Fe^3+"), "{said}");
}

#[test]
fn exit_status_follows_stop_on() {
    let out = folder("stop");
    let out = out.to_str().expect("a path");
    assert_eq!(halfcell(&["screen", "--out", out, "--stop-on", "act"]).status.code(), Some(1));
    assert_eq!(halfcell(&["screen", "no-such-file.toml"]).status.code(), Some(2));
    assert_eq!(halfcell(&["reaction", "Fe -> Cu"]).status.code(), Some(2));
}
