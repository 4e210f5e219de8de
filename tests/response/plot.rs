//! The drawing of a response: curves with a closed form, within a cell of where they are at every size; signs, marks, rules.

use nalgebra::Complex;
use restpoint::analysis::linearise::Kind;
use restpoint::analysis::response::{
    Arm, Branch, Control, Criticality, Ending, Point, Response, Taking, Threshold, ThresholdKind,
};
use restpoint::model::{Model, ParameterId, SpeciesId};
use restpoint::report::grid::Grid;
use restpoint::report::kinds::{self, KINDS};
use restpoint::report::response::plot::{
    Quantity, SMALLEST, View, cut, drawing, mark, not_marked, quantities, signs, text,
};
use restpoint::report::sketch::{Size, Style};
use restpoint::report::table::Page;
use unicode_width::UnicodeWidthStr;

const R: f64 = 0.8;
const K: f64 = 500.0;
/// Where the two states under a quota meet: r K/4.
const FOLD: f64 = R * K / 4.0;
/// The cells are to the right of the numbers and the axis, below the caption.
const LEFT: usize = 8;
const BELOW: usize = 3;
const STYLES: [Style; 2] = [Style::Unicode, Style::Ascii];

/// A logistic stock under a constant quota: dN/dt = r N (1 - N/K) - Q, so that N = K/2 (1 ± √(1 - 4Q/(rK))).
fn model() -> Model {
    let text = "title: quota\ntime: yr\nspecies: {hake: {symbol: N, unit: kt, upper: 600}}\n\
                parameters: {r: 0.8, K: 500, Q: {value: 60, unit: kt/yr, range: [0, 120], control: true}}\n\
                change: {N: r*N*(1 - N/K) - Q}\n";
    restpoint::model::load::load("quota.yaml", text.as_bytes(), &restpoint::model::load::NoFiles).0.unwrap()
}

fn point(at: f64, n: f64, kind: Kind) -> Point {
    let stable = Some(kind == Kind::StableNode);
    Point {
        at,
        state: vec![n],
        kind: Some(kind),
        stable,
        leading: None,
        feasible: n >= 0.0,
        takings: vec![Some(at)],
        threshold: None,
    }
}

fn branch(points: Vec<Point>) -> Branch {
    Branch { present: vec![true], points, ends: [Ending::Range; 2], equilibria: Vec::new() }
}

fn response(branches: Vec<Branch>, thresholds: Vec<Threshold>) -> Response {
    Response {
        control: Control { parameter: ParameterId(2), from: 0.0, to: 120.0, present: 60.0 },
        takings: vec![Taking { harvest: "trawl".to_owned(), species: Some(SpeciesId(0)) }],
        branches,
        thresholds,
        stations: Vec::new(),
        gaps: Vec::new(),
        undefined: Vec::new(),
    }
}

fn fold(at: f64, n: f64) -> Threshold {
    Threshold {
        kind: ThresholdKind::Fold,
        at,
        state: vec![n],
        eigenvalues: vec![Complex::new(0.0, 0.0)],
        other_side: None,
        criticality: None::<Criticality>,
        species: None,
        arms: Vec::<Arm>::new(),
        kink: None,
        error: 0.0,
    }
}

/// Down the stable branch, around the fold, and back along the unstable one, in even steps of N.
fn parabola() -> Response {
    const STEPS: usize = 200;
    let one = |k: usize| {
        let n = K * (1.0 - k as f64 / STEPS as f64);
        let kind = if 2 * k <= STEPS { Kind::StableNode } else { Kind::UnstableNode };
        let threshold = (2 * k == STEPS).then_some(0);
        Point { threshold, ..point(R * n * (1.0 - n / K), n, kind) }
    };
    response(vec![branch((0..=STEPS).map(one).collect())], vec![fold(FOLD, K / 2.0)])
}

fn view<'v>(model: &'v Model, response: &'v Response) -> View<'v> {
    View { model, response, quantity: Quantity::Abundance(0), rule: None, chosen: None }
}

/// Cells, row 0 lowest.
fn cells(grid: &Grid) -> Vec<([usize; 2], char)> {
    let (columns, rows) = (grid.columns - LEFT, grid.rows - BELOW - 1);
    let all = (0..columns).flat_map(|x| (0..rows).map(move |y| [x, y]));
    all.map(|[x, y]| ([x, y], grid.at(LEFT + x, rows - y).0)).collect()
}

