//! Which formulas are warned about, where, and which unit a parameter must have; dimensions worked out by hand.

use crate::draft::Draft;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::units::{Units, check_units, malformed};

trait Checks {
    /// What is found, each warning as `piece: message`.
    fn check(self, expected: &[&str]) -> Units;
    /// As `check` for no warning, with the units found for the parameters.
    fn infers(self, expected: &[Option<&str>]);
}

impl Checks for Draft {
    fn check(self, expected: &[&str]) -> Units {
        let (model, text) = self.finish();
        let units = check_units(&model);
        let found: Vec<String> = units
            .warnings
            .iter()
            .map(|warning| format!("{}: {}", &text[warning.at.span.start..warning.at.span.end], warning.message))
            .collect();
        assert_eq!(found, expected);
        units
    }

    fn infers(self, expected: &[Option<&str>]) {
        let units = self.check(&[]);
        let found: Vec<Option<&str>> = units.inferred.parameters.iter().map(Option::as_deref).collect();
        assert_eq!(found, expected);
    }
}

/// Two stocks in kt, and parameters with the units of textbook use.
fn two_stocks() -> Draft {
    let parameters =
        [("r", "1/yr", 0.9), ("K", "kt", 900.0), ("a", "1/(kt*yr)", 0.01), ("h", "yr", 0.02), ("n", "", 2.0)];
    Draft::new("yr", &[("S", "kt"), ("C", "kt")], &parameters)
}

