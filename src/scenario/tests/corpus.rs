//! Bad input: one change to a good scenario, one row a change, and what must be said of it.

use std::path::Path;

use super::{GOOD, bad};

/// Text of the good scenario, what stands in its place, line of the mistake, text underlined, words of message and help.
#[rustfmt::skip]
const CHANGES: &[(&str, &str, usize, &str, &[&str])] = &[
    // The head.
    ("title = \"Oxid", "titel = \"Oxid", 2, "titel", &["not a key of [scenario]", "did you mean `title`?"]),
    ("Oxidising chloride strip of copper shred", " ", 2, "\" \"", &["`title` is empty"]),
    ("\"Oxidising chloride strip of copper shred\"", "14", 2, "14", &["`title` is a text in quotes"]),
    ("\"TR-014\"", "[\"TR-014\"]", 3, "[\"TR-014\"]", &["`reference` is a text in quotes"]),
    ("2026-11-30", "\"30.11.2026\"", 6, "\"30.11.2026\"", &["not a date", "2026-11-30"]),
    ("2026-11-30", "2026-11-30T10:00:00Z", 6, "2026-11-30T10:00:00Z", &["not a date"]),
    ("2026-11-30", "2026-02-30", 6, "2026-02-30", &["invalid date", "2026-11-30"]),
    // Sections.
    ("[liquor]", "[liqour]", 8, "liqour", &["not a section", "did you mean `liquor`?"]),
    ("[[mineral]]", "[[minerals]]", 34, "minerals", &["not a section", "did you mean `mineral`?"]),
    ("[[oxidant]]", "[[banana]]", 17, "banana", &["not a section", "scenario, liquor, oxidant"]),
    ("[[oxidant]]", "[oxidant]", 17, "[oxidant]", &["double brackets", "[[oxidant]]"]),
    ("[liquor]", "[[liquor]]", 8, "[[liquor]]", &["[liquor] is one table"]),
    ("[[mineral]]", "[mineral.x]", 34, "mineral", &["double brackets"]),
    ("[scenario]", "[title]", 1, "title", &["stands outside its section", "[scenario]"]),
    // Known to the design, not computed.
    ("[[oxidant]]", "[[upset]]\n[[oxidant]]", 17, "upset", &["`[[upset]]` is not screened by this version", "remove it; nothing in it would be computed"]),
    ("[[oxidant]]", "[[lining]]\n[[oxidant]]", 17, "lining", &["`[[lining]]` is not screened by this version"]),
    ("[[oxidant]]", "[[on_site]]\n[[oxidant]]", 17, "on_site", &["`[[on_site]]` is not screened by this version"]),
    ("[[oxidant]]", "[[measured_couple]]\n[[oxidant]]", 17, "measured_couple", &["`[[measured_couple]]` is not screened"]),
    ("volume = \"12 m3\"", "headspace = \"3 m3\"", 11, "headspace", &["`headspace` is not computed by this version", "remove it"]),
    ("volume = \"12 m3\"", "ventilation = \"400 m3/h\"", 11, "ventilation", &["`ventilation` is not computed"]),
    ("volume = \"12 m3\"", "free_acid = { H2SO4 = \"150 g/L\" }", 11, "free_acid", &["`free_acid` is not computed", "give the `pH`"]),
    ("volume = \"12 m3\"", "free_base = { NaOH = \"1 g/L\" }", 11, "free_base", &["`free_base` is not computed"]),
    // The liquor.
    ("\"1.2 ± 0.2\"", "41", 9, "41", &["pH 41 is outside −2 … 16", "did you mean 4.1?"]),
    ("\"1.2 ± 0.2\"", "-3", 9, "-3", &["pH −3 is outside −2 … 16"]),
    ("1.2 ± 0.2", "15..17", 9, "\"15..17\"", &["pH 17 is outside −2 … 16"]),
    ("\"1.2 ± 0.2\"", "true", 9, "true", &["`pH` is a quantity"]),
    ("\"1.2 ± 0.2\"", "1,2", 9, "", &["not valid TOML", "decimal point"]),
    ("pH =", "ph =", 9, "ph", &["not a key of [liquor]", "did you mean `pH`?"]),
    ("pH = \"1.2 ± 0.2\"", "", 8, "[liquor]", &["[liquor] needs `pH`", "`pH` is missing"]),
    ("temperature = \"45 degC\"", "", 8, "[liquor]", &["[liquor] needs `temperature`"]),
    ("temperature =", "temp =", 10, "temp", &["did you mean `temperature`?"]),
    ("45 degC", "45 C", 10, "C", &["`C` is not a known unit", "write `degC`"]),
    ("45 degC", "45 g/L", 10, "g/L", &["unit of mass per volume", "a temperature belongs here: degC, K, degF"]),
    ("45 degC", "450 degC", 10, "\"450 degC\"", &["temperature 450 °C is outside 0 … 300 °C"]),
    ("45 degC", "−10..20 degC", 10, "\"−10..20 degC\"", &["temperature −10 °C is outside"]),
    ("45 degC", "45", 10, "45", &["a unit is missing", "degC"]),
    ("\"45 degC\"", "45", 10, "45", &["a unit is missing", "degC"]),
    ("\"45 degC\"", "45 degC", 10, "45 degC", &["must be quoted", "stand in quotes"]),
    ("\"45 degC\"", "“45 degC”", 10, "“45 degC”", &["straight quotes"]),
    ("12 m3", "12 m2", 11, "m2", &["unit of area", "a volume belongs here"]),
    ("12 m3", "0 m3", 11, "\"0 m3\"", &["`volume`: the value must be above zero"]),
    ("100 kg/m3", "100 kg/m", 12, "kg/m", &["not a known unit", "did you mean `kg/m3`?"]),
    ("640 mV vs Ag", "640 mV Ag", 13, "mV Ag/AgCl 3 M KCl", &["not a known unit", "vs Ag/AgCl 3 M KCl"]),
    ("vs Ag/AgCl 3 M KCl", "vs", 13, "640 mV vs", &["reference electrode after `vs` is missing"]),
    ("vs Ag/AgCl 3 M KCl", "vs SHE ± 5 mV", 13, "SHE ± 5 mV", &["the spread stands after the electrode", "640 ± 5 mV"]),
    ("640 mV", "640 V", 13, "\"640 V vs Ag/AgCl 3 M KCl\"", &["potential 640 V is outside −3 … 3 V", "is it in mV?"]),
    ("\"640 mV vs Ag/AgCl 3 M KCl\"", "0.64", 13, "0.64", &["`potential` is a quantity in quotes"]),
    ("2.0 mol/L", "2,0 mol/L", 14, "2,0 mol/L", &["`Cl^-`", "comma", "decimal point"]),
    ("2.0 mol/L", "2.0 moll/L", 14, "moll/L", &["did you mean `mol/L`?"]),
    ("2.0 mol/L", "-2.0 mol/L", 14, "\"-2.0 mol/L\"", &["must be above zero", "leave out"]),
    ("2.0 mol/L", "2000 mol/L", 14, "\"2000 mol/L\"", &["more than 60 mol/L", "check the unit"]),
    ("15 g/L", "150 %", 14, "\"150 %\"", &["the whole or more"]),
    ("\"15 g/L\", \"Cu^2+\" = \"2 g/L\"", "\"60 %\", \"Cu^2+\" = \"40 %\"", 14, "\"40 %\"", &["make up the whole solution", "leave some for the water"]),
    ("15 g/L", "15 N", 14, "N", &["normality"]),
    ("\"15 g/L\"", "15", 14, "15", &["a unit is missing", "a concentration belongs here"]),
    ("\"Fe^3+\" =", "Fe^3+ =", 14, "^", &["invalid unquoted key", "stands in quotes"]),
    ("{ \"Cl^-\" = \"2.0 mol/L\", \"Fe^3+\" = \"15 g/L\", \"Cu^2+\" = \"2 g/L\" }", "\"Cl^-\"", 14, "\"Cl^-\"", &["`dissolved` is one table"]),
    ("0.21 atm", "21 %", 15, "%", &["share by mass", "a pressure belongs here"]),
    ("0.21 atm", "0 atm", 15, "\"0 atm\"", &["`O2`: the value must be above zero"]),
    ("gas = {", "[liquor.dissolved]\ngas = {", 15, "", &["duplicate key"]),
    // Oxidants.
    ("amount = \"0.05 mol/L\"", "", 17, "[[oxidant]]", &["[[oxidant]] needs `amount`"]),
    ("species = \"ClO^-\"", "", 17, "[[oxidant]]", &["[[oxidant]] needs `species`"]),
    ("\"ClO^-\"", "\"\"", 19, "\"\"", &["`species` is empty"]),
    ("0.05 mol/L", "5 degC", 20, "degC", &["unit of temperature", "a concentration belongs here"]),
    // Solids.
    ("\"dissolve\"\namount = \"40", "\"disolve\"\namount = \"40", 25, "\"disolve\"", &["not a duty", "did you mean `dissolve`?"]),
    ("\"dissolve\"\namount = \"40", "\"leach\"\namount = \"40", 25, "\"leach\"", &["not a duty", "duties here: dissolve, resist"]),
    ("duty = \"dissolve\"\namount = \"40", "amount = \"40", 22, "[[metal]]", &["[[metal]] needs `duty`"]),
    ("40 kg/m3", "40 kg", 26, "kg", &["per volume of liquor (kg/m3) or per ore (kg/t)"]),
    ("40 kg/m3", "0..-5 kg/m3", 26, "\"0..-5 kg/m3\"", &["runs downwards", "lower end first"]),
    ("area =", "wetted_area =", 32, "wetted_area", &["not a key of [[metal]]", "did you mean `area`?"]),
    ("18 m2", "18 m3", 32, "m3", &["unit of volume", "an area belongs here: m2"]),
    ("pulp_density = \"100 kg/m3\"\n", "", 37, "\"12 kg/t\"", &["needs the pulp density", "give `pulp_density` in [liquor]"]),
    ("name = \"agitator\"", "name = \"tank shell\"", 41, "\"tank shell\"", &["two solids are named `tank shell`"]),
    ("name = \"agitator\"", "nome = \"agitator\"", 41, "nome", &["did you mean `name`?"]),
    ("\"UNS S31603\"", "316", 42, "316", &["`material` is a text in quotes"]),
    // Contacts.
    ("\"agitator\"]", "\"agitatr\"]", 47, "\"agitatr\"", &["no solid is named `agitatr`", "did you mean `agitator`?"]),
    ("\"agitator\"]", "\"tank shell\"]", 47, "\"tank shell\"", &["stands twice"]),
    (", \"agitator\"]", "]", 47, "[\"tank shell\"]", &["two members or more"]),
    ("[\"tank shell\", \"agitator\"]", "\"tank shell\"", 47, "\"tank shell\"", &["`metals` is a list of names"]),
    ("metals = [\"tank shell\", \"agitator\"]", "", 45, "[[contact]]", &["[[contact]] needs `metals`"]),
    // Not TOML.
    ("\"Process group\"", "\"Process group", 5, "", &["not valid TOML", "close the quotes"]),
    ("revision = \"A\"", "revision \"A\"", 4, "", &["key with no value"]),
    ("revision = \"A\"", "title = \"A\"", 4, "title", &["duplicate key"]),
    ("revision = \"A\"", "// revision A", 4, "", &["a comment begins with #"]),
];

