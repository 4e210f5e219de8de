//! The program as its users meet it: built, and run in a pseudo-terminal.
//!
//! `session` runs it and looks at its screen; `walks` uses it, `kept` starts it again, `endings` ends it in every way there is, `pauses` stops it and
//! lets it go on, `abilities` counts what terminals of all kinds get, `panics` has it fail. What an own screen looks like is
//! tested without a terminal, in `app` and `ui`.

#![allow(clippy::unwrap_used, clippy::panic, reason = "a test fails by panicking")]
#![allow(unreachable_pub, missing_docs, reason = "a test has no users")]

mod abilities;
mod endings;
mod kept;
mod panics;
mod pauses;
mod session;
mod walks;

/// Two species, several scenarios, found at once.
const MODEL: &str = "scenarios/skarnby-bank.yaml";
