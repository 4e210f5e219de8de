//! Commands and options, as typed.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand, ValueEnum};

use crate::report::sketch::{LARGEST, SMALLEST, Size};
use crate::report::table::{Form, Limits};

/// Seconds that the search of one scenario may take where `--budget` does not say.
pub(super) const BUDGET: f64 = Limits::SECONDS;

/// More threads than this are a slip of the finger.
const MOST_THREADS: i64 = 1024;

/// Every equilibrium of a harvested community, with a proof where one is possible.
#[derive(Debug, Parser)]
#[command(name = "restpoint", version, about, after_help = AFTER, max_term_width = 80)]
#[command(override_usage = "restpoint [OPTIONS] [MODEL]\n       restpoint <COMMAND> [OPTIONS] MODEL")]
pub(super) struct Arguments {
    #[command(subcommand)]
    pub(super) command: Option<Command>,
    /// Model file in YAML, or - for standard input
    pub(super) model: Option<PathBuf>,
    #[command(flatten)]
    pub(super) work: Work,
    #[command(flatten)]
    pub(super) show: Show,
    #[command(flatten)]
    pub(super) options: Options,
}

const AFTER: &str = "\
Without a command, restpoint prints the table of MODEL, or of a model of its own.
Results go to standard output, everything else to standard error.

Exit status:
  0    done; warnings do not change it
  1    the model or its data is at fault, or a file could not be read or written
  2    the command line was not understood
  3    with --strict: something that is shown is not proved
  130  interrupted; what was found until then is printed and marked as partial";

/// What to do.
#[derive(Debug, Subcommand)]
pub(super) enum Command {
    /// Read a model, check it, and say what was understood
    Check {
        /// Model file in YAML, or - for standard input
        model: PathBuf,
    },
    /// Print every equilibrium of each scenario, what it is like, and what is proved of it
    #[command(after_help = AFTER_TABLE)]
    #[command(override_usage = "restpoint table [OPTIONS] <MODEL>\n       restpoint table --columns help")]
    Table {
        /// Model file in YAML, or - for standard input
        model: Option<PathBuf>,
        #[command(flatten)]
        work: Work,
        #[command(flatten)]
        show: Show,
    },
    /// Put scenarios side by side: which equilibria stay, change, are lost and gained
    #[command(after_help = AFTER_COMPARE)]
    Compare {
        /// Model file in YAML, or - for standard input
        model: PathBuf,
        #[command(flatten)]
        work: Work,
    },
    /// Follow every equilibrium as a parameter varies: branches, thresholds, yields, and how far it is to the edge
    #[command(after_help = AFTER_RESPONSE)]
    #[command(
        override_usage = "restpoint response [OPTIONS] --of <NAME> <MODEL>\n       restpoint response --columns help"
    )]
    Response(Response),
    /// Draw the direction field of each scenario, with its equilibria, in characters
    #[command(
        after_help = "The drawing shows what lies around the equilibria and today's stocks, for all scenarios alike."
    )]
    Sketch(Sketch),
}

/// What is to be drawn.
#[derive(Debug, Args)]
pub(super) struct Sketch {
    /// Model file in YAML, or - for standard input
    pub(super) model: PathBuf,
    /// Columns and rows of each drawing; its legend comes below [default: as the terminal allows, else 80x24]
    #[arg(long, value_name = "COLSxROWS", value_parser = size)]
    pub(super) size: Option<Size>,
    /// Symbols of the species across and upwards [default: as the model says, else the first two]
    #[arg(long, value_name = "X,Y", value_parser = axes)]
    pub(super) axes: Option<[String; 2]>,
    #[command(flatten)]
    pub(super) work: Work,
}

/// What is to be varied, and over what.
#[derive(Debug, Args)]
pub(super) struct Response {
    /// Model file in YAML, or - for standard input
    pub(super) model: Option<PathBuf>,
    /// The parameter that is varied; given twice, the chart of the two
    #[arg(long, value_name = "NAME")]
    pub(super) of: Vec<String>,
    /// Lower end of its range; with two parameters one for each, in their order [default: as the model says]
    #[arg(long, value_name = "A", value_parser = finite, allow_negative_numbers = true)]
    pub(super) from: Vec<f64>,
    /// Upper end of its range [default: as the model says]
    #[arg(long, value_name = "B", value_parser = finite, allow_negative_numbers = true)]
    pub(super) to: Vec<f64>,
    #[command(flatten)]
    pub(super) work: Work,
    #[command(flatten)]
    pub(super) show: Show,
}

const AFTER_RESPONSE: &str = "\
text, markdown and latex say what each threshold means; csv has a row for each point, threshold, best yield and band, and \
--columns chooses among its fields; json has the most.

Branches, thresholds, yields and margins are numerical, and --strict does not ask that they be proved, only that no \
equilibrium be missing anywhere in the range.";

const AFTER_TABLE: &str = "\
Equilibria are called E1, E2, ... and keep their names in all scenarios of one run.

