//! The interface without a terminal: what it costs on a line to step through every shipped model.

use std::collections::VecDeque;
use std::path::Path;

use ratatui::buffer::{Buffer, Cell};
use ratatui::layout::Rect;

use super::painter::Painter;
use crate::app::{App, Depth, Effect, Key, Msg, Size, Source, update};
use crate::report::sketch::Style;
use crate::shell::tasks::{Means, perform};
use crate::shell::workers::Threads;
use crate::ui::view;

/// Takes account of a message, and of all answers that come of it.
fn tell(app: &mut App, msg: Msg) {
    let mut waiting = VecDeque::from([msg]);
    while let Some(msg) = waiting.pop_front() {
        for effect in update(app, msg) {
            if let Effect::Ask(id, task) = effect {
                let means = Means { threads: Threads::new(1), stop: &|| false, observer: &|_| {}, told: &|_| {} };
                waiting.push_back(Msg::Answered(id, perform(task, &means)));
            }
        }
    }
}

fn open(path: &Path) -> App {
    let size = Size { columns: 80, rows: 24 };
    let mut app = App::new(size, Style::Unicode, Depth::Many);
    app.budget = 10.0;
    app.edition += 1;
    app.reading = Some((Source::File(path.to_path_buf()), app.edition));
    tell(&mut app, Msg::Resized(size));
    assert!(app.study.as_ref().is_some_and(|study| study.count() > 0), "{}", path.display());
    app
}

fn frame(app: &App) -> Buffer {
    let mut buffer = Buffer::empty(Rect::new(0, 0, app.size.columns, app.size.rows));
    view(app, &mut buffer);
    buffer
}

/// Bytes that the cells that differ take, with one cursor movement for each run of them.
fn least(before: &Buffer, after: &Buffer) -> usize {
    let columns = usize::from(after.area.width);
    let differs = |place: usize| {
        let bare = |cell: &Cell| (cell.symbol() == " ", cell.modifier, cell.symbol().to_owned(), cell.fg);
        bare(&before.content[place]) != bare(&after.content[place])
    };
    let mut bytes = 0;
    for place in (0..after.content.len()).filter(|&place| differs(place)) {
        let (x, y) = (place % columns, place / columns);
        if x == 0 || !differs(place - 1) {
            bytes += format!("\x1b[{};{}H", y + 1, x + 1).len();
        }
        bytes += after.content[place].symbol().len();
    }
    bytes
}

/// Every shipped model but the meadow of thirty species, with all scenarios searched.
fn models() -> Vec<App> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let files = folder.read_dir().unwrap().map(|entry| entry.unwrap().path());
    let is_quick = |path: &Path| !path.to_string_lossy().contains("ferrow-meadow");
    let models = files.filter(|path| path.extension().is_some_and(|extension| extension == "yaml") && is_quick(path));
    models.map(|path| open(&path)).collect()
}

/// Each step through equilibria and scenarios of a model: its key and its bytes.
fn steps(mut app: App, size: Size, style: Style) -> Vec<(char, usize)> {
    app.style = style;
    tell(&mut app, Msg::Resized(size));
    let mut painter = Painter::new(style, Depth::Many);
    let mut before = frame(&app);
    painter.paint(before.clone(), &mut Vec::new()).unwrap();
    let mut steps = Vec::new();
    for key in "nnnnfpppp".chars() {
        tell(&mut app, Msg::Struck(Key::Char(key)));
        let after = frame(&app);
        let mut out = Vec::new();
        painter.paint(after.clone(), &mut out).unwrap();
        let bound = least(&before, &after) * 3 / 2 + 64;
        assert!(out.len() <= bound, "key {key}: {} of {bound} bytes", out.len());
        if !out.is_empty() {
            steps.push((key, out.len()));
        }
        before = after;
    }
    steps
}

#[test]
fn a_step_takes_few_bytes() {
    let models = models();
    // Where there are more than two species, another equilibrium is another plane: all of the sketch is another.
    // Another scenario turns most arrows of a plane of two, and there all cells have one.
    for (columns, rows, style, median, most, most_of_scenarios) in [
        (80, 24, Style::Unicode, 1500, 4096, 4096),
        (80, 24, Style::Ascii, 1500, 4096, 4096),
        (200, 50, Style::Unicode, 3072, 6144, 8192),
    ] {
        let size = Size { columns, rows };
        let all: Vec<(char, usize)> = models.iter().flat_map(|app| steps(app.clone(), size, style)).collect();
        let (mut scenarios, mut steps) = (Vec::new(), Vec::new());
        for (key, bytes) in all {
            if key == 'f' { scenarios.push(bytes) } else { steps.push(bytes) }
        }
        assert!(steps.len() > 50 && scenarios.len() > 5, "{} and {} steps", steps.len(), scenarios.len());
        steps.sort_unstable();
        let (half, last) = (steps[steps.len() / 2], steps[steps.len() - 1]);
        let other = scenarios.iter().max().copied().unwrap_or(0);
        println!("{columns}x{rows} {style:?}: {} steps, median {half} bytes, at most {last}; {other}", steps.len());
        assert!(half <= median && last <= most, "{columns}x{rows}: median {half}, at most {last} bytes");
        assert!(other <= most_of_scenarios, "{columns}x{rows}: {other} bytes to another scenario");
    }
}
