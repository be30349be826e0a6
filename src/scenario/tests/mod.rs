//! Whole scenario files: what the design's example means, and what is said of bad ones.

use proptest::prelude::*;

use super::{
    Concentration, ConcentrationBasis, Diagnostic, Diagnostics, Duty, Estimate, Scenario, SolidAmount, SolidKind,
};

mod corpus;
mod quantities;

/// A scenario with every key.
const GOOD: &str = r#"[scenario]
title = "Oxidising chloride strip of copper shred"
reference = "TR-014"
revision = "A"
prepared_by = "Process group"
date = 2026-11-30

[liquor]
pH = "1.2 ± 0.2"
temperature = "45 degC"
volume = "12 m3"
pulp_density = "100 kg/m3"
potential = "640 mV vs Ag/AgCl 3 M KCl"
dissolved = { "Cl^-" = "2.0 mol/L", "Fe^3+" = "15 g/L", "Cu^2+" = "2 g/L" }
gas = { O2 = "0.21 atm" }

[[oxidant]]
name = "sodium hypochlorite"
species = "ClO^-"
amount = "0.05 mol/L"

[[metal]]
name = "copper shred"
material = "Cu"
duty = "dissolve"
amount = "40 kg/m3"

[[metal]]
name = "tank shell"
material = "UNS R50400"
duty = "resist"
area = "18 m2"

[[mineral]]
name = "chalcopyrite concentrate"
material = "chalcopyrite"
duty = "dissolve"
amount = "12 kg/t"

[[metal]]
name = "agitator"
material = "UNS S31603"
duty = "resist"

[[contact]]
name = "agitator bolted to shell"
metals = ["tank shell", "agitator"]
"#;

fn good(text: &str) -> Scenario {
    match Scenario::parse("good.toml", text) {
        Ok(scenario) => scenario,
        Err(diagnostics) => panic!("{}", diagnostics.render(false)),
    }
}

fn bad(text: &str) -> Diagnostics {
    match Scenario::parse("bad.toml", text) {
        Ok(_) => panic!("read without complaint:\n{text}"),
        Err(diagnostics) => diagnostics,
    }
}

fn assert_close(found: Estimate, value: f64, standard_uncertainty: f64) {
    let close = |one: f64, other: f64| (one - other).abs() <= 1e-9 * other.abs().max(1e-9);
    assert!(close(found.value, value) && close(found.standard_uncertainty, standard_uncertainty), "{found:?}");
}

#[test]
fn the_liquor_is_read_in_si() {
    let scenario = good(GOOD);
    let liquor = scenario.liquor;
    assert_close(liquor.ph.value, 1.2, 0.1);
    assert_close(liquor.temperature.value, 318.15, 0.0);
    assert_close(liquor.volume.expect("volume").value, 12.0, 0.0);
    assert_close(liquor.pulp_density.expect("pulp density").value, 100.0, 0.0);
    let potential = liquor.potential.expect("potential").value;
    assert_close(potential.volts, 0.64, 0.0);
    assert_eq!(potential.electrode.value, "Ag/AgCl 3 M KCl");
    assert_eq!(&GOOD[potential.electrode.span], "Ag/AgCl 3 M KCl");
    let dissolved: Vec<_> =
        liquor.dissolved.iter().map(|(name, amount)| (name.value.as_str(), &amount.value)).collect();
    let [("Cl^-", chloride), ("Fe^3+", iron), ("Cu^2+", copper)] = dissolved.as_slice() else {
        panic!("{dissolved:?}");
    };
    assert_concentration(chloride, 2000.0, ConcentrationBasis::AmountPerVolume);
    assert_concentration(iron, 15.0, ConcentrationBasis::MassPerVolume);
    assert_concentration(copper, 2.0, ConcentrationBasis::MassPerVolume);
    assert_close(liquor.gas[0].1.value, 0.212_782_5, 0.0);
    assert_eq!(liquor.gas[0].0.value, "O2");
}

fn assert_concentration(found: &Concentration, value: f64, basis: ConcentrationBasis) {
    assert_close(found.amount, value, 0.0);
    assert_eq!(found.basis, basis);
}

#[test]
fn the_head_solids_and_contacts_are_read_in_the_order_of_the_file() {
    let scenario = good(GOOD);
    assert_eq!(scenario.title, "Oxidising chloride strip of copper shred");
    assert_eq!(scenario.reference.as_deref(), Some("TR-014"));
    assert_eq!(scenario.revision.as_deref(), Some("A"));
    assert_eq!(scenario.prepared_by.as_deref(), Some("Process group"));
    assert_eq!(scenario.date.map(|date| date.to_string()).as_deref(), Some("2026-11-30"));
    assert_eq!(scenario.oxidants[0].species.value, "ClO^-");
    assert_concentration(&scenario.oxidants[0].amount.value, 50.0, ConcentrationBasis::AmountPerVolume);
    let solids: Vec<_> = scenario.solids.iter().map(|s| (s.name.value.as_str(), s.kind, s.duty.value)).collect();
    assert_eq!(
        solids,
        [
            ("copper shred", SolidKind::Metal, Duty::Dissolve),
            ("tank shell", SolidKind::Metal, Duty::Resist),
            ("chalcopyrite concentrate", SolidKind::Mineral, Duty::Dissolve),
            ("agitator", SolidKind::Metal, Duty::Resist),
        ]
    );
    let amounts: Vec<_> = scenario.solids.iter().map(|s| s.amount.as_ref().map(|a| a.value.clone())).collect();
    assert_eq!(amounts[0], Some(SolidAmount::PerLiquor(Estimate::exact(40.0))));
    assert_eq!(amounts[2], Some(SolidAmount::PerOre(Estimate::exact(0.012))));
    assert_close(scenario.solids[1].area.clone().expect("area").value, 18.0, 0.0);
    let members: Vec<_> = scenario.contacts[0].metals.iter().map(|m| m.value.as_str()).collect();
    assert_eq!(members, ["tank shell", "agitator"]);
}