text, markdown and latex are for people: numbers rounded, columns that are empty left out. csv has one row for each \
equilibrium of each scenario, json has the most; both have exact numbers. Every format says what is proved, what is \
numerical and what is undecided, and has what is needed to make the table again.";

const AFTER_COMPARE: &str = "\
The first scenario is the reference that the others are compared with. Each equilibrium is followed from it to every \
other scenario on the way between their balances; what is found so is numerical, and --strict does not ask that it be \
proved.";

/// What is shown of the results.
#[derive(Debug, Default, Args)]
pub(super) struct Show {
    /// Columns to show, with commas between; help lists them, all is every one [default: as the format needs]
    #[arg(long, value_name = "LIST|help")]
    pub(super) columns: Option<String>,
}

impl Show {
    /// Whether it was asked what columns there are.
    pub(super) fn is_help(&self) -> bool {
        self.columns.as_deref().is_some_and(|list| list.trim() == "help")
    }
}

/// What is to be solved, and at what cost.
#[derive(Debug, Default, Args)]
pub(super) struct Work {
    /// Only this scenario; may be given several times [default: all, always in the file's order]
    #[arg(long = "scenario", value_name = "NAME")]
    pub(super) scenarios: Vec<String>,
    /// Give a parameter this value in every scenario; may be given several times, the last one counts
    #[arg(long, value_name = "NAME=VALUE", value_parser = setting)]
    pub(super) set: Vec<(String, f64)>,
    /// End with status 3 when anything shown is not proved
    #[arg(long)]
    pub(super) strict: bool,
    /// Seconds that the search of each scenario may take [default: 10]
    #[arg(long, value_name = "SECONDS", value_parser = seconds)]
    pub(super) budget: Option<f64>,
    /// Threads that search at once; the result is the same [default: as many as there are processors]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=MOST_THREADS))]
    pub(super) threads: Option<u16>,
}

impl Work {
    /// The first option that was given, as it was typed.
    pub(super) fn given(&self) -> Option<&'static str> {
        let given = [
            ("--scenario", !self.scenarios.is_empty()),
            ("--set", !self.set.is_empty()),
            ("--strict", self.strict),
            ("--budget", self.budget.is_some()),
            ("--threads", self.threads.is_some()),
        ];
        given.iter().find_map(|&(option, is_given)| is_given.then_some(option))
    }
}

fn setting(text: &str) -> Result<(String, f64), String> {
    let Some((name, value)) = text.split_once('=') else {
        return Err("write a parameter's name, = and a number, for example E=1.5".to_owned());
    };
    match value.trim().parse() {
        Ok(number) if f64::is_finite(number) => Ok((name.trim().to_owned(), number)),
        _ => Err(format!("\"{}\" is not a finite number", value.trim())),
    }
}

fn finite(text: &str) -> Result<f64, String> {
    match text.trim().parse() {
        Ok(number) if f64::is_finite(number) => Ok(number),
        _ => Err("a finite number is needed".to_owned()),
    }
}

fn size(text: &str) -> Result<Size, String> {
    let (least, most) = (SMALLEST, LARGEST);
    let read = || {
        let (columns, rows) = text.split_once(['x', 'X'])?;
        Some(Size { columns: columns.trim().parse().ok()?, rows: rows.trim().parse().ok()? })
    };
    let Some(size) = read() else { return Err("write columns, x and rows, for example 100x30".to_owned()) };
    if size.columns < least.columns || size.rows < least.rows {
        return Err(format!("the smallest drawing is {}x{}", least.columns, least.rows));
    }
    if size.columns > most.columns || size.rows > most.rows {
        return Err(format!("the largest drawing is {}x{}", most.columns, most.rows));
    }
    Ok(size)
}

fn axes(text: &str) -> Result<[String; 2], String> {
    match text.split(',').map(str::trim).collect::<Vec<_>>()[..] {
        [x, y] if !x.is_empty() && !y.is_empty() && x != y => Ok([x.to_owned(), y.to_owned()]),
        _ => Err("write the symbols of two species with a comma between, for example S,C".to_owned()),
    }
}

fn seconds(text: &str) -> Result<f64, String> {
    match text.parse() {
        Ok(number) if f64::is_finite(number) && number > 0.0 => Ok(number),
        _ => Err("a positive number of seconds is needed, for example 0.5".to_owned()),
    }
}

/// Options that every command takes.
#[derive(Debug, Args)]
pub(super) struct Options {
    /// How to write the result; check knows text and json
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
    /// For spreadsheets and statistics: one row an equilibrium and scenario
    Csv,
    /// For reports and wikis
    Markdown,
    /// For programs
    Json,
    /// For reports: booktabs tables to be taken in by \input
    Latex,
}

impl From<Format> for Form {
    fn from(format: Format) -> Self {
        match format {
            Format::Text => Self::Text,
            Format::Csv => Self::Csv,
            Format::Markdown => Self::Markdown,
            Format::Json => Self::Json,
            Format::Latex => Self::Latex,
        }
    }
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
