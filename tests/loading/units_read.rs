//! Reading of unit strings, and how two units compare; sizes are definitions (SI brochure, Julian year).

use proptest::prelude::*;
use restpoint::model::units::{Agreement, compare, read};

fn shown(text: &str) -> String {
    match read(text) {
        Ok(unit) => unit.to_string(),
        Err(slip) => format!("{}..{}: {}", slip.span.start, slip.span.end, slip.message),
    }
}

#[test]
fn units_are_read_as_written() {
    let check = |text, expected| assert_eq!(shown(text), expected, "{text:?}");
    check("kt", "kt");
    check("t/km2", "t/km2");
    check("1/yr", "1/yr");
    check("ind/ha", "ind/ha");
    check("kg*m^-2*d^-1", "kg/(m2*d)");
    check("t km-2 yr^-1", "t/(km2*yr)");
    check("kg·m⁻²", "kg/m2");
    check("kg.m-2.d-1", "kg/(m2*d)");
    check("%", "%");
    check("EUR/t", "EUR/t");
    check("k€ / t", "kEUR/t");
    check("1/(kt*yr)", "1/(kt*yr)");
    check("1", "1");
    check("-", "1");
    check(" ind ", "ind");
    check("individuals per hectare", "ind/ha");
    check("/d", "1/d");
    check("per ind per yr", "1/(ind*yr)");
    check("t/km2/yr", "t/(km2*yr)");
    check("kg^0.75", "kg^0.75");
    check("kg^(3/4)", "kg^0.75");
    check("m**2", "m2");
    check("yr^2", "yr^2");
    check("m s−1", "m/s");
    check("trap-night", "trap-night");
    check("1/trapnight", "1/trapnight");
    check("hook-2", "1/hook^2");
    check("CO2/d", "CO2/d");
    check("1000 ind/km2", "1000 ind/km2");
    check("1e6 ind", "1000000 ind");
    check("10^3 ind", "1000 ind");
    check("(kg/m)^2", "kg^2/m2");
    check("kt/kt", "1");
    check("µg/L", "ug/L");
}

#[test]
fn malformed_units_are_told_to_the_byte() {
    let check = |text: &str, expected| assert_eq!(shown(text), expected, "{text:?}");
    check("", "0..0: the unit is empty");
    check("  ", "0..2: the unit is empty");
    check("kt/", "2..3: nothing follows here in the unit");
    check("kt*", "2..3: nothing follows here in the unit");
    check("*kt", "0..1: \"*\" cannot stand here in a unit");
    check("kt//yr", "3..4: \"/\" cannot stand here in a unit");
    check("1/(kt*yr", "2..3: this bracket is never closed");
    check("kt)", "2..3: \")\" cannot stand here in a unit");
    check("m^", "1..2: \"^\" wants a number after it");
    check("m^x", "1..2: \"^\" wants a number after it");
    check("m^(1/0)", "1..2: \"^\" wants a number after it");
    check("m^(2", "2..3: this bracket is never closed");
    check("m^1000", "1..6: the power is too large for a unit");
    check("0 kg", "0..1: \"0\" cannot be a factor of a unit");
    check("1e999 kg", "0..5: \"1e999\" cannot be a factor of a unit");
    check("kg?", "2..3: \"?\" cannot stand here in a unit");
    check("°C, dry", "3..4: \",\" cannot stand here in a unit");
    check("kg\u{1b}[0m", "2..3: \"\\u{1b}\" cannot stand here in a unit");
    check(&"(".repeat(17), "16..17: brackets are nested too deeply in the unit");
    check(&"m".repeat(201), "0..201: the unit is too long to be one");
    check("10-3", "2..3: \"-\" cannot stand here in a unit");
    check("kg -", "3..4: \"-\" cannot stand here in a unit");
}

#[test]
fn comparison_tells_factors_from_kinds() {
    let check = |a, b, expected: Option<f64>| {
        let found = compare(&read(a).unwrap(), &read(b).unwrap());
        match (found, expected) {
            (Agreement::Different, None) | (Agreement::Same, Some(1.0)) => {}
            (Agreement::Factor(factor), Some(expected)) => {
                assert!((factor / expected - 1.0).abs() < 1e-12, "{a} to {b}: {factor}");
            }
            _ => panic!("{a} to {b}: {found:?}"),
        }
    };
    check("kt", "kt", Some(1.0));
    check("kt", "t", Some(1000.0));
    check("t/km2", "kg/m2", Some(1000.0));
    check("t/km2", "g/m2", Some(1.0));
    check("ha", "km2", Some(100.0));
    check("L", "m3", Some(1000.0));
    check("1/yr", "1/d", Some(365.25));
    check("1/month", "1/yr", Some(12.0));
    check("%", "1", Some(100.0));
    check("kEUR/t", "EUR/kg", Some(1.0));
    check("kEUR", "EUR", Some(1000.0));
    check("ind", "1000 ind", Some(1000.0));
    check("kg^0.5*kg^0.5", "kg", Some(1.0));
    check("kt", "yr", None);
    check("kt", "ind", None);
    check("EUR", "USD", None);
    check("hook", "trap-night", None);
    check("trap-night", "trap*night", None);
    check("ind", "1", None);
}

#[test]
fn what_is_shown_reads_back_as_the_same_unit() {
    for text in
        ["kt/yr", "1/(kt*yr)", "1000 ind/km2", "kg^0.75*m^-2.5", "trap-night^-1", "0.3 EUR/hook", "%/yr", "1/1e-7 d"]
    {
        let unit = read(text).unwrap();
        let again = read(&unit.to_string()).unwrap();
        assert_eq!(compare(&unit, &again), Agreement::Same, "{text}: {unit}");
    }
}

proptest! {
    #[test]
    fn any_text_is_read_or_refused_at_whole_characters(text in "([ -~µ·²⁻−€é\u{200b}]|kt|m|yr|2|-1|/|\\*|\\^|\\(|\\)| |0\\.5|1e3|⁻¹|x-y|%){0,12}") {
        match read(&text) {
            Ok(unit) => {
                let again = read(&unit.to_string());
                prop_assert!(again.is_ok_and(|again| compare(&unit, &again) == Agreement::Same), "{} from {}", unit, text);
            }
            Err(slip) => prop_assert!(text.get(slip.span.start..slip.span.end).is_some(), "{:?} in {:?}", slip, text),
        }
    }
}
