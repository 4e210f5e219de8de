//! One step on all lanes.
#![expect(clippy::inline_always, reason = "the loops must end up inside the variant compiled for a processor feature")]

use super::fuse::{First, Kernel, Second};
use super::{Block, Lane, Lanes, Number, Operation, Step, WIDTH};

type Values = [f64; WIDTH];

use crate::expr::tape::Register;
use crate::expr::tape::number::Domain;
use crate::num::wide::Loops;

/// Every step, to be run.
pub(super) struct Steps<'l>(pub(super) &'l mut Lanes);

impl Loops for Steps<'_> {
    #[inline(always)]
    fn run(self) {
        let Lanes { blocks, steps, slots, spare, undefined, states, .. } = self.0;
        for step in steps.iter() {
            // The slot written is none of those read, so taking it out leaves them all in place.
            std::mem::swap(&mut slots[step.to], spare);
            perform(step, slots, states, blocks, &mut spare.0, &mut undefined.0);
            std::mem::swap(&mut slots[step.to], spare);
        }
    }
}

#[inline(always)]
fn perform(
    step: &Step,
    slots: &[Box<Lane>],
    states: &[usize],
    blocks: &[Block],
    out: &mut Values,
    undefined: &mut Values,
) {
    let s = |slot: Register| &slots[slot as usize].0;
    match step.kernel {
        Kernel::Two(first, second, operands) => two(first, second, operands.map(s), out),
        Kernel::DivByFixed([a, b]) => binary(out, s(a), s(b), |a, b| a / b),
        Kernel::One(Operation::Interaction { block, row }) => interaction(&blocks[block], row, slots, states, out),
        Kernel::One(operation) => one(&operation, slots, out, undefined),
    }
}

#[inline(always)]
fn one(operation: &Operation<Register>, slots: &[Box<Lane>], out: &mut Values, undefined: &mut Values) {
    let s = |slot: Register| &slots[slot as usize].0;
    match *operation {
        Operation::Constant(value) => out.fill(value.get()),
        Operation::Neg(a) => unary(out, s(a), |a| -a),
        Operation::Add(a, b) => binary(out, s(a), s(b), |a, b| a + b),
        Operation::Sub(a, b) => binary(out, s(a), s(b), |a, b| a - b),
        Operation::Mul(a, b) => binary(out, s(a), s(b), |a, b| a * b),
        Operation::Div(a, b) => {
            binary(out, s(a), s(b), |a, b| a / b);
            mark_zeros(undefined, s(b));
        }
        Operation::PowInt(a, 2) => unary(out, s(a), |a| a * a),
        Operation::PowInt(a, 3) => unary(out, s(a), |a| a * (a * a)),
        Operation::Min(a, b) => binary(out, s(a), s(b), |a, b| if b < a { b } else { a }),
        Operation::Max(a, b) => binary(out, s(a), s(b), |a, b| if b > a { b } else { a }),
        Operation::Select(operands) => {
            let [a, b, x, y] = operands.map(s);
            for l in 0..WIDTH {
                out[l] = if a[l] <= b[l] { x[l] } else { y[l] };
            }
        }
        Operation::Saturation(operands) => {
            let [x, c, v] = operands.map(s);
            for l in 0..WIDTH {
                let den = v[l] + c[l] * x[l];
                out[l] = x[l] / den;
                undefined[l] += if den == 0.0 { 1.0 } else { 0.0 };
            }
        }
        _ => lane_by_lane(operation, slots, out, undefined),
    }
}

#[inline(always)]
fn two(first: First, second: Second, operands: [&Values; 3], out: &mut Values) {
    match first {
        First::Add => then(second, operands, out, |a, b| a + b),
        First::Sub => then(second, operands, out, |a, b| a - b),
        First::Mul => then(second, operands, out, |a, b| a * b),
        First::Div => then(second, operands, out, |a, b| a / b),
    }
}

#[inline(always)]
fn then(second: Second, [a, b, c]: [&Values; 3], out: &mut Values, first: impl Fn(f64, f64) -> f64) {
    match second {
        Second::Add => ternary(out, a, b, c, |a, b, c| first(a, b) + c),
        Second::Minus => ternary(out, a, b, c, |a, b, c| first(a, b) - c),
        Second::From => ternary(out, a, b, c, |a, b, c| c - first(a, b)),
        Second::Mul => ternary(out, a, b, c, |a, b, c| first(a, b) * c),
    }
}

#[inline(always)]
fn ternary(out: &mut Values, a: &Values, b: &Values, c: &Values, f: impl Fn(f64, f64, f64) -> f64) {
    for l in 0..WIDTH {
        out[l] = f(a[l], b[l], c[l]);
    }
}

#[inline(always)]
fn unary(out: &mut Values, a: &Values, f: impl Fn(f64) -> f64) {
    for l in 0..WIDTH {
        out[l] = f(a[l]);
    }
}

#[inline(always)]
fn binary(out: &mut Values, a: &Values, b: &Values, f: impl Fn(f64, f64) -> f64) {
    for l in 0..WIDTH {
        out[l] = f(a[l], b[l]);
    }
}

#[inline(always)]
fn mark_zeros(undefined: &mut Values, b: &Values) {
    for l in 0..WIDTH {
        undefined[l] += if b[l] == 0.0 { 1.0 } else { 0.0 };
    }
}

#[inline(always)]
fn interaction(block: &Block, row: usize, slots: &[Box<Lane>], states: &[usize], out: &mut Values) {
    out.fill(0.0);
    let numbers = &block.numbers[row * block.order..(row + 1) * block.order];
    for (&m, &state) in numbers.iter().zip(states) {
        let x = &slots[state].0;
        for l in 0..WIDTH {
            out[l] += m * x[l];
        }
    }
    for &(column, slot) in &block.formulas[row] {
        let (m, x) = (&slots[slot as usize].0, &slots[states[column]].0);
        for l in 0..WIDTH {
            out[l] += m[l] * x[l];
        }
    }
}

/// What has no vector form runs the scalar operation in each lane.
#[inline(never)]
fn lane_by_lane(operation: &Operation<Register>, slots: &[Box<Lane>], out: &mut Values, undefined: &mut Values) {
    for l in 0..WIDTH {
        let s = |slot: Register| slots[slot as usize].0[l];
        let mut domain = Domain::CLEAN;
        out[l] = match *operation {
            Operation::PowInt(a, n) => Number::powi(&s(a), n, &mut domain),
            Operation::Pow(a, b) => Number::pow(&s(a), &s(b), &mut domain),
            Operation::Apply(function, a) => s(a).apply(function, &mut domain),
            Operation::Quotient(quotient, k, u) => s(u).quotient(quotient, k, &mut domain),
            Operation::PowerQuotient(k, u, p) => s(u).power_quotient(k, &s(p), &mut domain),
            // Every other operation has its vector form above.
            _ => f64::NAN,
        };
        undefined[l] += f64::from(u8::from(!domain.defined));
    }
}
