//! What parts in electrical contact do to each other, by their practical order of nobility.

use crate::case::{Contact, Material, Solid};
use crate::library::tables::AlloyRecord;
use crate::quantity::Estimate;

use super::finding::{Attention, Finding, Question, Verdict};
use super::{Setting, text};

/// Differences of practical potentials from which a contact calls for attention, V. Common practice: 0.15 V is the usual
/// bound of design guides for mild conditions, 0.05 V the scatter of the series itself.
const CALLS_FOR_ACTION: f64 = 0.15;
/// Ratio of cathode to anode area from which the anode suffers visibly more (common practice, no source).
const UNFAVOURABLE_RATIO: f64 = 2.0;

/// One finding for each pair in each contact.
pub fn screen(setting: &Setting) -> Vec<Finding> {
    let mut findings = Vec::new();
    for contact in &setting.case.contacts {
        for (i, first) in contact.members.iter().enumerate() {
            for second in &contact.members[i + 1..] {
                findings.push(pair(setting, contact, &setting.case.solids[*first], &setting.case.solids[*second]));
            }
        }
    }
    findings
}

fn record<'l>(solid: &Solid<'l>) -> Option<&'l AlloyRecord> {
    match solid.material {
        Material::Metal { record, .. } => record,
        Material::Compound { .. } => None,
    }
}

/// Range of the practical potential: that of the broken film when the liquor breaks it.
fn series_range(setting: &Setting, solid: &Solid) -> Option<[f64; 2]> {
    let record = record(solid)?;
    let top =
        setting.drivers.iter().filter(|d| d.held_back.is_none()).map(|d| d.potential.value).fold(f64::MIN, f64::max);
    let holds = super::film::film(setting, solid, top).is_some_and(|f| f.holds());
    match (record.film && !holds, record.seawater_potential_active_v_she) {
        (true, Some(active)) => Some(active),
        _ => record.seawater_potential_v_she,
    }
}

fn pair(setting: &Setting, contact: &Contact, a: &Solid, b: &Solid) -> Finding {
    let (Some(first), Some(second)) = (series_range(setting, a), series_range(setting, b)) else {
        return not_assessed(contact, a, b);
    };
    let middle = |r: [f64; 2]| Estimate::new((r[0] + r[1]) / 2.0, (r[1] - r[0]).abs() / 12f64.sqrt());
    let (anode, cathode, low, high) =
        if middle(first).value <= middle(second).value { (a, b, first, second) } else { (b, a, second, first) };
    let gap = super::difference(middle(high), middle(low));
    let ratio = anode.area.zip(cathode.area).map(|(anode, cathode)| cathode / anode);
    let verdict = Verdict::of(gap);
    let unfavourable = ratio.is_some_and(|r| r > UNFAVOURABLE_RATIO);
    let attention = match (verdict, gap.value > CALLS_FOR_ACTION, unfavourable) {
        (Verdict::Driven, true, true) => Attention::Act,
        (Verdict::Driven, _, _) => Attention::Review,
        _ => Attention::Note,
    };
    let ratio_words = ratio.map_or(" (no areas given)".into(), |r| format!(" (cathode to anode area {r:.0} to 1)"));
    let statement = match verdict {
        Verdict::Driven => format!(
            "Contact “{}”: {} is the likely anode to {}, {} apart by the practical series{ratio_words}.",
            contact.name,
            anode.name,
            cathode.name,
            text::millivolts(gap)
        ),
        _ => format!(
            "Contact “{}”: {} and {} stand close in the practical series ({}); either may be the anode.",
            contact.name,
            anode.name,
            cathode.name,
            text::millivolts(gap)
        ),
    };
    let against = format!("{} ({})", cathode.name, contact.name);
    let mut finding = Finding::new(Question::Contact, &anode.name, Some(&against), verdict, attention, statement);
    finding.driving_force = Some(gap);
    finding.quantities.extend(ratio.map(|r| ("cathode_to_anode_area".to_owned(), r)));
    finding.quantities.insert("anode_practical_V".into(), middle(low).value);
    finding.quantities.insert("cathode_practical_V".into(), middle(high).value);
    finding.reasons.push(
        "The series was measured in flowing seawater; this liquor is another medium, so only its order is used, and the order of close neighbours can turn.".into(),
    );
    if unfavourable {
        finding.reasons.push("A small anode beside a large cathode concentrates the attack.".into());
    }
    finding.reasons.push("Remedies in their usual order: isolate the parts, coat the cathode, change the area ratio, change the material.".into());
    finding.sources.extend([anode, cathode].iter().filter_map(|s| record(s)).map(|r| r.source.clone()));
    finding.cautions.extend(["general".into(), "corrosion".into()]);
    finding
}

fn not_assessed(contact: &Contact, a: &Solid, b: &Solid) -> Finding {
    let statement = format!(
        "Contact “{}” between {} and {} is not assessed: the library has no practical potential for one of them.",
        contact.name, a.name, b.name
    );
    let against = format!("{} ({})", b.name, contact.name);
    let mut finding =
        Finding::new(Question::Contact, &a.name, Some(&against), Verdict::NotAssessed, Attention::Review, statement);
    finding.cautions.extend(["general".into(), "corrosion".into()]);
    finding
}
