//! What is kept between runs, and the text that it is kept as.
//!
//! A [`Session`] is the work on one model that no file holds yet. The texts are JSON with a number of the format; one
//! that is damaged, of another program or of a later format reads as nothing. Where they are kept is `shell::memory`'s
//! business. To keep something more, add a field that may be missing when read.

use serde_json::{Map, Value, json};

/// The format that is written, and the only one that is read.
const FORMAT: u64 = 1;

/// Models that are listed as opened recently.
pub const RECENT_LIMIT: usize = 20;

/// Steps that can be taken back, or again.
pub const HISTORY_LIMIT: usize = 200;

/// Values of one set.
const VALUES_LIMIT: usize = 10_000;

/// Bytes of a text; a longer one is not read.
pub const TEXT_LIMIT: usize = 1 << 20;

/// Names of parameters with values tried over one scenario, each in the parameter's unit.
pub type Values = Vec<(String, f64)>;

/// Work on a model that is in no file.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Session {
    /// SHA-256 of the model file that it belongs to, in hexadecimal digits.
    pub sha256: String,
    /// The scenario that the values lie over.
    pub scenario: String,
    /// What is tried now.
    pub values: Values,
    /// What was tried before, the latest last.
    pub undo: Vec<Values>,
    /// What was taken back, the latest last.
    pub redo: Vec<Values>,
    /// The equilibrium that is selected, by its identity.
    pub selected: Option<String>,
    /// The screen that is shown, by its name.
    pub screen: Option<String>,
}

/// A session as text; `None` where it is too long to be kept. The oldest history goes first.
pub fn session_text(path: &str, session: &Session) -> Option<String> {
    let latest = |history: &[Values]| {
        let from = history.len().saturating_sub(HISTORY_LIMIT);
        history[from..].iter().map(|values| values_json(values)).collect::<Vec<_>>()
    };
    let text = |undo: Vec<Value>, redo: Vec<Value>| {
        let value = json!({
            "format": FORMAT,
            "model": path,
            "sha256": session.sha256,
            "scenario": session.scenario,
            "values": values_json(&session.values),
            "undo": undo,
            "redo": redo,
            "selected": session.selected,
            "screen": session.screen,
        });
        format!("{value:#}\n")
    };
    let whole = text(latest(&session.undo), latest(&session.redo));
    let kept = if whole.len() <= TEXT_LIMIT { whole } else { text(Vec::new(), Vec::new()) };
    (kept.len() <= TEXT_LIMIT).then_some(kept)
}

/// Reads a session: the path of its model, and the session.
pub fn read_session(text: &str) -> Option<(String, Session)> {
    let value = read(text)?;
    let string = |key: &str| value.get(key)?.as_str().map(str::to_owned);
    let history = |key: &str| match value.get(key) {
        None => Some(Vec::new()),
        Some(list) => list.as_array()?.iter().take(HISTORY_LIMIT).map(read_values).collect(),
    };
    let session = Session {
        sha256: string("sha256")?,
        scenario: string("scenario")?,
        values: read_values(value.get("values")?)?,
        undo: history("undo")?,
        redo: history("redo")?,
        selected: string("selected"),
        screen: string("screen"),
    };
    Some((string("model")?, session))
}

/// Paths of models as text, the latest first.
pub fn recent_text(paths: &[String]) -> String {
    let kept = &paths[..paths.len().min(RECENT_LIMIT)];
    format!("{:#}\n", json!({ "format": FORMAT, "recent": kept }))
}

/// Reads the paths of models; `None` where the text is not such a list.
pub fn read_recent(text: &str) -> Option<Vec<String>> {
    let value = read(text)?;
    let paths = value.get("recent")?.as_array()?.iter();
    Some(paths.filter_map(|path| path.as_str().map(str::to_owned)).take(RECENT_LIMIT).collect())
}

/// The list with a path put first.
pub fn with_latest(paths: &[String], latest: &str) -> Vec<String> {
    let others = paths.iter().filter(|path| *path != latest).cloned();
    std::iter::once(latest.to_owned()).chain(others).take(RECENT_LIMIT).collect()
}

fn read(text: &str) -> Option<Map<String, Value>> {
    if text.len() > TEXT_LIMIT {
        return None;
    }
    // The library itself refuses what is nested too deep.
    let Ok(Value::Object(map)) = serde_json::from_str(text) else { return None };
    (map.get("format")?.as_u64()? == FORMAT).then_some(map)
}