#[test]
fn every_value_knows_its_place() {
    let windows = format!("\u{feff}{}", GOOD.replace('\n', "\r\n"));
    for text in [GOOD, windows.as_str()] {
        let scenario = good(text);
        assert_eq!(&text[scenario.liquor.ph.span], "\"1.2 ± 0.2\"");
        assert_eq!(&text[scenario.liquor.dissolved[1].0.span.clone()], "\"Fe^3+\"");
        assert_eq!(&text[scenario.solids[2].material.span.clone()], "\"chalcopyrite\"");
        assert_eq!(&text[scenario.contacts[0].metals[1].span.clone()], "\"agitator\"");
    }
}

#[test]
fn what_may_be_left_out_may_be_left_out() {
    let scenario =
        good("[scenario]\ntitle = 'Water'\n[liquor]\npH = 7\ntemperature = '25 degC'\npotential = '0.3 V'\n");
    assert_close(scenario.liquor.ph.value, 7.0, 0.0);
    assert_eq!(scenario.liquor.potential.expect("potential").value.electrode.value, "SHE");
    assert!(scenario.date.is_none() && scenario.solids.is_empty() && scenario.liquor.gas.is_empty());
}

#[test]
fn all_mistakes_are_reported_at_once() {
    let text = GOOD
        .replace("45 degC", "45 C")
        .replace("title", "titel")
        .replace("[[oxidant]]", "[[oxidnat]]")
        .replace("0.05 mol/L", "0,05 mol/L")
        .replace("\"resist\"", "resist");
    let lines: Vec<usize> = {
        let diagnostics = bad(&text);
        diagnostics.list().iter().map(|one| diagnostics.line(one)).collect()
    };
    assert_eq!(lines, [2, 10, 17, 20, 31, 43]);
}

#[test]
fn later_stages_add_their_own() {
    let scenario = good(GOOD);
    let place = scenario.liquor.dissolved[1].0.span.clone();
    let problem = Diagnostic::new(place, "species `Fe^4+` is not in the library", "no such species")
        .with_help("nearest: Fe^3+, Fe^2+");
    let shown = Diagnostics::new(&scenario.source, vec![problem]).render(false);
    for part in ["species `Fe^4+` is not in the library", "good.toml:14:", "^^^^^^^ no such species", "nearest: Fe^3+"]
    {
        assert!(shown.contains(part), "{shown}");
    }
}

#[test]
fn colour_is_only_on_demand() {
    let diagnostics = bad("");
    assert!(diagnostics.render(true).contains('\u{1b}'));
    assert!(!diagnostics.render(false).contains('\u{1b}'));
}

/// Whatever is read, the answer is a scenario or messages that can be shown.
fn survives(text: &str) {
    if let Err(diagnostics) = Scenario::parse("any.toml", text) {
        assert!(!diagnostics.list().is_empty(), "refused without a word:\n{text}");
        let _ = (diagnostics.render(false), diagnostics.render(true));
    }
}

#[test]
fn weird_text_is_no_crash() {
    let deep = "[".repeat(5000);
    let nested = format!("a = {}", "[".repeat(2000));
    for text in [
        "",
        "\u{feff}",
        "\u{feff}\u{feff}",
        "\r\n",
        "\0",
        "[",
        "]",
        "=",
        "\"",
        "'''",
        "[[",
        "[liquor",
        "é",
        "🜍 = 🜔",
        "a.b.c = 1\na.b = 2",
        "scenario = 1\nliquor = []\nmetal = [1, 'x', {}]\ncontact = {}\noxidant = [[]]",
        "[scenario]\ntitle = \"\\u0000\"\n[liquor]\npH = inf\ntemperature = nan\n",
        "[liquor]\npH = 0x7\ntemperature = \"\\u0034\\u0035 C\"\npotential = \"vs\"\n",
        "[liquor]\npotential = \"1 V vs  \"\ngas = 3\ndissolved = [\"Fe\"]\n",
        "[liquor]\n\tpH\t=\t\"１２\"\r\ntemperature = \"\"\"\n45\ndegC\"\"\"\n",
        "[liquor]\npH = 99999999999999999999999999\n",
        "[\u{202e}liquor]\n",
        deep.as_str(),
        nested.as_str(),
    ] {
        survives(text);
    }
    // Cut off anywhere, and with every character in turn replaced.
    for (at, letter) in GOOD.char_indices() {
        survives(&GOOD[..at]);
        survives(&format!("{}{}{}", &GOOD[..at], "µ", &GOOD[at + letter.len_utf8()..]));
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    #[test]
    fn no_file_is_a_crash(text in any::<String>(), line in 0..GOOD.lines().count(), value in "\\PC{0,16}") {
        survives(&text);
        let spoilt: Vec<String> = GOOD
            .lines()
            .enumerate()
            .map(|(number, old)| match old.split_once('=') {
                Some((key, _)) if number == line => format!("{key}= \"{value}\""),
                _ => old.to_owned(),
            })
            .collect();
        survives(&spoilt.join("\n"));
    }
}
