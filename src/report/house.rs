//! The house text of `templates/report/`: cautions, method, limits, sign-off lines.

use std::collections::BTreeMap;

use serde::Deserialize;

const TEXT: &str = include_str!("../../templates/report/text.toml");

/// A caution with its heading.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Caution {
    pub title: String,
    pub text: String,
}

/// All wording that is not computed.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct House {
    pub footer: String,
    pub sign_off: Vec<String>,
    pub standing: String,
    pub method: Vec<String>,
    pub limits: Vec<String>,
    pub caution: BTreeMap<String, Caution>,
}

impl House {
    /// The embedded text.
    ///
    /// # Errors
    /// The parser's message when the embedded file does not fit; a test keeps this from reaching a user.
    pub fn embedded() -> Result<Self, toml::de::Error> {
        toml::from_str(TEXT)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn embedded_text_fits_and_defers_to_local_codes() {
        let house = House::embedded().expect("text.toml");
        assert!(house.standing.contains("Local codes"));
        for key in ["general", "corrosion", "hydrogen", "oxidiser", "gas", "gas-toxic", "pressure"] {
            assert!(house.caution.contains_key(key), "{key}");
        }
    }
}
