//! Any text as a formula: no panic, slips placed inside the text, and what was read without a slip prints and reads back
//! as the same tree.
#![no_main]

use libfuzzer_sys::fuzz_target;
use restpoint::diag::Span;
use restpoint::expr::ast::{Expr, ExprKind};
use restpoint::expr::parse::parse;

/// Makes two trees comparable: where their parts stood in the text is no part of what they mean.
fn forget_places(expr: &mut Expr) {
    expr.span = Span::default();
    match &mut expr.kind {
        ExprKind::Neg(a) => forget_places(a),
        ExprKind::Binary(_, a, b) => {
            forget_places(a);
            forget_places(b);
        }
        ExprKind::Call(_, arguments) => arguments.iter_mut().for_each(forget_places),
        ExprKind::Number(_) | ExprKind::Name(_) | ExprKind::Hole => {}
    }
}

fuzz_target!(|text: &str| {
    let (mut expr, slips) = parse(text);
    for slip in &slips {
        assert!(text.get(slip.span.start..slip.span.end).is_some(), "a slip outside {text:?}");
        assert!(!slip.message.is_empty());
    }
    if slips.is_empty() {
        let printed = expr.to_string();
        let (mut again, slips) = parse(&printed);
        assert!(slips.is_empty(), "{printed:?}: {slips:?}");
        forget_places(&mut expr);
        forget_places(&mut again);
        assert_eq!(again, expr, "{printed:?}");
    }
});
