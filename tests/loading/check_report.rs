//! What `check` shows, as text and as data.

use crate::draft::Draft;
use restpoint::diag::Location;
use restpoint::expr::ast::{BinaryOp, Builtin, Expr, ExprKind};
use restpoint::expr::parse::parse;
use restpoint::model::system::bounds::Bound;
use restpoint::model::units::check_units;
use restpoint::model::{Aim, Correlation, Draw, Model, ParameterId, Placed, Role, SpeciesId, Survey, When};
use restpoint::report::check::{Style, Subject, json, text};
use serde_json::json;

fn placed<T>(value: T) -> Placed<T> {
    Placed { value, at: Location::default() }
}

/// Two stocks with a bit of everything that the report has a place for.
fn two_stocks() -> Model {
    let parameters = [
        ("r", "", 0.9),
        ("K", "kt", 900.0),
        ("a", "", 0.012),
        ("h", "", 0.02),
        ("e", "", 0.25),
        ("m", "1/yr", 0.3),
        ("q", "1/yr", 0.35),
        ("E", "1", 1.0),
    ];
    let (mut model, _) = Draft::new("yr", &[("S", "kt"), ("C", "kt")], &parameters)
        .shorthand("intake", "a*S/(1 + a*h*S)")
        .process("r*S*(1 - S/K)", &[("S", "1")])
        .process("intake*C", &[("S", "-1"), ("C", "e")])
        .process("m*C", &[("C", "-1")])
        .harvest(&[("S", "q*E*S")], &[("S", "0.3")], "4*E")
        .scenario(7, "0.5*E")
        .finish();
    model.title = placed("Sprat and\u{1b}[31m cod".to_owned());
    model.note =
        Some("Invented figures, for demonstration; the note runs on so that it must be broken somewhere.".to_owned());
    model.species[0].name = String::from("sprat");
    model.species[1].aim = Aim::Remove;
    model.species[1].role = Role::Resource;
    model.parameters[1].range = Some(placed([700.0, 1100.0]));
    model.parameters[1].note = Some("acoustic survey over nine years, stratified by depth and repeated".to_owned());
    model.parameters[2].draw = Some(placed(Draw::Lognormal { cv: 0.2 }));
    model.parameters[7].control = true;
    model.parameters[7].range = Some(placed([0.0, 3.0]));
    model.now = vec![Survey { species: SpeciesId(0), at: Location::default(), value: 610.0, cv: Some(0.2) }];
    model.correlations =
        vec![Correlation { between: [ParameterId(0), ParameterId(1)], rank: -0.4, at: Location::default() }];
    model
}

fn shown(model: &Model, style: Style) -> String {
    let units = check_units(model);
    let bound = |upper, chosen| Bound { lower: 0.0, upper, chosen };
    let bounds = [bound(1500.0, false), bound(400.0, true)];
    text(&Subject { model, units: &units, bounds: Some(&bounds), warnings: &units.warnings }, style)
}

/// The equations alone, line by line.
fn equations(draft: Draft, expected: &[&str]) {
    let (model, _) = draft.finish();
    let shown = shown(&model, Style::Ascii);
    let after = shown.split_once("Equations\n").map_or("", |(_, after)| after);
    let lines: Vec<&str> = after.lines().take_while(|line| !line.is_empty()).map(|line| &line[2..]).collect();
    assert_eq!(lines, expected);
}

#[test]
fn the_report_reads_as_expected() {
    let expected = include_str!("../files/check/two stocks.txt");
    assert_eq!(shown(&two_stocks(), Style::Ascii), expected);
}

#[test]
fn nothing_is_wider_than_a_terminal_and_style_changes_glyphs_alone() {
    let (ascii, unicode) = (shown(&two_stocks(), Style::Ascii), shown(&two_stocks(), Style::Unicode));
    assert!(ascii.is_ascii());
    assert_eq!(unicode.replace('·', "*").replace('²', "^2"), ascii);
    assert!(ascii.lines().all(|line| line.len() <= 80), "{ascii}");
    assert!(!ascii.contains('\u{1b}'));
}

