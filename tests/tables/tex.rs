//! A small strict reader of LaTeX: enough to say what would be printed, and to object to anything that a name could break.
#![allow(dead_code, unreachable_pub, missing_docs, reason = "each file uses its own part")]

/// What would be printed.
#[derive(Default)]
pub struct Printed {
    pub headings: Vec<String>,
    /// Each tabular: rows of cells.
    pub tables: Vec<Vec<Vec<String>>>,
    /// Everything outside of tabulars.
    pub text: String,
}

/// Commands that print a sign, with what they print.
const SIGNS: [(&str, &str); 12] = [
    ("textbackslash", "\\"),
    ("textasciicircum", "^"),
    ("textasciitilde", "~"),
    ("textless", "<"),
    ("textgreater", ">"),
    ("textbar", "|"),
    ("textasciigrave", "`"),
    ("textquotesingle", "'"),
    ("allowbreak", ""),
    ("times", "×"),
    ("noindent", ""),
    ("linewidth", ""),
];

/// Reads a text, or says what is wrong with it.
pub fn read(text: &str) -> Result<Printed, String> {
    let mut printed = Printed::default();
    let mut rest = text.strip_prefix("% Needs \\usepackage{booktabs}.\n").ok_or("no head")?;
    while let Some((before, after)) = rest.split_once("\\begin{tabular}{") {
        outside(before, &mut printed)?;
        let (body, end) = after.split_once("\\end{tabular}").ok_or("a tabular without end")?;
        printed.tables.push(tabular(body)?);
        rest = end;
    }
    outside(rest, &mut printed)?;
    Ok(printed)
}

fn outside(text: &str, printed: &mut Printed) -> Result<(), String> {
    for paragraph in text.split("\n\n") {
        for command in ["\\subsection*{", "\\subsubsection*{"] {
            if let Some(title) = paragraph.trim().strip_prefix(command) {
                printed.headings.push(plain(title.strip_suffix('}').ok_or("a heading without end")?)?);
            }
        }
        let is_heading = paragraph.contains("section*{");
        if !is_heading {
            printed.text.push_str(&plain(paragraph)?);
        }
    }
    Ok(())
}

/// Rows of cells, each row as long as the preamble says.
fn tabular(body: &str) -> Result<Vec<Vec<String>>, String> {
    let (preamble, body) = body.split_once("}\n\\toprule\n").ok_or("no preamble")?;
    let columns = preamble.replace("p{0.75\\linewidth}", "p").chars().filter(|c| "lrp".contains(*c)).count();
    let body = body.strip_suffix("\\bottomrule\n").ok_or("no rule at the end")?;
    let mut rows = Vec::new();
    for line in body.lines().filter(|line| *line != "\\midrule") {
        let line = line.strip_suffix(" \\\\").ok_or_else(|| format!("a row without end: {line}"))?;
        let cells = cells(line).into_iter().map(|cell| plain(cell.trim())).collect::<Result<Vec<_>, _>>()?;
        if cells.len() != columns {
            return Err(format!("{} cells for {columns} columns: {line}", cells.len()));
        }
        rows.push(cells);
    }
    Ok(rows)
}

/// A row cut at every & without a backslash before it.
fn cells(line: &str) -> Vec<&str> {
    let mut all = Vec::new();
    let mut start = 0;
    let mut is_escaped = false;
    for (place, c) in line.char_indices() {
        if c == '&' && !is_escaped {
            all.push(&line[start..place]);
            start = place + 1;
        }
        is_escaped = c == '\\' && !is_escaped;
    }
    all.push(&line[start..]);
    all
}

/// What a text without tabulars prints; spaces as they stand.
fn plain(text: &str) -> Result<String, String> {
    let mut out = String::new();
    let mut chars = text.chars().peekable();
    let (mut depth, mut is_math) = (0_i32, false);
    while let Some(c) = chars.next() {
        match c {
            '\\' if chars.peek().is_some_and(char::is_ascii_alphabetic) => {
                let mut name = String::new();
                while let Some(letter) = chars.next_if(char::is_ascii_alphabetic) {
                    name.push(letter);
                }
                out.push_str(&command(&name, &mut chars)?);
            }
            '\\' => out.push(chars.next().filter(|c| "{}$&#_%".contains(*c)).ok_or("an unknown escape")?),
            '{' => depth += 1,
            '}' => depth -= 1,
            '$' => is_math = !is_math,
            '^' if is_math => {}
            '&' | '#' | '_' | '%' | '~' | '^' | '`' | '"' | '<' | '>' | '|' => {
                return Err(format!("a bare {c}: {text}"));
            }
            c if c.is_control() && c != '\n' => return Err(format!("a control character: {text:?}")),
            c => out.push(c),
        }
        if depth < 0 {
            return Err(format!("a brace too many: {text}"));
        }
    }
    if depth != 0 || is_math { Err(format!("not closed: {text}")) } else { Ok(out) }
}

fn command(name: &str, rest: &mut std::iter::Peekable<std::str::Chars<'_>>) -> Result<String, String> {
    if name == "symbol" {
        let code: String = rest.by_ref().take_while(|c| *c != '}').filter(char::is_ascii_digit).collect();
        return if code == "34" { Ok("\"".to_owned()) } else { Err(format!("symbol {code}")) };
    }
    if ["textbf", "emph"].contains(&name) {
        return Ok(String::new());
    }
    let sign = SIGNS.iter().find(|(known, _)| *known == name);
    sign.map(|(_, sign)| (*sign).to_owned()).ok_or_else(|| format!("an unknown command: {name}"))
}
