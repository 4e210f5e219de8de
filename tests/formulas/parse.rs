//! Formulas: precedence by hand-computed values, the messages for the usual slips, and parse ∘ print = identity.

use proptest::prelude::*;
use restpoint::diag::Span;
use restpoint::expr::ast::{BinaryOp, Builtin, Expr, ExprKind};
use restpoint::expr::builtin::BUILTINS;
use restpoint::expr::parse::{DEEPEST_NESTING, HIGHEST_TREE, parse};

/// Value of a formula without functions, by the rules of arithmetic alone.
fn value(expr: &Expr, n: f64) -> f64 {
    match &expr.kind {
        ExprKind::Number(value) => *value,
        ExprKind::Name(_) => n,
        ExprKind::Neg(a) => -value(a, n),
        ExprKind::Binary(op, a, b) => {
            let (a, b) = (value(a, n), value(b, n));
            match op {
                BinaryOp::Add => a + b,
                BinaryOp::Sub => a - b,
                BinaryOp::Mul => a * b,
                BinaryOp::Div => a / b,
                BinaryOp::Pow => a.powf(b),
            }
        }
        ExprKind::Call(..) | ExprKind::Hole => f64::NAN,
    }
}

#[test]
fn precedence_and_associativity() {
    let check = |text: &str, expected: f64| {
        let (expr, slips) = parse(text);
        assert!(slips.is_empty(), "{text}: {slips:?}");
        assert_eq!(value(&expr, 3.0), expected, "{text} at N = 3");
    };
    check("-N^2", -9.0);
    check("2^3^2", 512.0);
    check("2^-1", 0.5);
    check("-2^-N", -0.125);
    check("2 - 3 - 4", -5.0);
    check("12/2/3", 2.0);
    check("2*N^2/6", 3.0);
    check("2 + 3*4", 14.0);
    check("(2 + 3)*4", 20.0);
    check("2*-N", -6.0);
    check("--N", 3.0);
    check("1.5e-3*1e3", 1.5);
    check(".5*N + 1.", 2.5);
    check("6/2*3", 9.0);
    check("1 - -1", 2.0);
}

const MISSING: &str = "an operator is missing between these two";
const PUT: &str = "put a number, a name or a parenthesis between the two operators";
const HOLD: &str = "formulas hold numbers, names, + - * / ^, parentheses and functions";
const SWITCH: &str = "formulas have no comparisons: switch smoothly with ramp(x, lo, hi), min, max or clamp";