fn sizes() -> impl Iterator<Item = Size> {
    let all = [16, 17, 53, 80, 131].into_iter();
    all.flat_map(|columns| [7, 8, 13, 24, 60].map(|rows| Size { columns, rows }))
}

/// The parabola's own highest abundance is K; the drawing reaches a little above, to a round number.
const TOP: f64 = 550.0;

#[test]
fn a_curve_is_drawn_within_a_cell_at_every_size() {
    let (model, response) = (model(), parabola());
    for size in sizes() {
        let grid = drawing(&view(&model, &response), size, Style::Ascii);
        let (columns, rows) = (size.columns - LEFT, size.rows - BELOW - 1);
        let drawn: Vec<_> = cells(&grid).into_iter().filter(|(_, sign)| "#:1".contains(*sign)).collect();
        let place = |q: f64, n: f64| [q / 120.0 * (columns - 1) as f64, n / TOP * (rows - 1) as f64];
        // Every point of the curve has a cell within reach, by its own sign, and every cell a point.
        let near = |[x, y]: [f64; 2], [c, r]: [usize; 2]| (x - c as f64).abs() <= 1.0 && (y - r as f64).abs() <= 1.0;
        let curve: Vec<([f64; 2], char)> = (0..=2000)
            .map(|k| {
                let n = K * f64::from(k) / 2000.0;
                (place(R * n * (1.0 - n / K), n), if n > K / 2.0 { '#' } else { ':' })
            })
            .collect();
        for (point, sign) in &curve {
            let found =
                drawn.iter().any(|(cell, own)| near(*point, *cell) && (own == sign || rows < 12 || *own == '1'));
            assert!(found, "{size:?}: {point:?}\n{}", grid.lines(false).join("\n"));
        }
        for (cell, sign) in &drawn {
            let is_near = |(point, own): &([f64; 2], char)| near(*point, *cell) && (own == sign || *sign == '1');
            assert!(curve.iter().any(is_near), "{size:?}: {cell:?} {sign}");
        }
        // No gaps: whoever is drawn touches another one.
        for (a, _) in &drawn {
            let touches = |(b, _): &&([usize; 2], char)| a != b && a[0].abs_diff(b[0]) <= 1 && a[1].abs_diff(b[1]) <= 1;
            assert!(drawn.iter().any(|b| touches(&b)), "{size:?}: {a:?} stands alone");
        }
    }
}

#[test]
fn a_steep_line_has_no_gaps() {
    let model = model();
    let steep = branch(vec![point(60.0, 0.0, Kind::Saddle), point(60.5, 500.0, Kind::Saddle)]);
    let response = response(vec![steep], Vec::new());
    for size in sizes() {
        let grid = drawing(&view(&model, &response), size, Style::Ascii);
        let rows = size.rows - BELOW - 1;
        let top = (500.0 / TOP * (rows - 1) as f64).round();
        let filled = |row: usize| cells(&grid).iter().any(|([_, y], sign)| *y == row && *sign == '-');
        assert!((0..rows).filter(|&row| row as f64 <= top).all(filled), "{size:?}\n{}", grid.lines(false).join("\n"));
    }
}

#[test]
fn each_kind_has_its_stroke() {
    let model = model();
    let size = Size { columns: 60, rows: 20 };
    for look in KINDS {
        let level = |at: f64| Point { kind: Some(look.kind), ..point(at, 250.0, look.kind) };
        let response = response(vec![branch(vec![level(0.0), level(120.0)])], Vec::new());
        for style in STYLES {
            let grid = drawing(&view(&model, &response), size, style);
            let sign = if style == Style::Unicode { look.stroke.glyph } else { look.stroke.ascii };
            let drawn = cells(&grid).iter().filter(|(_, own)| *own == sign).count();
            assert_eq!(drawn, size.columns - LEFT, "{look:?}\n{}", grid.lines(false).join("\n"));
            let said = signs(&view(&model, &response), size, style);
            assert!(said.contains(&(sign.to_string(), look.stroke.word.to_owned())), "{said:?}");
        }
    }
    // A state without a linear part is drawn as an open question.
    let bare = |at: f64| Point { kind: None, ..point(at, 250.0, Kind::Undecided) };
    let response = response(vec![branch(vec![bare(0.0), bare(120.0)])], Vec::new());
    let grid = drawing(&view(&model, &response), size, Style::Ascii);
    assert!(cells(&grid).iter().any(|(_, sign)| *sign == kinds::UNKNOWN.stroke.ascii));
}