#[test]
fn equations_are_put_together_without_needless_brackets() {
    let stocks = [("S", "kt"), ("C", "kt")];
    let draft = || Draft::new("yr", &stocks, &[("r", "", 1.0), ("K", "", 1.0), ("a", "", 1.0), ("h", "", 1.0)]);
    equations(
        draft().process("r*S - a*S*C", &[("S", "-1")]),
        &["dS/dt = -r*S + a*S*C", "      = S*(-r + a*C)", "dC/dt = 0"],
    );
    equations(draft().process("-a*S/C", &[("C", "-h")]), &["dS/dt = 0", "dC/dt = h*a*S/C"]);
    equations(draft().process("a - (S - C)", &[("C", "-1")]), &["dS/dt = 0", "dC/dt = -a + S - C"]);
    equations(
        draft().change(&[("S", "logistic(S, r, K) - holling2(S, a, h)*C")]),
        &["dS/dt = logistic(S, r, K) - holling2(S, a, h)*C", "      = S*(r*(1 - S/K) - a/(1 + a*h*S)*C)", "dC/dt = 0"],
    );
    equations(
        draft().change(&[("S", "a*S^2"), ("C", "a*C")]),
        &["dS/dt = a*S^2", "      = S*(a*S)", "dC/dt = a*C", "      = C*a"],
    );
    equations(
        draft().block(&["0.8", "-r"], &["-0.1", "-a", "h", "0"]),
        &["dS/dt = S*(0.8 - 0.1*S - a*C)", "dC/dt = C*(-r + h*S)"],
    );
    equations(
        draft().next(&[("S", "r*S*exp(-a*S)"), ("C", "C")]).harvest(&[("S", "h*S"), ("C", "h*C")], &[], ""),
        &["next S = r*S*exp(-a*S) - h*S", "       = S*(r*exp(-a*S) - h)", "next C = C - h*C", "       = C*(1 - h)"],
    );
    let mut before = draft().next(&[("S", "r*S"), ("C", "C")]).harvest(&[("S", "h*S")], &[], "");
    before.model.harvest[0].when = When::Before;
    equations(before, &["next S = r*S", "  where S is what is left of S after h*S", "next C = C"]);
}

/// The value of a formula at S = 3, C = 5 and small parameters, by the definitions of the formula language.
fn value(expr: &Expr) -> f64 {
    match &expr.kind {
        ExprKind::Number(x) => *x,
        ExprKind::Name(name) => [("S", 3.0), ("C", 5.0), ("r", 0.7), ("K", 11.0), ("a", 0.13), ("h", 1.7)]
            .iter()
            .find_map(|(other, value)| (other == name).then_some(*value))
            .unwrap_or(f64::NAN),
        ExprKind::Neg(a) => -value(a),
        ExprKind::Binary(operator, a, b) => {
            let (a, b) = (value(a), value(b));
            match operator {
                BinaryOp::Add => a + b,
                BinaryOp::Sub => a - b,
                BinaryOp::Mul => a * b,
                BinaryOp::Div => a / b,
                BinaryOp::Pow => a.powf(b),
            }
        }
        ExprKind::Call(function, arguments) => {
            let x: Vec<f64> = arguments.iter().map(value).collect();
            match function {
                Builtin::Exp => x[0].exp(),
                Builtin::Min => x[0].min(x[1]),
                Builtin::Max => x[0].max(x[1]),
                Builtin::Logistic => x[1] * x[0] * (1.0 - x[0] / x[2]),
                Builtin::Holling1 => x[1] * x[0],
                Builtin::Holling2 => x[1] * x[0] / (1.0 + x[1] * x[2] * x[0]),
                Builtin::Holling3 => x[1] * x[0] * x[0] / (1.0 + x[1] * x[2] * x[0] * x[0]),
                _ => f64::NAN,
            }
        }
        ExprKind::Hole => f64::NAN,
    }
}