#[test]
fn consistent_models_are_silent_and_unknown_units_follow() {
    let named = |names: &[&'static str]| names.iter().map(|name| (*name, "", 1.0)).collect::<Vec<_>>();
    let stocks = [("S", "kt"), ("C", "kt")];
    // The two-species model of the file format's description, units of the stocks alone given.
    Draft::new("yr", &stocks, &named(&["r", "K", "a", "h", "e", "m", "q", "c", "E", "Q"]))
        .shorthand("intake", "a*S/(1 + a*h*S)")
        .process("r*S*(1 - S/K)", &[("S", "1")])
        .process("intake*C", &[("S", "-1"), ("C", "e")])
        .process("m*C", &[("C", "-1")])
        .harvest(&[("S", "q*E*S")], &[("S", "0.3")], "c*E")
        .infers(&[
            Some("1/yr"),
            Some("kt"),
            Some("1/(kt*yr)"),
            Some("yr"),
            Some("1"),
            Some("1/yr"),
            None,
            None,
            None,
            None,
        ]);
    // Numbers of one stock, biomass of the other: the conversion carries both.
    Draft::new("d", &[("S", "ind/ha"), ("C", "kg/ha")], &named(&["b", "e"]))
        .process("b*S*C", &[("S", "-1"), ("C", "e")])
        .infers(&[Some("ha/(kg*d)"), Some("kg/ind")]);
    Draft::new("yr", &stocks, &named(&["k", "s"]))
        .change(&[("S", "-k*S*exp(-s*S)")])
        .infers(&[Some("1/yr"), Some("1/kt")]);
    Draft::new("yr", &stocks, &named(&["k"])).change(&[("S", "k*sqrt(S)")]).infers(&[Some("kt^0.5/yr")]);
    Draft::new("yr", &stocks, &[("v", "", 1.0), ("H", "", 10.0), ("n", "", 2.0)])
        .change(&[("S", "v*S^n/(H^n + S^n)")])
        .infers(&[Some("kt/yr"), Some("kt"), Some("1")]);
    Draft::new("yr", &stocks, &named(&["lo", "hi", "F"])).harvest(&[("S", "F*ramp(S, lo, hi)*S")], &[], "").infers(&[
        Some("kt"),
        Some("kt"),
        Some("1/yr"),
    ]);
    Draft::new("yr", &stocks, &named(&["r", "K", "a", "h"]))
        .change(&[("S", "logistic(S, r, K) - holling3(S, a, h)*C")])
        .infers(&[Some("1/yr"), Some("kt"), Some("1/(kt^2*yr)"), Some("yr")]);
    Draft::new("yr", &stocks, &named(&["g", "x", "y", "z", "w"])).block(&["g", "-g"], &["x", "y", "z", "w"]).infers(&[
        Some("1/yr"),
        Some("1/(kt*yr)"),
        Some("1/(kt*yr)"),
        Some("1/(kt*yr)"),
        Some("1/(kt*yr)"),
    ]);
    Draft::new("yr", &stocks, &named(&["R", "b"]))
        .next(&[("S", "R*S*exp(-b*S)"), ("C", "C")])
        .harvest(&[("S", "0.2*S")], &[], "")
        .infers(&[Some("1"), Some("1/kt")]);
    Draft::new("yr", &stocks, &[("p", "EUR/t", 1.0), ("c", "", 1.0), ("Q", "t/yr", 1.0)])
        .harvest(&[], &[], "")
        .infers(&[None, None, None]);
}

#[test]
fn a_species_without_unit_is_solved_or_named() {
    let units =
        Draft::new("yr", &[("S", "")], &[("r", "1/yr", 1.0), ("K", "t", 1.0)]).change(&[("S", "r*K")]).check(&[]);
    assert_eq!(units.inferred.species, [Some("t".to_owned())]);
    Draft::new("yr", &[("S", "")], &[("h", "yr", 1.0)])
        .change(&[("S", "h*S")])
        .check(&["h*S: \"h*S\" is in [S]*yr, but the rate of change of S is in [S]/yr"]);
}

#[test]
fn each_rule_warns_at_its_piece() {
    let change = |text, expected: &[&str]| {
        two_stocks().change(&[("S", text)]).check(expected);
    };
    change("r*S*(1 - S/K)", &[]);
    change("r*S*S", &["r*S*S: \"r*S*S\" is in kt^2/yr, but the rate of change of S is in kt/yr"]);
    change("r*S - S", &["S: \"S\" is in kt, but the rate of change of S is in kt/yr"]);
    change("r*S*(1 - S)", &["S: \"S\" is in kt, but \"1\" beside it has no unit"]);
    change("r*(S - 5)", &["5: \"5\" has no unit, but \"S\" beside it is in kt"]);
    change("r*(S - 0)", &[]);
    change("r*(S + h)", &["h: \"h\" is in yr, but \"S\" beside it is in kt"]);
    change("r*S*exp(S)", &["S: \"S\" is in kt, but exp takes plain numbers"]);
    change("r*S*ln(S/K)", &[]);
    change("r*S*tanh(C*h)", &["C*h: \"C*h\" is in kt*yr, but tanh takes plain numbers"]);
    change("r*S*(S/K)^h", &["h: \"h\" is in yr, but an exponent is a plain number"]);
    change("r*S^(1 + C/K)", &["S: \"S\" is in kt, but a power that varies needs a plain number as its base"]);
    change("r*S*(S/K)^(C/K)", &[]);
    change("r*S^n", &["r*S^n: \"r*S^n\" is in kt^2/yr, but the rate of change of S is in kt/yr"]);
    change("r*min(S, h)", &["h: \"h\" is in yr, but \"S\" beside it is in kt"]);
    change("r*max(S, 5)", &[]);
    change("r*S*ramp(S, 100, h)", &["h: \"h\" is in yr, but \"S\" beside it is in kt"]);
    change("r*clamp(S, 1, K)", &[]);
    change("logistic(S, r, h)", &["h: \"h\" is in yr, but logistic needs kt here"]);
    change("holling2(S, a, r)*C", &["r: \"r\" is in 1/yr, but holling2 needs yr here"]);
    change("-holling2(S, a, h)*C", &[]);
    change("abs(r*S) + sqrt(r*S*r*S)", &[]);
    change("5", &[]);
    change("0.5*S", &["0.5*S: \"0.5*S\" is in kt, but the rate of change of S is in kt/yr"]);
}

#[test]
fn factors_are_told_apart_from_kinds() {
    Draft::new("yr", &[("S", "kt")], &[("T", "t", 1.0), ("r", "1/d", 1.0), ("e", "%", 25.0)])
        .change(&[("S", "r*S")])
        .shorthand("both", "S + T")
        .shorthand("share", "1 - e")
        .check(&[
            "T: \"T\" is in t, but \"S\" beside it is in kt; the two differ by a factor 1000",
            "e: \"e\" is in %, but \"1\" beside it has no unit; the two differ by a factor 100",
            "r*S: \"r*S\" is in kt/d, but the rate of change of S is in kt/yr; the two differ by a factor 365.25",
        ]);
}

#[test]
fn one_slip_is_told_once() {
    // `a` lacks its "per kt" and is used three times; the first tells, the others are further places.
    let units = Draft::new("yr", &[("S", "kt"), ("C", "kt")], &[("a", "1/yr", 1.0), ("h", "yr", 1.0)])
        .process("a*S*C", &[("S", "-1"), ("C", "1")])
        .harvest(&[("C", "a*C*C")], &[], "")
        .check(&["a*S*C: \"a*S*C\" is in kt^2/yr, but the rate of change of S is in kt/yr"]);
    assert_eq!(units.warnings[0].related.len(), 1);
    // K is concluded from its first use, doubted at the second, and left alone at the third.
    let units = Draft::new("yr", &[("S", "kt"), ("C", "ind")], &[("r", "1/yr", 1.0), ("K", "", 1.0)])
        .change(&[("S", "r*S*(1 - S/K)"), ("C", "r*C*(1 - C/K) + r*C*(2 - C/K)")])
        .check(&["C/K: \"C/K\" is in ind/kt, but \"1\" beside it has no unit"]);
    assert_eq!(units.warnings[0].related[1].1, "the unit of \"K\" follows from here");
    assert_eq!(units.inferred.parameters, [None, None]);
}

#[test]
fn every_kind_of_formula_is_checked() {
    two_stocks()
        .process("r*S", &[("S", "-1"), ("C", "h")])
        .check(&["h: \"h\" is in yr, but what one unit of \"process\" does to C has no unit"]);
    two_stocks()
        .process("r*S", &[("S", "h")])
        .check(&["h: \"h\" is in yr, but what one unit of \"process\" does to S has no unit"]);
    two_stocks()
        .next(&[("S", "r*S"), ("C", "C")])
        .check(&["r*S: \"r*S\" is in kt/yr, but the next state of S is in kt"]);
    two_stocks().harvest(&[("S", "S")], &[], "").check(&["S: \"S\" is in kt, but what is taken of S is in kt/yr"]);
    two_stocks()
        .block(&["r", "r"], &["-a", "-r", "a", "0"])
        .check(&["r: \"r\" is in 1/yr, but the effect of C on S is in 1/(kt*yr)"]);
    two_stocks().scenario(1, "2*K").scenario(1, "r").check(&["r: \"r\" is in 1/yr, but \"K\" is in kt"]);
    let money = [("p", "EUR/t", 1.0), ("c", "EUR/yr", 1.0), ("F", "1/yr", 1.0), ("x", "kt/t", 1.0)];
    let stock = [("S", "kt")];
    Draft::new("yr", &stock, &money)
        .harvest(&[("S", "F*S")], &[("S", "p")], "c")
        .check(&["c: \"c\" is in EUR/yr, but price times takes is in EUR*kt/(t*yr); the two differ by a factor 1000"]);
    Draft::new("yr", &stock, &money).harvest(&[("S", "F*S")], &[("S", "p/x")], "c").check(&[]);
}

#[test]
fn a_model_without_units_is_silent() {
    let units = Draft::new("yr", &[("S", "")], &[("r", "", 1.0)]).change(&[("S", "r*S + S^S + exp(S)")]).check(&[]);
    assert_eq!(units, Units::default());
}

#[test]
fn malformed_units_are_errors_and_fit_anything() {
    let (model, text) = Draft::new("yr", &[("S", "kt")], &[("r", "1//yr", 1.0)]).change(&[("S", "r*S")]).finish();
    let errors = malformed(&model);
    let [error] = errors.as_slice() else { panic!("{errors:?}") };
    assert_eq!(
        (&text[error.at.span.start - 2..error.at.span.end], error.message.as_str()),
        ("1//", "\"/\" cannot stand here in a unit")
    );
    assert!(check_units(&model).warnings.is_empty());
}

#[test]
fn a_file_with_a_malformed_unit_is_no_model() {
    let check = |unit: &str, expected: &[&str]| {
        let text = format!("title: t\ntime: yr\nspecies: {{S: {{upper: 9, unit: {unit}}}}}\nchange: {{S: S}}\n");
        let (model, _, errors) = load("model", text.as_bytes(), &NoFiles);
        let found: Vec<&str> = errors.iter().map(|error| &text[error.at.span.start..error.at.span.end]).collect();
        assert_eq!(found, expected, "{unit}");
        assert_eq!(model.is_none(), !expected.is_empty(), "{unit}");
    };
    check("kt", &[]);
    check("kt?", &["?"]);
    check("\"1/(kt*yr\"", &["("]);
    check("'kt, live'", &[","]);
    // The file spells the slip as an escape, so that only the whole text can be pointed at.
    check("\"kt\\u003F\"", &["\"kt\\u003F\""]);
}
