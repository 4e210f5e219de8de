//! Recognises the monotone saturation form s/(v + c s).
//!
//! In num/(… + t + …), where the state part s of the term t divides num, the quotient is rest · s/(v + c s) with c the
//! parameter part of t and v the other terms. The form says what a quotient hides from interval arithmetic: that it grows
//! in s and falls in c and v. It is the same quotient, so it is defined at the same points; the coefficient stays
//! symbolic, so it may be 0.

use super::{Graph, NodeId, Operation};

/// A product as factors raised to whole powers.
type Factors = Vec<(NodeId, i32)>;

/// No sum in a denominator has more terms than this looked at.
const MOST_TERMS: usize = 64;

/// No product has more factors than this looked at, shared ones counted each time.
const MOST_FACTORS: usize = 256;

impl Graph {
    /// num/den in saturation form, where it has one.
    pub(super) fn saturating(&mut self, num: NodeId, den: NodeId) -> Option<NodeId> {
        if !matches!(self.operation(den), Operation::Add(..) | Operation::Sub(..)) || !self.facts(num).state_dependent {
            return None;
        }
        let terms = self.terms(den)?;
        let numerator = self.factors(num)?;
        for (position, &(positive, term)) in terms.iter().enumerate() {
            if !positive {
                continue;
            }
            let (state_part, parameter_part) = self.split(term)?;
            if state_part.is_empty() {
                continue;
            }
            let Some(rest) = divided(&numerator, &state_part) else { continue };
            let s = self.product(&state_part);
            let c = self.product(&parameter_part);
            let v = self.sum_without(&terms, position);
            let saturation = self.intern(Operation::Saturation([s, c, v]));
            let rest = self.product(&rest);
            return Some(self.mul(rest, saturation));
        }
        None
    }

    /// s/(v + c s)
    pub fn saturation(&mut self, s: NodeId, c: NodeId, v: NodeId) -> NodeId {
        if self.is(c, 0.0) {
            return self.div(s, v);
        }
        if self.is(s, 0.0) && self.facts(v).nonzero() && self.facts(v).total && self.facts(c).total {
            return s;
        }
        if !self.facts(s).state_dependent && !self.facts(v).state_dependent {
            let grown = self.mul(c, s);
            let den = self.add(v, grown);
            return self.div(s, den);
        }
        self.intern(Operation::Saturation([s, c, v]))
    }

    /// The terms of a sum, with whether each is added; `None` where there are too many to look at.
    fn terms(&self, sum: NodeId) -> Option<Vec<(bool, NodeId)>> {
        let mut found = Vec::new();
        let mut stack = vec![(true, sum)];
        while let Some((positive, node)) = stack.pop() {
            match self.operation(node) {
                Operation::Add(a, b) => stack.extend([(positive, b), (positive, a)]),
                Operation::Sub(a, b) => stack.extend([(!positive, b), (positive, a)]),
                Operation::Neg(a) => stack.push((!positive, a)),
                _ => found.push((positive, node)),
            }
            if found.len() + stack.len() > MOST_TERMS {
                return None;
            }
        }
        Some(found)
    }

    /// The factors of a product, equal ones gathered; quotients by what does not depend on a state count as factors too.
    /// `None` where there are too many to look at: a shorthand that uses another twice, and so on, has a factor for every
    /// way down.
    fn factors(&self, product: NodeId) -> Option<Factors> {
        let mut found: Factors = Vec::new();
        let mut stack = vec![(product, 1)];
        let mut budget = MOST_FACTORS;
        while let Some((node, power)) = stack.pop() {
            budget = budget.checked_sub(1)?;
            match self.operation(node) {
                Operation::Mul(a, b) => stack.extend([(b, power), (a, power)]),
                Operation::Div(a, b) if power > 0 && !self.facts(b).state_dependent => {
                    stack.extend([(b, -power), (a, power)]);
                }
                Operation::PowInt(a, n) if n > 0 && n < 64 && (1..64).contains(&power) => stack.push((a, power * n)),
                _ if self.is(node, 1.0) => {}
                _ => match found.iter_mut().find(|(known, p)| *known == node && (*p > 0) == (power > 0)) {
                    Some((_, known)) => *known += power,
                    None => found.push((node, power)),
                },
            }
        }
        Some(found)
    }

    /// The factors of a term that depend on a state, and those that do not.
    fn split(&self, term: NodeId) -> Option<(Factors, Factors)> {
        Some(self.factors(term)?.into_iter().partition(|(factor, _)| self.facts(*factor).state_dependent))
    }

    /// A product of powers; negative ones are divided by, as they were when the factors were taken apart.
    fn product(&mut self, factors: &[(NodeId, i32)]) -> NodeId {
        let (above, below): (Vec<_>, Vec<_>) = factors.iter().partition(|(_, power)| *power > 0);
        let above = self.product_of_powers(&above);
        if below.is_empty() {
            return above;
        }
        let below = self.product_of_powers(&below);
        self.div(above, below)
    }

    fn product_of_powers(&mut self, factors: &[(NodeId, i32)]) -> NodeId {
        let mut product = self.one();
        for &(factor, power) in factors {
            let power = self.powi(factor, power.abs());
            product = self.mul(product, power);
        }
        product
    }

    /// The sum of all terms but one.
    fn sum_without(&mut self, terms: &[(bool, NodeId)], left_out: usize) -> NodeId {
        let mut sum = self.zero();
        for (position, &(positive, term)) in terms.iter().enumerate() {
            if position != left_out {
                sum = if positive { self.add(sum, term) } else { self.sub(sum, term) };
            }
        }
        sum
    }
}

/// `product` without `divisor`, where every factor of the divisor is there often enough.
fn divided(product: &Factors, divisor: &Factors) -> Option<Factors> {
    let mut rest = product.clone();
    for &(factor, power) in divisor {
        let (_, available) = rest.iter_mut().find(|(known, p)| *known == factor && *p >= power)?;
        *available -= power;
    }
    rest.retain(|(_, power)| *power != 0);
    Some(rest)
}
