//! A closer look at a window, and a look beside it: pure functions, for whoever steers.
//!
//! Both keep inside a limit, which is the search box as a rule: what is beyond has not been searched. What is worth seeing
//! in the first place is the business of `window`.

use super::frame::{DEEPEST, Scale, Window};

/// The narrowest window that numbers of the machine can still tell apart: its width as a share of the abundances in it; on a
/// logarithmic axis the logarithm of its sides' ratio.
const NARROWEST: f64 = 1e-9;

/// The window whose sides are `factor` times as long as the eye sees them, about a point that stays where it is seen.
///
/// A factor below 1 shows less and more closely, one above 1 more. Where the limit is met the window is moved inside it, and
/// at last is the limit itself. Unchanged for a factor that is not above 0, and where it would be too narrow for numbers to
/// be told apart.
#[must_use]
pub fn zoomed(window: Window, scales: [Scale; 2], limit: Window, factor: f64, about: [f64; 2]) -> Window {
    if !(factor > 0.0 && factor.is_finite()) {
        return window;
    }
    let one = |scale: Scale, sides: [f64; 2], limit: [f64; 2], about: f64| {
        let Some(axis) = Axis::new(scale, sides, limit) else { return sides };
        let share = scale.share(sides, about);
        let share = if share.is_finite() { share.clamp(0.0, 1.0) } else { 0.5 };
        let length = axis.sides[1] - axis.sides[0];
        let low = axis.sides[0] + share * length * (1.0 - factor);
        let kept = axis.kept(low, factor * length);
        if factor < 1.0 && is_narrow(scale, kept) { sides } else { kept }
    };
    Window { x: one(scales[0], window.x, limit.x, about[0]), y: one(scales[1], window.y, limit.y, about[1]) }
}

/// The window moved by shares of its sides, to the right and upwards where they are positive; not beyond the limit.
#[must_use]
pub fn moved(window: Window, scales: [Scale; 2], limit: Window, by: [f64; 2]) -> Window {
    let one = |scale: Scale, sides: [f64; 2], limit: [f64; 2], by: f64| {
        let axis = Axis::new(scale, sides, limit).filter(|_| by.is_finite() && by != 0.0);
        let Some(axis) = axis else { return sides };
        let length = axis.sides[1] - axis.sides[0];
        let kept = axis.kept(axis.sides[0] + by * length, length);
        if is_narrow(scale, kept) { sides } else { kept }
    };
    Window { x: one(scales[0], window.x, limit.x, by[0]), y: one(scales[1], window.y, limit.y, by[1]) }
}

fn is_narrow(scale: Scale, [low, high]: [f64; 2]) -> bool {
    let width = scale.of(high) - scale.of(low);
    let size = if scale == Scale::Linear { low.abs().max(high.abs()) } else { 1.0 };
    width.is_nan() || width <= NARROWEST * size
}

/// The sides of a window and of its limit, as they lie along an axis.
struct Axis {
    scale: Scale,
    sides: [f64; 2],
    limit: [f64; 2],
    /// The limit as it was given: a logarithm and back is not exact.
    given: [f64; 2],
}

impl Axis {
    /// `None` where there is nothing to be moved: no width, or numbers that are none.
    fn new(scale: Scale, sides: [f64; 2], [low, high]: [f64; 2]) -> Option<Self> {
        let deepest = if scale == Scale::Logarithmic { DEEPEST * high } else { low };
        let given = [low.max(deepest), high];
        let axis = Self { scale, sides: sides.map(|x| scale.of(x)), limit: given.map(|x| scale.of(x)), given };
        let has_width = |[low, high]: [f64; 2]| high > low && (high - low).is_finite();
        (has_width(axis.sides) && has_width(axis.limit)).then_some(axis)
    }

    /// A window of that lower side and length, moved and if need be shortened until it is inside the limit.
    fn kept(&self, low: f64, length: f64) -> [f64; 2] {
        let [least, most] = self.limit;
        if length >= most - least {
            return self.given;
        }
        if low <= least {
            return [self.given[0], self.back(least + length)];
        }
        if low + length >= most {
            return [self.back(most - length), self.given[1]];
        }
        [self.back(low), self.back(low + length)]
    }