/// Pairs rather than a map, whose keys would have to be unique and in an order of their own. JSON has no other numbers
/// than finite ones; a value that is none is left out.
fn values_json(values: &[(String, f64)]) -> Value {
    let finite = values.iter().filter(|(_, value)| value.is_finite());
    finite.map(|(name, value)| json!([name, value])).collect::<Vec<_>>().into()
}

fn read_values(value: &Value) -> Option<Values> {
    let pairs = value.as_array().filter(|pairs| pairs.len() <= VALUES_LIMIT)?;
    let pair = |pair: &Value| match pair.as_array()?.as_slice() {
        [Value::String(name), value] => Some((name.clone(), value.as_f64().filter(|value| value.is_finite())?)),
        _ => None,
    };
    pairs.iter().map(pair).collect()
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    fn session() -> Session {
        Session {
            sha256: "ab12".into(),
            scenario: "plan \"A\"\n".into(),
            values: vec![("E".into(), 0.1 + 0.2), ("ä".into(), -0.0), ("K".into(), 5e-324)],
            undo: vec![vec![], vec![("E".into(), 1e300)]],
            redo: vec![vec![("E".into(), 2.0)]],
            selected: Some("E2".into()),
            screen: None,
        }
    }

    #[test]
    fn what_is_written_is_read_to_the_last_bit() {
        let text = session_text("/a/b.yaml", &session()).expect("a short text");
        let (path, read) = read_session(&text).expect("our own text");
        assert_eq!((path.as_str(), &read), ("/a/b.yaml", &session()));
        assert!(read.values[1].1.is_sign_negative());
        let paths = ["/a".to_owned(), "/b \"c\"".to_owned()];
        assert_eq!(read_recent(&recent_text(&paths)).as_deref(), Some(&paths[..]));
    }

    #[test]
    fn what_is_not_ours_reads_as_nothing() {
        let text = session_text("/a", &session()).expect("a short text");
        for other in [
            String::new(),
            "[]".into(),
            "{}".into(),
            text.replace("\"format\": 1", "\"format\": 2"),
            text.replace("\"format\": 1", "\"format\": \"1\""),
            text.replace("\"scenario\"", "\"scene\""),
            text.replace("5e-324", "\"5\""),
            text[..text.len() / 2].to_owned(),
            "[".repeat(100_000),
            format!("{text}{}", " ".repeat(TEXT_LIMIT)),
        ] {
            assert_eq!(read_session(&other), None, "{other:.60}");
            assert_eq!(read_recent(&other), None, "{other:.60}");
        }
    }

    #[test]
    fn history_is_what_is_given_up_first() {
        let step = |step: usize| vec![("E".to_owned(), step as f64)];
        let long = Session { undo: (0..500).map(step).collect(), ..session() };
        let text = session_text("/a", &long).expect("a short text");
        let (_, read) = read_session(&text).expect("our own text");
        assert_eq!(read.undo, (300..500).map(step).collect::<Vec<_>>());
        let heavy = Session { redo: vec![vec![("E".repeat(TEXT_LIMIT), 1.0)]], ..session() };
        let (_, read) = read_session(&session_text("/a", &heavy).expect("without history")).expect("our own text");
        assert_eq!(read, Session { undo: vec![], redo: vec![], ..session() });
        assert_eq!(session_text("/a", &Session { scenario: "s".repeat(TEXT_LIMIT), ..session() }), None);
    }

    #[test]
    fn the_latest_model_comes_first_and_once() {
        let mut paths = Vec::new();
        for model in ["a", "b", "a"] {
            paths = with_latest(&paths, model);
        }
        assert_eq!(paths, ["a", "b"]);
        for model in 0..30 {
            paths = with_latest(&paths, &model.to_string());
        }
        assert_eq!((paths.len(), paths[0].as_str()), (RECENT_LIMIT, "29"));
    }

    proptest! {
        #[test]
        fn no_text_is_too_odd(cut in 0_usize..700, piece in "[\\[\\]{}\",:0-9a-z]{0,6}") {
            let mut text = session_text("/a", &session()).expect("a short text");
            let at = cut.min(text.len());
            text.insert_str(at, &piece);
            if let Some((_, read)) = read_session(&text) {
                prop_assert!(read.values.iter().all(|(_, value)| value.is_finite()));
            }
        }
    }
}