/// A formula with one slip, where the slip is, what is said of it, and what to do.
const SLIPS: &[[&str; 4]] = &[
    ["2N", "2N", MISSING, "write 2*N"],
    ["r*2 N", "r*2 N", MISSING, "write an operator between them, * for a product"],
    ["r S", "r S", MISSING, "write an operator between them, * for a product"],
    ["(1 - N)(2 + N)", "(1 - N)(", MISSING, "write a * between them"],
    ["N**2", "**", "\"**\" is not an operator", "write a power as a^b"],
    ["N(1-N)", "N", "\"N\" is not a function", "for a product write N*(…)"],
    [
        "r*log(N)",
        "log",
        "\"log\" is not a function",
        "write ln(x) for the natural logarithm, log10(x) for the decimal one",
    ],
    ["sqr(N)", "sqr", "\"sqr\" is not a function", "did you mean \"sqrt\"? For a product write sqr*(…)"],
    ["r*(1 - N/K", "(", "this parenthesis is never closed", "add the missing \")\""],
    ["r*1 - N)", ")", "no parenthesis is open here", "remove this \")\""],
    ["1,5*N", "1,5", "a comma stands where a decimal point belongs", "write a decimal point: \"1.5\", not \"1,5\""],
    ["r*N +", "", "the formula breaks off here", "something must follow the last operator"],
    ["r*/N", "/", "an operand is missing before this operator", PUT],
    ["exp()", "exp()", "\"exp\" takes 1 argument, and 0 stand here", "write exp(x): e to the power x"],
    [
        "holling2(N, a)",
        "holling2(N, a)",
        "\"holling2\" takes 3 arguments, and 2 stand here",
        "write holling2(N, a, h): a*N/(1 + a*h*N)",
    ],
    [
        "exp(1,5)",
        "exp(1,5)",
        "\"exp\" takes 1 argument, and 2 stand here",
        "write exp(x): e to the power x; a decimal comma must be a point",
    ],
    ["a − b", "−", "this dash is not a minus sign", "write the plain hyphen \"-\""],
    ["a × b", "×", "\"×\" is not an operator here", "write \"*\""],
    ["5% * N", "%", "\"%\" is not part of a formula", "write 5 % as 0.05"],
    ["N > 3", ">", "\">\" is not part of a formula", SWITCH],
    ["[N]*2", "[", "\"[\" is not part of a formula", "use the parentheses ( and )"],
    ["1e999", "1e999", "this number is too large", "the largest number is about 1.8e308; choose larger units"],
    ["", "", "the formula is empty", "write 0 if nothing is meant"],
    ["a\u{200b}b", "\u{200b}", "the invisible character U+200B is not part of a formula", HOLD],
    ["+N", "+", "a sign \"+\" before a term is not needed", "leave it out"],
    ["min(a; b)", ";", "arguments are separated by commas", "write \",\"; a decimal comma must be a point"],
    [
        "(a, b)",
        ",",
        "a comma does not belong here",
        "commas stand only between the arguments of a function; a decimal comma must be a point",
    ],
    ["min(a, )", ")", "an operand is missing before this", "put a number, a name or a parenthesis there"],
    ["r*N'", "'", "the quotation mark ' is not part of a formula", "remove it"],
    ["2*& + N", "&", "\"&\" is not part of a formula", HOLD],
];

#[test]
fn slips_are_named_and_placed() {
    for [text, at, message, help] in SLIPS {
        let (_, slips) = parse(text);
        let [slip] = &slips[..] else { panic!("{text}: one slip, not {slips:#?}") };
        assert_eq!(&text[slip.span.start..slip.span.end], *at, "{text}");
        assert_eq!((slip.message.as_str(), slip.help.as_str()), (*message, *help), "{text}");
        assert!(!slip.expected.is_empty(), "{text}");
    }
}

#[test]
fn every_slip_is_reported_not_the_first_alone() {
    let (_, slips) = parse("2N + 3M - log(x) + N**2");
    assert_eq!(slips.len(), 4, "{slips:#?}");
}

#[test]
fn reading_goes_on_behind_what_does_not_belong() {
    let check = |text: &str, expected: &[&str]| {
        let messages: Vec<String> = parse(text).1.into_iter().map(|slip| slip.message).collect();
        assert_eq!(messages, expected, "{text}");
    };
    check("r & ** N", &["\"&\" is not part of a formula"]);
    check("r & * / N", &["\"&\" is not part of a formula", "an operand is missing before this operator"]);
    check("dN/dt == 2*N", &["\"=\" is not part of a formula"]);
    check("r, 2N", &["a comma does not belong here", "an operator is missing between these two"]);
}

#[test]
fn limits_hold_without_a_stack_overflow() {
    let refused = |text: &str, message: &str| {
        let (_, slips) = parse(text);
        assert_eq!(slips.len(), 1, "{:?}", &slips[..slips.len().min(3)]);
        assert_eq!(slips[0].message, message);
    };
    let deep = format!("the formula is nested more than {DEEPEST_NESTING} deep");
    refused(&("(".repeat(500_000) + "1"), &deep);
    refused(&("-".repeat(500_000) + "1"), &deep);
    refused(&("2^".repeat(500_000) + "1"), &deep);
    refused(&("exp(".repeat(500_000) + "1"), &deep);
    refused(&("1+".repeat(500_000) + "1"), &format!("the formula has more than {HIGHEST_TREE} operators in a row"));
    refused(&("2*".repeat(500_000) + "1"), &format!("the formula has more than {HIGHEST_TREE} operators in a row"));
    let fits = "(".repeat(DEEPEST_NESTING) + "1" + &")".repeat(DEEPEST_NESTING);
    assert!(parse(&fits).1.is_empty());
}