    fn back(&self, along: f64) -> f64 {
        match self.scale {
            Scale::Linear => along,
            Scale::Logarithmic => crate::num::elementary::exp(along),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::field::{Frame, LINEAR};
    use crate::num::random::Source;

    const LIMIT: Window = Window { x: [0.0, 1000.0], y: [0.0, 50.0] };
    const LOGARITHMIC: [Scale; 2] = [Scale::Logarithmic; 2];

    fn is_inside(window: Window, limit: Window) -> bool {
        let one = |[a, b]: [f64; 2], [c, d]: [f64; 2]| a >= c && b <= d && a < b;
        one(window.x, limit.x) && one(window.y, limit.y)
    }

    #[test]
    fn results_by_hand() {
        let window = Window { x: [100.0, 200.0], y: [0.0, 10.0] };
        let closer = zoomed(window, LINEAR, LIMIT, 0.5, [150.0, 0.0]);
        assert_eq!(closer, Window { x: [125.0, 175.0], y: [0.0, 5.0] });
        assert_eq!(zoomed(window, LINEAR, LIMIT, 1e9, [150.0, 5.0]), LIMIT);
        assert_eq!(moved(window, LINEAR, LIMIT, [0.5, -1.0]), Window { x: [150.0, 250.0], y: [0.0, 10.0] });
        assert_eq!(moved(window, LINEAR, LIMIT, [-9.0, 99.0]), Window { x: [0.0, 100.0], y: [40.0, 50.0] });
        let decades = Window { x: [1.0, 100.0], y: [1.0, 10.0] };
        let next = moved(decades, LOGARITHMIC, LIMIT, [0.5, -1.0]);
        let expected = [10.0, 1000.0, 0.1, 1.0];
        for (found, expected) in next.x.into_iter().chain(next.y).zip(expected) {
            assert!((found / expected - 1.0).abs() < 1e-14, "{next:?}");
        }
        for factor in [0.0, -1.0, f64::NAN, f64::INFINITY] {
            assert_eq!(zoomed(window, LINEAR, LIMIT, factor, [150.0, 5.0]), window);
        }
    }

    #[test]
    fn the_point_stays_where_it_is_seen_and_the_way_back_is_the_way() {
        for scales in [LINEAR, LOGARITHMIC] {
            let window = Window { x: [20.0, 400.0], y: [2.0, 30.0] };
            let place = |window: Window| Frame::scaled(window, scales, 101, 51).place([77.0, 11.0]);
            let before = place(window);
            let mut closer = window;
            for _ in 0..40 {
                closer = zoomed(closer, scales, LIMIT, 0.8, [77.0, 11.0]);
                let now = place(closer);
                assert!((now[0] - before[0]).abs() < 1e-6 && (now[1] - before[1]).abs() < 1e-6, "{now:?}");
            }
            for _ in 0..40 {
                closer = zoomed(closer, scales, LIMIT, 1.25, [77.0, 11.0]);
            }
            let sides = closer.x.into_iter().chain(closer.y).zip(window.x.into_iter().chain(window.y));
            sides.for_each(|(a, b)| assert!((a / b - 1.0).abs() < 1e-6, "{closer:?}"));
        }
    }

    #[test]
    fn no_walk_leaves_the_limit_or_ends_in_a_window_without_width() {
        let mut source = Source::new(11);
        for scales in [LINEAR, LOGARITHMIC, [Scale::Linear, Scale::Logarithmic]] {
            let mut window = Window { x: [1.0, 1000.0], y: [0.5, 50.0] };
            for step in 0..20_000 {
                window = if source.unit() < 0.5 {
                    let about = [source.between(-10.0, 1100.0), source.between(0.0, 60.0)];
                    zoomed(window, scales, LIMIT, source.between(0.3, 1.8), about)
                } else {
                    moved(window, scales, LIMIT, [source.between(-2.0, 2.0), source.between(-2.0, 2.0)])
                };
                assert!(is_inside(window, LIMIT), "step {step}: {window:?}");
                let frame = Frame::scaled(window, scales, 80, 24);
                assert!(frame.x(1.0) > frame.x(0.0) && frame.y(23.0) > frame.y(22.0), "step {step}: {window:?}");
            }
        }
    }

    #[test]
    fn what_has_no_width_stays_as_it_is() {
        for x in [[5.0, 5.0], [f64::NAN, 1.0], [0.0, f64::INFINITY], [3.0, 2.0]] {
            let window = Window { x, y: [0.0, 1.0] };
            for [a, b] in
                [moved(window, LINEAR, LIMIT, [0.5, 0.0]), zoomed(window, LINEAR, LIMIT, 0.5, [1.0, 0.5])].map(|w| w.x)
            {
                assert!((a.to_bits(), b.to_bits()) == (x[0].to_bits(), x[1].to_bits()), "{a}, {b}");
            }
        }
    }
}
