//! Commands and options, as typed.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

/// Every equilibrium of a harvested community, with a proof where one is possible.
#[derive(Debug, Parser)]
#[command(name = "restpoint", version, about, args_conflicts_with_subcommands = false, subcommand_negates_reqs = true)]
#[command(after_help = "Without a command, restpoint says what it understood of MODEL, or of a model of its own.")]
pub(super) struct Arguments {
    #[command(subcommand)]
    pub(super) command: Option<Command>,
    /// Model file in YAML, or - for standard input
    pub(super) model: Option<PathBuf>,
    #[command(flatten)]
    pub(super) options: Options,
}

/// What to do.
#[derive(Debug, Subcommand)]
pub(super) enum Command {
    /// Read a model, check it, and say what was understood
    Check {
        /// Model file in YAML, or - for standard input
        model: PathBuf,
    },
}

/// Options that every command takes.
#[derive(Debug, Args)]
pub(super) struct Options {
    /// How to write the result
    #[arg(long, global = true, value_enum, default_value = "text")]
    pub(super) format: Format,
    /// Write the result to this file, whole or not at all
    #[arg(long, global = true, value_name = "FILE")]
    pub(super) output: Option<PathBuf>,
    /// Let --output replace a file that is there
    #[arg(long, global = true)]
    pub(super) force: bool,
    /// Use only ASCII characters
    #[arg(long, global = true)]
    pub(super) ascii: bool,
    /// When to use colour
    #[arg(long, global = true, value_enum, default_value = "auto")]
    pub(super) color: Color,
}

/// How results are written.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum Format {
    /// For reading
    Text,
    /// For programs
    Json,
}

/// When colour is used.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum Color {
    /// On a terminal that can show it, unless NO_COLOR is set
    Auto,
    /// Always
    Always,
    /// Never
    Never,
}
