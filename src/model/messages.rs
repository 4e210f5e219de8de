//! Everything the loader can say about a file, in one table.
//!
//! A row has what is wrong, what was expected and what to do, with `{0}`, `{1}` … for the values at hand.
//! [`Message::at`] makes the diagnostic. To say something new, add a row here and a file of its name to
//! `tests/files/errors`; the tests fail on a row that no file provokes. Slips inside formulas have their own words in
//! `expr::slip`, units in `units::message`.

use std::fmt::Display;

use crate::diag::wording::{fill, wording};
use crate::diag::{Diagnostic, Location};

/// Digits of a number that are written without an exponent.
const DIGITS: usize = 20;

wording! {
/// One thing that can be wrong.
pub(super) enum Message {
    // The file as a whole.
    FileTooLarge: "the file is {0} bytes long; at most {1} are read", "", "move large tables into CSV files and name them in the model";
    NotUtf8: "the text is not valid UTF-8 from here on", "", "save the file with the encoding UTF-8";
    HiddenCharacter: "the invisible character {0} is not allowed", "", "delete it; if the line looks empty here, delete and retype it";
    HiddenInText: "the text stands for the invisible character {0}, which is not allowed", "", "leave the escape out";
    EmptyFile: "the file holds no model", "a title, the time unit, species and processes", "start with a line such as \"title: My first stock\"";
    NotAMap: "{0} must be a map", "{1}", "{2}";
    TooDeep: "the file is nested more than {0} levels deep", "", "a model needs about five; look for a bracket that is never closed";
    TooManyNodes: "with its aliases written out, the file is too large", "at most {0} keys and values and {1} bytes", "write the parts out that are needed, without the aliases";
    SecondDocument: "a second document starts here", "the end of the file", "keep one model in each file; delete this line and what follows";
    MergeKey: "the merge key \"<<\" is not supported", "", "write the entries out";
    Tag: "the tag \"{0}\" is not supported", "a plain value", "delete the tag; the value stands for itself";
    UnknownAlias: "no anchor is called \"{0}\"", "", "where a formula begins with \"*\", something is missing before it; else declare the anchor with \"&{0}\" above";
    AliasInItself: "the anchor \"{0}\" is used inside itself", "", "write the value out";
    KeyNotText: "a key must be a name", "a name, then a colon", "where a value is meant, give it a key; where braces belong to a text, quote the text";
    DuplicateKey: "the key \"{0}\" stands twice in the same map", "", "keep one of the two, or rename one";
    SplitFormula: "the comma splits the formula \"{0}\" in two", "", "inside braces quote a formula that has a comma: \"{0}\"";
    SplitNumber: "the comma splits the number \"{0}\" in two", "", "write the decimal point: {1}";
    KeyAlone: "\"{0}\" stands without a value", "\"{0}: …\"", "give it a value; if the comma before it belongs to a text, quote that text";
    ColonSpace: "no space follows the colon in \"{0}\"", "\"{1}: …\"", "write {1}: {2}";
    // The grammar of YAML.
    YamlSplitFormula: "this cannot be read as YAML: the comma splits a formula inside braces", "", "inside braces quote a formula that has a comma: \"{0}\"";
    YamlColon: "this cannot be read as YAML: a second colon on the line", "", "quote the text if the colon belongs to it: \"{0}\"";
    YamlBraces: "this cannot be read as YAML: a second colon on the line", "", "a map inside a line stands in braces: {{0}}; if the colon belongs to a text, quote it";
    YamlDeeper: "this cannot be read as YAML: the line is indented deeper than the one before it", "a key in line with those beside it", "align the keys of one map in one column";
    YamlAfterValue: "this cannot be read as YAML: the value before this has ended already", "the end of the line", "delete what follows the value; inside single quotes write a single quote twice";
    YamlDash: "this cannot be read as YAML: an entry of a list stands among keys", "a key", "delete the \"- \" before it";
    YamlTab: "this cannot be read as YAML: a tab stands where only spaces may indent", "spaces", "replace the tab by spaces";
    YamlMapOpen: "this cannot be read as YAML: the braces that open here are not closed properly", "", "close with \"}\", and put a comma between entries";
    YamlComma: "this cannot be read as YAML: a comma is missing before this entry", "a comma, then the entry", "put commas between the entries inside braces";
    YamlListOpen: "this cannot be read as YAML: the bracket that opens here is not closed properly", "", "close with \"]\", and put a comma between entries";
    YamlQuoteOpen: "this cannot be read as YAML: the quotation mark that opens here is never closed", "", "close the quotation; inside single quotes write a single quote twice";
    YamlEscape: "this cannot be read as YAML: the backslash begins no known escape", "", "write two backslashes, or use single quotes";
    YamlIndent: "this cannot be read as YAML: the line is not indented like the ones before it", "a key in line with the map that begins at the other place", "align the keys of one map in one column";
    YamlItem: "this cannot be read as YAML: the line is not an entry of the list before it", "\"- \" in line with the list", "align the entries of one list in one column";
    YamlKeyColon: "this cannot be read as YAML: no colon follows the key", "\"key: value\"", "write a colon and a space after the key";
    YamlStart: "this cannot be read as YAML: no value can begin with \"{0}\"", "", "quote the text that begins here";
    YamlAlias: "this cannot be read as YAML: no name follows \"{0}\"", "", "where a formula begins with \"{0}\", something is missing before it";
    YamlOther: "this cannot be read as YAML: {0}", "", "look at this line and the one before it; quote what is meant as text";
    // Keys and plain values.
    UnknownKey: "{0} has no key \"{1}\"", "{2}", "delete the line or choose one of the keys that exist";
    UnknownKeyNear: "{0} has no key \"{1}\"", "\"{2}\"", "\"{2}\" is {3}";
    MissingKey: "{0} lacks the key \"{1}\"", "\"{1}\", {2}", "for example {3}";
    Missing: "{0} has no value", "{1}", "write the value after the colon, or delete the key";
    MissingComment: "{0} has no value, for \"#\" begins a comment", "{1}", "quote the value if the \"#\" belongs to it";
    NotOneValue: "{0} must be a single value", "{1}", "write one value in place of the list or map";
    NotAList: "{0} must be a list", "{1}", "write a list in brackets: [a, b]";
    NotANumber: "{0} is not a number: \"{1}\"", "a number", "write a plain number such as 0.25 or 1.5e-3";
    QuotedNumber: "{0} is a text that looks like a number: \"{1}\"", "a number", "delete the quotation marks";
    DecimalComma: "{0} is not a number: \"{1}\"", "a number", "write the decimal point, not a comma: {2}";
    NumberDash: "{0} is not a number: \"{1}\"", "a number", "write the plain hyphen for the minus sign: {2}";
    DigitGroups: "{0} is not a number: \"{1}\"", "a number", "write the digits without spaces or marks between them: {2}";
    LeadingZero: "{0} begins with a zero, which YAML takes for a text: \"{1}\"", "a number", "write {2}";
    NumberWithUnit: "{0} is not a number alone: \"{1}\"", "a number", "write the number alone; a parameter's unit has a key of its own: {2}";
    Percent: "{0} is not a number: \"{1}\"", "a number", "write the share itself, 5% as 0.05";
    NumberTooLarge: "{0} is too large to be held: \"{1}\"", "a number below 1.8e308", "write it in a larger unit";
    NotFinite: "{0} is not finite: \"{1}\"", "a finite number", "write a number; leave the key out where there is no limit";
    FormulaForNumber: "{0} must be a plain number, not a formula: \"{1}\"", "a number", "work the value out; formulas belong into shorthand, processes, harvest and scenarios";
    NotPositive: "{0} must be above zero, but is {1}", "a number above 0", "";
    Negative: "{0} must not be negative, but is {1}", "0 or more", "";
    NotAFlag: "{0} must be true or false, not \"{1}\"", "true or false", "";
    NotAWord: "{0} cannot be \"{1}\"", "{2}", "choose one of these, or leave the key out";
    NotAPair: "{0} must be two values", "{1}", "write {2}";
    SeveralLines: "{0} must be one line", "one line of text", "move the rest into \"note\"";
    Blank: "{0} is blank", "{1}", "write it, or delete the key";
    // Names.
    NoSpecies: "the model has no species", "\"species\", a map of one or more", "for example species: {stock: {symbol: N, upper: 1000}}";
    TooManySpecies: "the model has {0} species; at most {1} are possible", "", "group or leave out species";
    NotASymbol: "\"{0}\" cannot be used as a name in formulas", "a letter, then letters, digits or underscores", "{1}";
    SymbolNeeded: "the species \"{0}\" needs a symbol, because its name cannot stand in a formula", "\"symbol\"", "write a symbol of your choice, for example symbol: {1}";
    NameTaken: "the name \"{0}\" is used twice", "a name of its own", "rename one of the two; species' symbols, parameters and shorthand share one set of names";
    FunctionName: "\"{0}\" is the name of a function", "another name", "rename it, for example {0}_1";
    UnknownName: "nothing is called \"{0}\"", "the name of a species, parameter or shorthand", "declare \"{0}\" under \"parameters\" or \"shorthand\"";
    UnknownNameNear: "nothing is called \"{0}\"", "\"{1}\"", "write \"{1}\", or declare \"{0}\"";
    NameCase: "nothing is called \"{0}\"; \"{1}\" differs by case", "\"{1}\"", "write \"{1}\": capital and small letters are different names";
    LongName: "\"{0}\" is the long name of a species; formulas and inner keys use its symbol", "\"{1}\"", "write \"{1}\"";
    TimeInFormula: "nothing is called \"{0}\": a model cannot depend on time", "a formula without time", "put the season's average in its place, or make the model discrete with one step a year and compose the seasons through shorthand";
    Constant: "the constant \"{0}\" is not built in", "a declared name", "declare it under \"parameters\": {0}: {1}";
    FunctionAlone: "the function \"{0}\" stands without its arguments", "\"{0}(…)\"", "write its arguments in parentheses";
    ParametersOnly: "\"{0}\" is {1}, but {2} may use parameters only", "a number or a formula of parameters", "use a parameter, or move the formula into \"processes\"";
    NotASpecies: "\"{0}\" is {1}, not a species", "the symbol of a species: {2}", "";
    UnknownSpecies: "no species has the symbol \"{0}\"", "the symbol of a species: {1}", "declare \"{0}\" under \"species\", or use a symbol that is there";
    UnknownSpeciesNear: "no species has the symbol \"{0}\"", "\"{1}\"", "write \"{1}\"";
    NotAParameter: "\"{0}\" is {1}, not a parameter", "the name of a parameter", "only what stands under \"parameters\" can be set, drawn or correlated";
    UnknownParameter: "no parameter is called \"{0}\"", "the name of a parameter", "declare \"{0}\" under \"parameters\"";
    UnknownParameterNear: "no parameter is called \"{0}\"", "\"{1}\"", "write \"{1}\"";
    Cycle: "the shorthand \"{0}\" depends on itself: {1}", "", "write one of these out so that the circle is broken";
    BoundsReversed: "the lower bound {0} of \"{2}\" is not below the upper bound {1}", "two bounds, low then high", "write the smaller bound first";
    // Species, parameters and draws.
    UpperBelowLower: "\"upper\" ({0}) must be above \"lower\" ({1})", "more than {1}", "these two are the sides of the search box";
    RangeReversed: "the range from {0} to {1} is empty", "two numbers, low then high", "write the smaller number first; leave the range out for a value that is certain";
    LimitsReversed: "\"min\" ({0}) is above \"max\" ({1})", "a number up to {1}", "";
    ValueOutsideLimits: "the value {0} lies outside its own limits: {1}", "", "change the value, \"min\" or \"max\"";
    RangeOutsideLimits: "the range {0} to {1} has no part within its own limits: {2}", "", "change the range, \"min\" or \"max\"";
    DrawNotOne: "a draw names exactly one distribution", "one of {0}", "for example draw: {lognormal: {cv: 0.2}}";
    DrawWord: "a draw is a map with the distribution as its key", "{{0}: …}", "for example draw: {lognormal: {cv: 0.2}} or draw: {uniform: {}}";
    DrawNeedsRange: "a {0} draw needs a range", "\"range\" beside it", "for example range: [0.5, 1.5]";
    LognormalValue: "a lognormal draw needs a value above zero, but it is {0}", "", "use another distribution, or give a positive value";
    ModeOutsideRange: "the value {0} of a triangular draw lies outside its range {1} to {2}", "", "the value is the peak of the triangle; change it or the range";
    // Correlations and files of draws.
    SamePair: "a correlation needs two different parameters, not \"{0}\" twice", "two different parameters", "";
    PairTwice: "the correlation of \"{0}\" and \"{1}\" is given twice", "", "keep one of the two";
    RankRange: "a rank correlation lies between -1 and 1, not at {0}", "-1 to 1", "";
    Impossible: "these rank correlations cannot hold together", "", "{0} possible: {1}";
    NotDrawn: "\"{0}\" is not drawn, so it cannot be correlated", "a parameter with a draw or a range", "give \"{0}\" a draw or a range, or delete the correlation";
    DrawnTwice: "\"{0}\" is drawn twice: here, and as a column of \"{1}\"", "", "delete the draw here, or the column there";
    // Processes, equations and harvest.
    NoDynamics: "nothing says how the species change", "\"processes\", \"change\" or \"lotka_volterra\"", "for example processes: {growth: {rate: r*N, effect: {N: 1}}}";
    NoEntries: "{0} names no species", "at least one species", "{1}";
    NotDiscrete: "\"{0}\" has no place in a discrete model", "\"next\" alone", "a discrete model gives the next state of every species; delete \"{0}\", or give \"time\" without a step";
    NextContinuous: "\"next\" has no place in a model of continuous time", "\"processes\"", "for a discrete model write time: {unit: yr, step: 1}";
    NextMissing: "\"next\" says nothing about {0}", "{1}: …", "write the next state of every species; {1}: {1} keeps it as it is";
    WhenContinuous: "\"when\" has no meaning in continuous time", "no \"when\"", "delete it, or make the model discrete with time: {unit: yr, step: 1}";
    TakesOrCounts: "the harvest \"{0}\" needs either \"takes\" or \"counts\"", "\"takes\" or \"counts\"", "\"takes\" subtracts from the species; \"counts\" records a yield that the equations already contain";
    TakesAndCounts: "the harvest \"{0}\" has both \"takes\" and \"counts\"", "one of the two", "make two harvests of it";
    PriceUnused: "a price is given for {0}, but the harvest \"{1}\" takes none of it", "a species that is taken", "delete the price, or add {0} to what is taken";
    SharedName: "\"{0}\" is the name of a process and of a harvest", "a name of its own", "rename one of the two, so that \"without\" can tell them apart";
    // Scenarios.
    NoScenario: "\"scenarios\" names no scenario", "at least one scenario", "delete the key, or write for example present fleet: {}";
    UnknownPart: "no process or harvest is called \"{0}\"", "the name of a process or harvest: {1}", "";
    UnknownPartNear: "no process or harvest is called \"{0}\"", "\"{1}\"", "write \"{1}\"";
    WithoutTwice: "\"{0}\" is left out twice", "", "keep one of the two";
    WithoutReplaced: "\"{0}\" is both left out and replaced", "", "a replacement is enough; delete \"{0}\" from \"without\"";
    ValueNotFinite: "the value of \"{0}\" in the scenario \"{1}\" is not a finite number", "a formula with a finite value", "with the base values it gives {2}";
    SetNotFinite: "the value set for \"{0}\" is not a finite number", "a finite number", "";
    SameAxes: "both axes show \"{0}\"", "two different species", "";
    // Tables.
    Unreadable: "the file \"{0}\" cannot be read: {1}", "", "paths are relative to the model file";
    TableEmpty: "the table has no rows below its heading", "a heading, then one row for each {0}", "";
    Ragged: "the row has {0} cells, but the heading has {1}", "{1} cells", "{2}";
    TableSemicolons: "the table's cells are parted by {0}, not by commas", "commas between cells", "save the table as CSV with commas, and with decimal points";
    QuoteInTable: "the quotation that opens here is not closed properly", "a closing quotation mark, then a comma or the end of the line", "";
    CellEmpty: "the cell is empty", "{0}", "write 0 where there is no effect";
    CellNotFinite: "the cell is not a finite number: \"{0}\"", "a finite number", "delete the row, or give a number";
    CellNotNumber: "the cell is not a number: \"{0}\"", "a number", "write plain numbers with a decimal point, such as 0.25";
    HeadingIsNumber: "the first row must be a heading, but holds the number \"{0}\"", "a heading", "{1}";
    RowTwice: "there are two rows for \"{0}\"", "", "keep one of the two";
    ColumnTwice: "there are two columns for \"{0}\"", "", "keep one of the two";
    RowMissing: "there is no row for \"{0}\"", "one row for each column", "add the row; entries without effect are 0";
    ColumnMissing: "there is no column for \"{0}\"", "one column for each row", "add the column; entries without effect are 0";
    GrowthMissing: "the growth table has no row for \"{0}\", which the matrix has", "one row for each species of the matrix", "add the row";
    MatrixMissing: "the matrix has no row for \"{0}\", which the growth table has", "one row for each species of the growth table", "add the row and its column";
    GrowthColumns: "the growth table has {0} columns", "two: symbol and growth", "{1}";
    DrawOutside: "the value {0} of \"{1}\" lies outside the limits of the model: {2}", "", "delete the row, or change \"min\" or \"max\" in the model";
    MoreErrors: "there are {0} more errors", "", "mend the first ones and check again";
}
}

impl Message {
    /// The diagnostic at a place, with the values in order; long values are clipped.
    pub(super) fn at(self, at: Location, values: &[&dyn Display]) -> Diagnostic {
        let [what, expected, help] = self.row().map(|template| fill(template, values));
        Diagnostic::error(at, what).expected(expected).help(help)
    }
}

/// A number for a message: with an exponent where it has more digits than anyone reads.
pub(super) fn digits(value: f64) -> String {
    let plain = value.to_string();
    if plain.len() <= DIGITS { plain } else { format!("{value:e}") }
}
