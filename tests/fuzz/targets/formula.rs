//! Any text as a formula: no panic, slips placed inside the text, and what was read without a slip prints and reads back
//! as itself.
#![no_main]

use libfuzzer_sys::fuzz_target;
use restpoint::expr::parse::parse;

fuzz_target!(|text: &str| {
    let (expr, slips) = parse(text);
    for slip in &slips {
        assert!(text.get(slip.span.start..slip.span.end).is_some(), "a slip outside {text:?}");
        assert!(!slip.message.is_empty());
    }
    if slips.is_empty() {
        let printed = expr.to_string();
        let (again, slips) = parse(&printed);
        assert!(slips.is_empty(), "{printed:?}: {slips:?}");
        assert_eq!(again.to_string(), printed);
    }
});