fn without_spans(mut expr: Expr) -> Expr {
    fn clear(expr: &mut Expr) {
        expr.span = Span::default();
        match &mut expr.kind {
            ExprKind::Neg(a) => clear(a),
            ExprKind::Binary(_, a, b) => {
                clear(a);
                clear(b);
            }
            ExprKind::Call(_, arguments) => arguments.iter_mut().for_each(clear),
            _ => {}
        }
    }
    clear(&mut expr);
    expr
}

fn bare(kind: ExprKind) -> Expr {
    Expr { kind, span: Span::default() }
}

fn any_expr() -> impl Strategy<Value = Expr> {
    let number = prop_oneof![
        (0u32..1000).prop_map(f64::from),
        (0.0f64..1.0),
        (0u64..0x7ff0_0000_0000_0000).prop_map(f64::from_bits),
    ];
    let leaf = prop_oneof![
        number.prop_map(|value| bare(ExprKind::Number(value))),
        prop_oneof![Just("N"), Just("K"), Just("β"), Just("a_1"), Just("exp"), Just("e")]
            .prop_map(|name| bare(ExprKind::Name(name.into()))),
    ];
    leaf.prop_recursive(6, 48, 3, |inner| {
        let op = prop_oneof![
            Just(BinaryOp::Add),
            Just(BinaryOp::Sub),
            Just(BinaryOp::Mul),
            Just(BinaryOp::Div),
            Just(BinaryOp::Pow)
        ];
        prop_oneof![
            inner.clone().prop_map(|a| bare(ExprKind::Neg(Box::new(a)))),
            (op, inner.clone(), inner.clone()).prop_map(|(op, a, b)| bare(ExprKind::Binary(
                op,
                Box::new(a),
                Box::new(b)
            ))),
            (0..BUILTINS.len(), proptest::collection::vec(inner, 3)).prop_map(|(which, mut arguments)| {
                let row = &BUILTINS[which];
                arguments.truncate(row.arguments.len());
                bare(ExprKind::Call(row.builtin, arguments))
            }),
        ]
    })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2_000))]

    #[test]
    fn what_is_printed_reads_back_as_the_same_tree(expr in any_expr()) {
        let text = expr.to_string();
        let (read, slips) = parse(&text);
        prop_assert!(slips.is_empty(), "{text}: {slips:?}");
        prop_assert_eq!(without_spans(read), expr, "{}", text);
    }

    #[test]
    fn any_text_is_read_without_a_panic(text in "[-+*/^(),.0-9eENKmin βé%=\\u{0}-\\u{ff}]{0,40}") {
        let (expr, slips) = parse(&text);
        let mut holes = 0;
        expr.walk(&mut |part| holes += usize::from(part.kind == ExprKind::Hole));
        prop_assert!(slips.is_empty() <= (holes == 0), "a hole without a message in {text:?}");
        for slip in slips {
            prop_assert!(slip.span.start <= slip.span.end && text.get(slip.span.start..slip.span.end).is_some());
        }
    }
}

#[test]
fn every_function_is_read_by_its_name() {
    for row in BUILTINS {
        let text = format!("{}({})", row.name, row.arguments.join(", "));
        let (expr, slips) = parse(&text);
        assert!(slips.is_empty(), "{text}");
        assert!(matches!(expr.kind, ExprKind::Call(found, _) if found == row.builtin), "{text}");
    }
    assert_eq!(Builtin::by_name("log"), None);
}