#[test]
fn each_mistake_is_named_with_its_line_its_text_and_a_hint() {
    for &(old, new, line, underlined, words) in CHANGES {
        assert!(GOOD.contains(old), "{old} is not in the good scenario");
        let text = GOOD.replacen(old, new, 1);
        let diagnostics = bad(&text);
        let shown = diagnostics.render(false);
        let found = diagnostics.list().iter().any(|one| {
            diagnostics.line(one) == line && (underlined.is_empty() || text[one.span.clone()] == *underlined)
        });
        assert!(found, "{new}: not line {line} with `{underlined}` underlined\n{shown}");
        assert!(shown.contains(&format!("bad.toml:{line}:")), "{new}: line {line} not shown\n{shown}");
        for part in words {
            assert!(shown.contains(part), "{new}: `{part}` not said\n{shown}");
        }
    }
}

/// Files of `tests/bad`: comments `# expect: words` at the head say what must be said of the file.
#[test]
fn bad_files_get_the_messages_that_they_ask_for() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/bad");
    let mut read = 0;
    for entry in folder.read_dir().expect("tests/bad") {
        let path = entry.expect("entry").path();
        if path.extension().is_none_or(|extension| extension != "toml") {
            continue;
        }
        let text = std::fs::read_to_string(&path).expect("text");
        let expected: Vec<&str> =
            text.lines().filter_map(|line| line.split_once("# expect: ")).map(|(_, words)| words.trim()).collect();
        assert!(!expected.is_empty(), "{} expects nothing", path.display());
        let shown = bad(&text).render(false);
        for words in expected {
            // The file quotes its own expectations: they must stand in a message too.
            let said = shown.lines().any(|line| line.contains(words) && !line.contains("# expect: "));
            assert!(said, "{}: `{words}` not said\n{shown}", path.display());
        }
        read += 1;
    }
    assert!(read > 0, "tests/bad is empty");
}
