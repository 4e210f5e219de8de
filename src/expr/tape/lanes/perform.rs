//! One operation on all lanes.
#![expect(clippy::inline_always, reason = "the loops must end up inside the variant compiled for a processor feature")]

use super::{Block, Lane, Lanes, Number, Operation, Step, WIDTH};
use crate::expr::tape::Register;
use crate::expr::tape::number::Domain;

/// Runs every step. Inlined into each of the dispatcher's variants, so that its loops are vectorised for that processor.
#[inline(always)]
pub(super) fn execute(lanes: &mut Lanes) {
    let Lanes { blocks, steps, slots, undefined, states, .. } = lanes;
    let mut out = Box::new([0.0; WIDTH]);
    for step in steps.iter() {
        // The slot written is none of those read, so taking it out leaves them all in place.
        std::mem::swap(&mut slots[step.to], &mut out);
        perform(step, slots, states, blocks, &mut out, undefined);
        std::mem::swap(&mut slots[step.to], &mut out);
    }
}

#[inline(always)]
fn perform(step: &Step, slots: &[Box<Lane>], states: &[usize], blocks: &[Block], out: &mut Lane, undefined: &mut Lane) {
    let s = |slot: Register| &*slots[slot as usize];
    match step.operation {
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
        Operation::Select([a, b, x, y]) => {
            let (a, b, x, y) = (s(a), s(b), s(x), s(y));
            for l in 0..WIDTH {
                out[l] = if a[l] <= b[l] { x[l] } else { y[l] };
            }
        }
        Operation::Saturation([x, c, v]) => {
            let (x, c, v) = (s(x), s(c), s(v));
            for l in 0..WIDTH {
                let den = v[l] + c[l] * x[l];
                out[l] = x[l] / den;
                undefined[l] += if den == 0.0 { 1.0 } else { 0.0 };
            }
        }
        Operation::Interaction { block, row } => interaction(&blocks[block], row, slots, states, out),
        ref operation => lane_by_lane(operation, slots, out, undefined),
    }
}

#[inline(always)]
fn unary(out: &mut Lane, a: &Lane, f: impl Fn(f64) -> f64) {
    for l in 0..WIDTH {
        out[l] = f(a[l]);
    }
}

#[inline(always)]
fn binary(out: &mut Lane, a: &Lane, b: &Lane, f: impl Fn(f64, f64) -> f64) {
    for l in 0..WIDTH {
        out[l] = f(a[l], b[l]);
    }
}

#[inline(always)]
fn mark_zeros(undefined: &mut Lane, b: &Lane) {
    for l in 0..WIDTH {
        undefined[l] += if b[l] == 0.0 { 1.0 } else { 0.0 };
    }
}

#[inline(always)]
fn interaction(block: &Block, row: usize, slots: &[Box<Lane>], states: &[usize], out: &mut Lane) {
    out.fill(0.0);
    let numbers = &block.numbers[row * block.order..(row + 1) * block.order];
    for (&m, &state) in numbers.iter().zip(states) {
        let x = &slots[state];
        for l in 0..WIDTH {
            out[l] += m * x[l];
        }
    }
    for &(column, slot) in &block.formulas[row] {
        let (m, x) = (&slots[slot as usize], &slots[states[column]]);
        for l in 0..WIDTH {
            out[l] += m[l] * x[l];
        }
    }
}

/// What has no vector form runs the scalar operation in each lane.
#[inline(never)]
fn lane_by_lane(operation: &Operation<Register>, slots: &[Box<Lane>], out: &mut Lane, undefined: &mut Lane) {
    for l in 0..WIDTH {
        let s = |slot: Register| slots[slot as usize][l];
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
