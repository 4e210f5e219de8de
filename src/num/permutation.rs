//! Random orders of 0 … n−1 that can be asked for one place without being written out.
//!
//! Memory does not grow with n, and two who know the key agree on every place: what a Latin hypercube of any size, made in
//! parts, needs.

use super::random::Source;

/// Four give a good cipher of large halves (Luby & Rackoff 1988); halves of a few bits need more to mix.
const ROUNDS: u64 = 8;

/// Orders of up to so many places are written out: a network over a few bits would reach some orders more often.
const MOST_WRITTEN: u64 = 1 << 10;

/// A random order of 0 … n−1; a few kilobytes at most.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Permutation {
    key: u64,
    size: u64,
    form: Form,
}

#[derive(Clone, Debug, PartialEq, Eq)]
enum Form {
    /// Shuffled (Durstenfeld 1964); all orders are as likely.
    Written(Box<[u16]>),
    /// A Feistel network over the smallest power of two that holds n, which permutes it whatever its rounds do; from a
    /// value of n or more it is followed on until it is below n (Black & Rogaway 2002), fewer than twice on average. Bits
    /// of the high half and of the low half.
    Network([u32; 2]),
}

impl Permutation {
    /// The order of 0 … `size` − 1 that a key chooses; `size` is at most 2^63.
    ///
    /// # Panics
    /// If `size` is more.
    #[must_use]
    pub fn new(key: u64, size: u64) -> Self {
        assert!(size <= 1 << 63, "a permutation of {size}");
        let bits = u64::BITS - size.saturating_sub(1).leading_zeros();
        let form = if size <= MOST_WRITTEN {
            Form::Written(shuffled(key, size as u16))
        } else {
            Form::Network([bits / 2, bits - bits / 2])
        };
        Self { key, size, form }
    }

    /// Where `index` goes, for index < size; any other index is taken modulo size. 0 of nothing is 0.
    #[must_use]
    pub fn at(&self, index: u64) -> u64 {
        if self.size == 0 {
            return 0;
        }
        let index = index % self.size;
        match &self.form {
            Form::Written(order) => u64::from(order[index as usize]),
            Form::Network(halves) => self.followed(index, *halves),
        }
    }

    fn followed(&self, mut value: u64, halves: [u32; 2]) -> u64 {
        // A cycle of the network meets every value of n or more at most once before it comes back below n.
        let beyond = (1u64 << (halves[0] + halves[1])) - self.size;
        for _ in 0..=beyond {
            value = self.network(value, halves);
            if value < self.size {
                break;
            }
        }
        value
    }

    fn network(&self, value: u64, [high_bits, low_bits]: [u32; 2]) -> u64 {
        let (mut high, mut low) = (value >> low_bits, value & mask(low_bits));
        for round in 0..ROUNDS / 2 {
            high ^= mixed(low, self.key, 2 * round) & mask(high_bits);
            low ^= mixed(high, self.key, 2 * round + 1) & mask(low_bits);
        }
        high << low_bits | low
    }
}

fn shuffled(key: u64, size: u16) -> Box<[u16]> {
    let mut source = Source::new(key);
    let mut order: Vec<u16> = (0..size).collect();
    for last in (1..order.len()).rev() {
        // 2^64 is not a multiple of the places, which favours some by one in 10^16.
        order.swap(last, (source.bits() % (last as u64 + 1)) as usize);
    }
    order.into()
}

fn mask(bits: u32) -> u64 {
    (1u64 << bits) - 1
}

/// A function of a half that looks random: two multiplications of SplitMix64 (Steele, Lea & Flood 2014).
fn mixed(half: u64, key: u64, round: u64) -> u64 {
    let mut z = half ^ key.wrapping_add((round + 1).wrapping_mul(0x9e37_79b9_7f4a_7c15));
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    z >> 32
}
