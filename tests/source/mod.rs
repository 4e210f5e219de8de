//! Reads Rust source as far as rules about its structure need: words and paths, with comments and texts left out.
//!
//! Start at [`File::new`]. It knows `mod name { … }`, so that `super` climbs from the right place, and spells grouped
//! imports out; it does not expand macros.

/// A word or a sign, and the line it stands on.
#[derive(Clone, Debug)]
struct Token {
    text: String,
    line: usize,
}

/// A path that is mentioned, `crate`, `self` and `super` resolved: segments from the root of the crate, or as written.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Mention {
    pub(crate) segments: Vec<String>,
    /// Whether it began with `crate`, `self` or `super`.
    pub(crate) own: bool,
    pub(crate) line: usize,
    /// Whether it stands in test code.
    pub(crate) test: bool,
}

/// One source file.
pub(crate) struct File {
    /// Its path below `src`, with slashes.
    pub(crate) name: String,
    pub(crate) text: String,
    pub(crate) mentions: Vec<Mention>,
    /// Every word with its line, and whether it is followed by an exclamation mark.
    pub(crate) words: Vec<(String, usize, bool)>,
}

impl File {
    pub(crate) fn new(name: &str, text: &str) -> Self {
        let tokens = tokens(&blanked(text));
        let words = tokens.iter().enumerate().filter(|(_, token)| is_word(&token.text)).map(|(place, token)| {
            let called = tokens.get(place + 1).is_some_and(|next| next.text == "!");
            (token.text.clone(), token.line, called)
        });
        let words = words.collect();
        let mentions = Reader { tokens, place: 0, module: module_of(name), found: Vec::new() }.read(name);
        Self { name: name.to_owned(), text: text.to_owned(), mentions, words }
    }

    /// The module right below the crate's root that it belongs to; empty for the root itself.
    pub(crate) fn top(&self) -> &str {
        if matches!(self.name.as_str(), "lib.rs" | "main.rs") {
            return "";
        }
        self.name.split(['/', '.']).next().unwrap_or_default()
    }

    /// The module's documentation.
    pub(crate) fn head(&self) -> String {
        self.text.lines().take_while(|line| line.starts_with("//!")).collect()
    }
}

fn module_of(name: &str) -> Vec<String> {
    let stem = name.trim_end_matches(".rs").trim_end_matches("/mod");
    if matches!(stem, "lib" | "main") { Vec::new() } else { stem.split('/').map(str::to_owned).collect() }
}

fn is_word(text: &str) -> bool {
    text.starts_with(|c: char| c == '_' || c.is_alphabetic())
}

/// The text with comments and literals turned to blanks, line by line as long as before.
fn blanked(text: &str) -> String {
    let mut out = String::new();
    let mut rest = text;
    while let Some(first) = rest.chars().next() {
        let length = comment_or_text(rest, out.chars().next_back()).unwrap_or(0);
        let (taken, after) = rest.split_at(if length == 0 { first.len_utf8() } else { length });
        if length == 0 {
            out.push_str(taken);
        } else {
            out.extend(taken.chars().map(|c| if c == '\n' { c } else { ' ' }));
        }
        rest = after;
    }
    out
}

/// How many bytes of a comment, a text or a character begin here.
fn comment_or_text(rest: &str, before: Option<char>) -> Option<usize> {
    if rest.starts_with("//") {
        return Some(rest.find('\n').unwrap_or(rest.len()));
    }
    if rest.starts_with("/*") {
        return Some(block_comment(rest));
    }
    let raw =
        rest.strip_prefix('r').filter(|_| !before.is_some_and(|c| c.is_alphanumeric() && !matches!(c, 'b' | 'c')));
    if let Some(raw) = raw.map(|raw| raw.trim_start_matches('#')).filter(|raw| raw.starts_with('"')) {
        let hashes = rest.len() - raw.len() - 1;
        let end = format!("\"{}", "#".repeat(hashes));
        return Some(raw[1..].find(&end).map_or(rest.len(), |place| hashes + 2 + place + end.len()));
    }
    if rest.starts_with('"') {
        return Some(until_unescaped(rest, '"'));
    }
    let mut characters = rest.strip_prefix('\'')?.chars();
    let (first, second) = (characters.next()?, characters.next()?);
    // Otherwise it is a lifetime.
    (first == '\\' || second == '\'').then(|| until_unescaped(rest, '\''))
}