#[test]
fn what_is_stable_is_drawn_over_what_is_not() {
    let model = model();
    let level = |kind: Kind| branch(vec![point(0.0, 250.0, kind), point(120.0, 250.0, kind)]);
    for kinds in [[Kind::StableNode, Kind::Saddle], [Kind::Saddle, Kind::StableNode]] {
        let response = response(kinds.map(level).to_vec(), Vec::new());
        let grid = drawing(&view(&model, &response), Size { columns: 40, rows: 12 }, Style::Ascii);
        assert!(cells(&grid).iter().all(|(_, sign)| *sign != '-'));
    }
}

#[test]
fn what_is_not_feasible_is_not_drawn_and_not_met() {
    let model = model();
    let out = |at: f64| Point { feasible: false, ..point(at, 250.0, Kind::StableNode) };
    let exit = Point { threshold: Some(0), ..out(50.0) };
    let points = vec![point(0.0, 250.0, Kind::StableNode), exit, out(90.0), out(120.0)];
    let response = response(vec![branch(points)], vec![fold(50.0, 250.0)]);
    let grid = drawing(&view(&model, &response), Size { columns: 129, rows: 20 }, Style::Ascii);
    let drawn: Vec<usize> = cells(&grid).iter().filter(|(_, sign)| *sign == '#').map(|([x, _], _)| *x).collect();
    assert_eq!((drawn.iter().min(), drawn.iter().max()), (Some(&0), Some(&49)));
    assert_eq!((cut(&response, 30.0).len(), cut(&response, 70.0).len()), (1, 0));
}

#[test]
fn a_rule_meets_every_branch_where_it_is() {
    let response = parabola();
    for q in [1.0, 12.5, 60.0, 77.7, 99.0] {
        let met = cut(&response, q);
        let exact = [1.0, -1.0].map(|sign: f64| K / 2.0 * (1.0 + sign * (1.0 - q / FOLD).sqrt()));
        assert_eq!(met.len(), 2, "{q}");
        for (one, n) in met.iter().zip(exact) {
            // Points are 2.5 apart, and a chord is at most f'' h²/8 off in Q.
            assert!((one.state[0] - n).abs() < 2.5, "{q}: {one:?} beside {n}");
            let kind = if n > K / 2.0 { Kind::StableNode } else { Kind::UnstableNode };
            assert_eq!(one.kind, Some(kind), "{q}: {one:?}");
            assert!((one.takings[0].unwrap() - q).abs() < 1e-9);
        }
    }
    assert_eq!((cut(&response, FOLD).len(), cut(&response, 100.5).len(), cut(&response, f64::NAN).len()), (1, 0, 0));
}

#[test]
fn the_present_value_and_the_rule_are_upright_lines() {
    let (model, response) = (model(), parabola());
    let size = Size { columns: 129, rows: 24 };
    for style in STYLES {
        let view = View { rule: Some(80.0), chosen: Some(0), ..view(&model, &response) };
        let grid = drawing(&view, size, style);
        let [present, rule] = if style == Style::Unicode { ['│', '║'] } else { ['|', '!'] };
        for (sign, column) in [(present, 60), (rule, 80)] {
            let drawn: Vec<usize> = cells(&grid).iter().filter(|(_, own)| *own == sign).map(|([x, _], _)| *x).collect();
            assert!(drawn.len() >= 17 && drawn.iter().all(|&x| x == column), "{sign}: {drawn:?}");
        }
        let said: Vec<String> = signs(&view, size, style).into_iter().map(|(sign, word)| sign + " " + &word).collect();
        let expected = [format!("{present} present Q = 60.00"), format!("{rule} Q = 80.00"), "1 threshold".to_owned()];
        assert_eq!(said[said.len() - 3..], expected);
        let look = kinds::of(Kind::StableNode);
        let glyph = if style == Style::Unicode { look.glyph } else { look.ascii };
        assert!(cells(&grid).iter().any(|([x, _], own)| *x == 80 && *own == glyph));
    }
}