#[test]
fn both_forms_of_an_equation_have_the_value_of_what_was_written() {
    let check = |rate: &str| {
        let stocks = [("S", ""), ("C", "")];
        let parameters = [("r", "", 1.0), ("K", "", 1.0), ("a", "", 1.0), ("h", "", 1.0)];
        let (model, _) =
            Draft::new("yr", &stocks, &parameters).process(rate, &[("S", "-h")]).change(&[("S", "r*S")]).finish();
        let units = check_units(&model);
        let data = json(&Subject { model: &model, units: &units, bounds: None, warnings: &[] });
        let read = |key: &str| value(&parse(data["equations"][0][key].as_str().unwrap_or("0/0")).0);
        let expected = -1.7 * value(&parse(rate).0) + 0.7 * 3.0;
        for found in [read("right"), 3.0 * read("per_capita")] {
            assert!(
                (found - expected).abs() <= 1e-12 * expected.abs().max(1.0),
                "{rate}: {found}, expected {expected}"
            );
        }
    };
    check("a*S*C");
    check("-a*S*(C - S)");
    check("C*(a - S)*S/(1 + h*S)");
    check("a*S^2 - S^3*C + S^2.5");
    check("a*(S - (S*C - S*S))");
    check("-(a*S - -S)*C");
    check("logistic(S, r, K)*exp(-C)");
    check("holling1(S, a)*C + holling2(S, a, h) - C/K*holling3(S, a, h)");
    check("holling3(2*S, a, h)*min(C, K)");
    check("max(a*S, S^2)*C");
    check("C/(a/S)*0 + S/(C/K)");
    check("S/a/h");
}

#[test]
fn a_large_community_is_told_in_one_line() {
    let symbols: Vec<String> = (0..13).map(|i| format!("x{i}")).collect();
    let species: Vec<(&str, &str)> = symbols.iter().map(|symbol| (symbol.as_str(), "")).collect();
    let matrix: Vec<&str> = (0..169).map(|place| if place % 14 == 0 { "-1" } else { "0.5" }).collect();
    let draft = Draft::new("d", &species, &[]).block(&["1"; 13], &matrix).change(&[("x3", "x3")]);
    equations(
        draft,
        &[
            "community = growth_i + sum over j of matrix_ij*x_j for each of 13 species, 182",
            "            entries not 0",
            "dx3/dt = x3 + x3*community",
            "       = x3*(1 + community)",
        ],
    );
}

#[test]
fn data_holds_what_the_text_holds() {
    let model = two_stocks();
    let units = check_units(&model);
    let bounds = [Bound { lower: 0.0, upper: 1500.0, chosen: true }];
    let subject = Subject { model: &model, units: &units, bounds: Some(&bounds), warnings: &units.warnings };
    let data = json(&subject);
    let check =
        |pointer: &str, expected: serde_json::Value| assert_eq!(data.pointer(pointer), Some(&expected), "{pointer}");
    check("/model/time", json!({"kind": "continuous", "unit": "yr", "step": null}));
    check("/equations/1/right", json!("e*intake*C - m*C"));
    check("/equations/1/per_capita", json!("e*intake - m"));
    check("/shorthand/0", json!({"name": "intake", "formula": "a*S/(1 + a*h*S)", "unit": "1/yr"}));
    check("/species/0/box", json!([0.0, 1500.0]));
    check("/species/1/box", json!([0.0, null]));
    check("/species/0/chosen", json!(true));
    check("/species/1/chosen", json!(false));
    check("/parameters/0/unit", json!("1/yr"));
    check("/parameters/0/unit_inferred", json!(true));
    check("/parameters/1/draw", json!("uniform"));
    check("/parameters/7/draw", json!(null));
    check("/parameters/6/draw", json!(null));
    check("/harvest/0/takes", json!({"S": "q*E*S"}));
    check("/scenarios/0/values", json!({"E": "0.5*E"}));
    check("/now/0", json!({"species": "S", "value": 610.0, "cv": 0.2}));
}