fn block_comment(rest: &str) -> usize {
    let mut depth = 0usize;
    for (place, _) in rest.char_indices() {
        if rest[place..].starts_with("/*") {
            depth += 1;
        } else if rest[place..].starts_with("*/") {
            depth -= 1;
            if depth == 0 {
                return place + 2;
            }
        }
    }
    rest.len()
}

fn until_unescaped(rest: &str, end: char) -> usize {
    let mut escaped = false;
    for (place, c) in rest.char_indices().skip(1) {
        if c == end && !escaped {
            return place + 1;
        }
        escaped = c == '\\' && !escaped;
    }
    rest.len()
}

fn tokens(text: &str) -> Vec<Token> {
    let mut found = Vec::new();
    for (line, text) in text.lines().enumerate() {
        let mut rest = text.trim_start();
        while let Some(first) = rest.chars().next() {
            let word = |c: char| c == '_' || c.is_alphanumeric();
            let length = match rest.find(|c| !word(c)).unwrap_or(rest.len()) {
                0 if rest.starts_with("::") => 2,
                0 => first.len_utf8(),
                length => length,
            };
            found.push(Token { text: rest[..length].to_owned(), line: line + 1 });
            rest = rest[length..].trim_start();
        }
    }
    found
}

/// Walks over the tokens and keeps track of modules written in place.
struct Reader {
    tokens: Vec<Token>,
    place: usize,
    module: Vec<String>,
    found: Vec<Mention>,
}

impl Reader {
    fn read(mut self, name: &str) -> Vec<Mention> {
        let tests = name.ends_with("tests.rs");
        // For each open brace, whether it is a module's.
        let mut braces: Vec<bool> = Vec::new();
        while self.place < self.tokens.len() {
            match self.text(0) {
                "mod" if self.text(2) == "{" => {
                    self.module.push(self.text(1).to_owned());
                    braces.push(true);
                    self.place += 3;
                }
                "{" => {
                    braces.push(false);
                    self.place += 1;
                }
                "}" => {
                    if braces.pop() == Some(true) {
                        self.module.pop();
                    }
                    self.place += 1;
                }
                word if is_word(word) && self.text(1) == "::" => {
                    let from = self.found.len();
                    self.path(&mut Vec::new());
                    let test = tests || self.module.iter().any(|name| name == "tests");
                    let module = self.module.clone();
                    self.found[from..].iter_mut().for_each(|mention| resolve(mention, &module, test));
                }
                "use" if self.text(2) != "::" && is_word(self.text(1)) => {
                    let (segments, line) = (vec![self.text(1).to_owned()], self.tokens[self.place].line);
                    self.found.push(Mention { segments, own: false, line, test: tests });
                    self.place += 2;
                }
                _ => self.place += 1,
            }
        }
        self.found
    }

    fn text(&self, ahead: usize) -> &str {
        self.tokens.get(self.place + ahead).map_or("", |token| token.text.as_str())
    }

    /// A path, and all that a group at its end spells out.
    fn path(&mut self, before: &mut Vec<String>) {
        let depth = before.len();
        let line = self.tokens[self.place].line;
        let mut closed = false;
        while is_word(self.text(0)) || matches!(self.text(0), "*" | "{") {
            if self.text(0) == "{" {
                self.group(before);
                closed = true;
                break;
            }
            before.push(self.text(0).to_owned());
            self.place += 1;
            if self.text(0) != "::" {
                break;
            }
            self.place += 1;
        }
        if !closed {
            self.found.push(Mention { segments: before.clone(), own: false, line, test: false });
        }
        before.truncate(depth);
    }

    fn group(&mut self, before: &mut Vec<String>) {
        self.place += 1;
        while self.place < self.tokens.len() && self.text(0) != "}" {
            if is_word(self.text(0)) || self.text(0) == "*" {
                self.path(before);
            } else {
                self.place += 1;
            }
        }
        self.place += 1;
    }
}

/// Makes a path that begins in this crate one from its root.
fn resolve(mention: &mut Mention, module: &[String], test: bool) {
    mention.test = test;
    let mut from = match mention.segments[0].as_str() {
        "crate" => Vec::new(),
        "self" | "super" => module.to_vec(),
        _ => return,
    };
    mention.own = true;
    let mut rest = mention.segments.as_slice();
    while let Some((first, after)) = rest.split_first() {
        match first.as_str() {
            "crate" | "self" => {}
            "super" => {
                from.pop();
            }
            _ => break,
        }
        rest = after;
    }
    from.extend_from_slice(rest);
    mention.segments = from;
}