#[test]
fn thresholds_have_marks_of_their_own_near_where_they_are() {
    let model = model();
    let level = branch(vec![point(0.0, 250.0, Kind::StableNode), point(120.0, 250.0, Kind::StableNode)]);
    let thresholds = (0..40).map(|k| fold(3.0 * f64::from(k), 250.0)).collect();
    let response = response(vec![level], thresholds);
    let grid = drawing(&view(&model, &response), Size { columns: 129, rows: 24 }, Style::Ascii);
    for place in 0..35 {
        let own = mark(place);
        let at: Vec<_> = cells(&grid).into_iter().filter(|(_, sign)| *sign == own).collect();
        assert_eq!(at.len(), 1, "{own}");
        assert!(at[0].0[0].abs_diff(3 * place) <= 1, "{own} at {:?}", at[0]);
    }
    // Whoever finds no place is named; nobody is lost.
    let small = Size { columns: 16, rows: 7 };
    let left_out = not_marked(&view(&model, &response), small);
    let grid = drawing(&view(&model, &response), small, Style::Ascii);
    let shown = cells(&grid).iter().filter(|(_, sign)| (0..40).any(|k| mark(k) == *sign)).count();
    assert_eq!(shown + left_out.len(), 40);
}

#[test]
fn extreme_sizes_and_numbers_neither_panic_nor_run_over() {
    let model = model();
    let huge = branch(vec![point(-1e300, 1e300, Kind::Saddle), point(1e300, -1e300, Kind::Centre)]);
    let bare = branch(Vec::new());
    let lone = branch(vec![point(60.0, f64::NAN, Kind::Saddle)]);
    let wild = response(vec![huge, bare, lone], vec![fold(f64::NAN, f64::INFINITY)]);
    let nothing = response(Vec::new(), Vec::new());
    let flat = Response { control: Control { to: 0.0, ..nothing.control }, ..parabola() };
    for response in [&wild, &nothing, &flat, &parabola()] {
        for columns in [0, 1, 15, 16, 60, 1000, 5000] {
            for rows in [0, 6, 7, 20] {
                let size = Size { columns, rows };
                for quantity in quantities(&model, response).into_iter().chain([Quantity::Taking(9)]) {
                    let view = View { quantity, rule: Some(1e9), ..view(&model, response) };
                    let grid = drawing(&view, size, Style::Unicode);
                    let lines = grid.lines(false);
                    assert!(lines.len() <= rows && lines.iter().all(|line| line.width() <= columns), "{size:?}");
                    let is_seen = columns >= SMALLEST.columns && rows >= SMALLEST.rows;
                    assert_eq!(is_seen, lines.iter().any(|line| !line.is_empty()), "{size:?}");
                    assert!(signs(&view, size, Style::Ascii).len() < 12);
                }
            }
        }
    }
}

#[test]
fn the_text_repeats_every_sign_in_lines_that_fit() {
    let (model, response) = (model(), parabola());
    for width in [30, 60, 80, 200] {
        let page = Page { width, style: Style::Ascii, color: false };
        let text = text(&View { rule: Some(80.0), ..view(&model, &response) }, 16, &page);
        assert!(text.is_ascii() && text.lines().all(|line| line.len() <= width), "{text}");
        let below: String = text.lines().skip(16).map(str::trim).collect::<Vec<_>>().join(" ");
        for said in ["# stable", ": unstable", "| present Q = 60.00", "! Q = 80.00", "1 threshold"] {
            assert!(below.contains(said), "{said} is missing in {below}");
        }
    }
}

#[test]
fn axes_are_named_with_their_units_and_cut_with_a_mark() {
    let (model, response) = (model(), parabola());
    let check = |quantity: Quantity, columns: usize, above: &str| {
        let view = View { quantity, ..view(&model, &response) };
        let lines = drawing(&view, Size { columns, rows: 20 }, Style::Ascii).lines(false);
        assert_eq!(lines[0], above);
        assert!(lines[19].trim_start() == "Q, kt/yr", "{}", lines[19]);
    };
    check(Quantity::Abundance(0), 60, "N hake, kt");
    check(Quantity::Taking(0), 60, "trawl N, kt/yr");
    check(Quantity::Taking(0), 16, "trawl N, kt/yr");
}
