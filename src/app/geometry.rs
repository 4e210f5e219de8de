//! Where things stand: pure functions of the terminal's size and the state, for `update` and `ui` alike.

/// Columns and rows of a terminal.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Size {
    /// Characters in a line.
    pub columns: u16,
    /// Lines.
    pub rows: u16,
}

/// The smallest terminal that the screens are made for.
pub const SMALLEST: Size = Size { columns: 60, rows: 20 };

/// A part of the screen.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Area {
    /// Leftmost column.
    pub x: u16,
    /// Uppermost row.
    pub y: u16,
    /// Columns.
    pub columns: u16,
    /// Rows.
    pub rows: u16,
}

impl Size {
    /// Whether it is smaller than the screens are made for.
    pub fn is_too_small(self) -> bool {
        self.columns < SMALLEST.columns || self.rows < SMALLEST.rows
    }
}

impl Area {
    /// The uppermost rows, and the rest.
    pub fn top(self, rows: u16) -> (Self, Self) {
        let rows = rows.min(self.rows);
        (Self { rows, ..self }, Self { y: self.y + rows, rows: self.rows - rows, ..self })
    }

    /// The lowest rows, and the rest.
    pub fn bottom(self, rows: u16) -> (Self, Self) {
        let rows = rows.min(self.rows);
        (Self { y: self.y + self.rows - rows, rows, ..self }, Self { rows: self.rows - rows, ..self })
    }

    /// The leftmost columns, and the rest.
    pub fn left(self, columns: u16) -> (Self, Self) {
        let columns = columns.min(self.columns);
        let rest = Self { x: self.x + columns, columns: self.columns - columns, ..self };
        (Self { columns, ..self }, rest)
    }
}

/// What every screen has: a heading, what is shown, a line on what happens, a line of keys.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Frame {
    /// Title of the model, and the scenario.
    pub heading: Area,
    /// All between.
    pub body: Area,
    /// What is under way, what has happened, or the caution.
    pub status: Area,
    /// Keys that matter here.
    pub keys: Area,
}

/// The parts of every screen.
pub fn frame(size: Size) -> Frame {
    let all = Area { x: 0, y: 0, columns: size.columns, rows: size.rows };
    let (heading, rest) = all.top(1);
    let (keys, rest) = rest.bottom(1);
    let (status, body) = rest.bottom(1);
    Frame { heading, body, status, keys }
}

/// The parts of the screen of equilibria.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Equilibria {
    /// What the selected one means, in words.
    pub sentence: Area,
    /// The equilibria.
    pub list: Area,
    /// The numbers of the selected one.
    pub numbers: Area,
    /// The sketch.
    pub sketch: Area,
}

/// Columns of the list at least and at most; a sketch needs the rest more.
const LIST: [u16; 2] = [29, 66];

/// Columns of the list beside which a sketch has room enough.
const AMPLE: u16 = 46;

/// The parts of the screen of equilibria, with so many equilibria to be listed.
pub fn equilibria(size: Size, count: usize) -> Equilibria {
    let body = frame(size).body;
    let (sentence, rest) = body.top(if size.columns < 120 { 3 } else { 2 });
    let (left, right) =
        rest.left((size.columns * 2 / 5).clamp(LIST[0], if size.columns < 160 { AMPLE } else { LIST[1] }));
    // A heading above the list, a line where there is more; the numbers get at least half.
    let wanted = u16::try_from(count).unwrap_or(u16::MAX).saturating_add(2);
    let (list, numbers) = left.top(wanted.min(left.rows / 2));
    let sketch = Area { x: right.x + 1, columns: right.columns.saturating_sub(1), ..right };
    Equilibria { sentence, list, numbers, sketch }
}

/// The parts of the screen where values are tried.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Values {
    /// What the tried values change, in words.
    pub sentence: Area,
    /// The parameters.
    pub list: Area,
    /// All about the selected one.
    pub details: Area,
    /// The sketch.
    pub sketch: Area,
    /// The equilibria, in short.
    pub found: Area,
}

/// Columns of the parameters at least and at most.
const PARAMETERS: [u16; 2] = [29, 84];
/// Rows for all about the selected parameter.
const DETAILS: [u16; 2] = [5, 8];

/// The parts of the screen where values are tried, with so many equilibria to be listed.
pub fn values(size: Size, count: usize) -> Values {
    let body = frame(size).body;
    let (sentence, rest) = body.top(if size.columns < 120 { 3 } else { 2 });
    let (left, right) = rest.left((size.columns * 2 / 5).clamp(PARAMETERS[0], PARAMETERS[1]));
    let (details, list) = left.bottom((left.rows / 3).clamp(DETAILS[0], DETAILS[1]));
    let right = Area { x: right.x + 1, columns: right.columns.saturating_sub(1), ..right };
    let wanted = u16::try_from(count).unwrap_or(u16::MAX).saturating_add(1);
    let (found, sketch) = right.bottom(wanted.min(right.rows / 3));
    Values { sentence, list, details, sketch, found }
}

/// The parts of the chooser.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Models {
    /// The models, below a heading.
    pub list: Area,
    /// All about the selected one.
    pub details: Area,
}

/// The parts of the chooser.
pub fn chooser(size: Size) -> Models {
    let (details, list) = frame(size).body.bottom(5);
    Models { list, details }
}

/// How many entries a list shows below its heading.
pub fn listed(list: Area) -> usize {
    usize::from(list.rows.saturating_sub(2).max(1))
}

/// The first entry to be shown, so that the selected one is in sight and nothing moves without need.
pub fn scrolled(from: usize, chosen: usize, count: usize, room: usize) -> usize {
    let room = room.max(1);
    let from = from.min(count.saturating_sub(room));
    if chosen < from {
        chosen
    } else if chosen >= from + room {
        chosen + 1 - room
    } else {
        from
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn parts_fill_the_screen_and_do_not_overlap() {
        for columns in [0, 1, 28, 59, 60, 80, 119, 120, 200, 500, u16::MAX / 3] {
            for rows in [0, 1, 2, 3, 19, 20, 24, 50, 200] {
                for count in [0, 1, 5, 600] {
                    let size = Size { columns, rows };
                    let (frame, parts, values) = (frame(size), equilibria(size, count), values(size, count));
                    let areas = [
                        frame.heading,
                        parts.sentence,
                        parts.list,
                        parts.numbers,
                        parts.sketch,
                        values.sentence,
                        values.list,
                        values.details,
                        values.sketch,
                        values.found,
                        frame.status,
                        frame.keys,
                    ];
                    for area in areas {
                        assert!(area.x + area.columns <= columns.max(area.x) && area.y + area.rows <= rows, "{size:?}");
                    }
                    if !size.is_too_small() {
                        assert!(values.sketch.columns >= 20 && values.sketch.rows >= 8, "{size:?}: {values:?}");
                        assert!(listed(values.list) >= 3 && values.details.rows >= 5, "{size:?}: {values:?}");
                        assert!(parts.sketch.columns >= 20 && parts.sketch.rows >= 8, "{size:?}: {parts:?}");
                        assert!(listed(parts.list) >= 1 && parts.numbers.rows >= 5, "{size:?}: {parts:?}");
                    }
                }
            }
        }
    }

    #[test]
    fn what_is_selected_is_in_sight() {
        for (from, chosen, count, room, expected) in
            [(0, 0, 10, 5, 0), (0, 4, 10, 5, 0), (0, 5, 10, 5, 1), (5, 3, 10, 5, 3), (9, 3, 4, 5, 0), (0, 0, 0, 0, 0)]
        {
            assert_eq!(scrolled(from, chosen, count, room), expected);
        }
    }
}
