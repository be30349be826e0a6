//! Do the stated conditions agree with each other, and do the models reach them?

use crate::quantity::ATMOSPHERE_BAR;

use super::drivers::Origin;
use super::finding::{Attention, Finding, Question, Verdict};
use super::{Setting, difference, text};

/// Open charge above which the composition is said to be incomplete, as a share of the ionic strength.
const OPEN_CHARGE_SHARE: f64 = 0.1;

pub fn screen(setting: &Setting) -> Vec<Finding> {
    let mut findings = Vec::new();
    findings.extend(measured_against_computed(setting));
    findings.extend(activity_range(setting));
    findings.extend(open_charge(setting));
    findings.extend(boiling(setting));
    findings
}

/// The measured potential beside the couple that should set it.
fn measured_against_computed(setting: &Setting) -> Option<Finding> {
    let (measured, electrode) = setting.case.measured.as_ref()?;
    let nearest = setting
        .drivers
        .iter()
        .filter(|d| {
            d.origin != Origin::Measured && d.held_back.is_none() && !d.deposits_metal && d.origin != Origin::Acid
        })
        .min_by(|a, b| {
            (a.potential.value - measured.value).abs().total_cmp(&(b.potential.value - measured.value).abs())
        })?;
    let gap = difference(*measured, nearest.potential);
    let agrees = gap.value.abs() <= 2.0 * gap.standard_uncertainty;
    let (attention, words) = if agrees {
        (Attention::Note, "which agrees")
    } else {
        (Attention::Review, "which disagrees: check the electrode, the analysis of both states, or a couple not listed")
    };
    let statement = format!(
        "The measured potential is {:.3} V against SHE ({electrode}); {} computes to {:.3} V, {words}. The measured value governs the verdicts.",
        measured.value, nearest.pretty, nearest.potential.value
    );
    let mut finding = Finding::new(
        Question::Liquor,
        "measured potential",
        Some(&nearest.label),
        Verdict::of(gap),
        attention,
        statement,
    );
    finding.verdict = if agrees { Verdict::NearBalance } else { finding.verdict };
    finding.driving_force = Some(gap);
    finding.cautions.push("general".into());
    Some(finding)
}

fn activity_range(setting: &Setting) -> Option<Finding> {
    let liquor = &setting.liquor;
    let limit = liquor.activity_model.upper_limit();
    (liquor.ionic_strength > limit).then(|| {
        let statement = format!(
            "Ionic strength {:.1} mol/kg is beyond the range of the {} model ({limit} mol/kg): activities are rough and the uncertainties are widened.",
            liquor.ionic_strength,
            liquor.activity_model.name()
        );
        Finding::new(Question::Liquor, "activity model", None, Verdict::NotAssessed, Attention::Review, statement)
    })
}

fn open_charge(setting: &Setting) -> Option<Finding> {
    let liquor = &setting.liquor;
    let open = liquor.open_charge;
    (open.abs() > OPEN_CHARGE_SHARE * liquor.ionic_strength && open.abs() > 1e-3).then(|| {
        let missing = if open > 0.0 { "anions" } else { "cations" };
        let statement = format!(
            "The composition leaves {:.2} mol/kg of charge open: {missing} that are not listed are taken as an inert single-charged ion in the ionic strength.",
            open.abs()
        );
        Finding::new(Question::Liquor, "composition", None, Verdict::NotAssessed, Attention::Note, statement)
    })
}

fn boiling(setting: &Setting) -> Option<Finding> {
    let t = setting.liquor.temperature();
    let vapour = crate::thermo::water::saturation_pressure(t).ok()?;
    (vapour > ATMOSPHERE_BAR).then(|| {
        let statement = format!(
            "At {:.0} °C the water vapour alone is {vapour:.1} bar: a pressure vessel, and gas pressures add to it.",
            t.celsius()
        );
        let mut finding =
            Finding::new(Question::Liquor, "pressure", None, Verdict::NotAssessed, Attention::Review, statement);
        finding.quantities.insert("water_vapour_bar".into(), vapour);
        finding.cautions.push("pressure".into());
        finding.reasons.push(text::sentence("Saturation pressure by IAPWS-IF97"));
        finding
    })
}
