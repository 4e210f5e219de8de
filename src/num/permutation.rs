//! Random orders of 0 … n−1 that can be asked for one place without being written out.
//!
//! Memory does not grow with n, and two who know the key agree on every place: what a Latin hypercube of any size, made in
//! parts, needs.

/// Four give a good cipher of large halves (Luby & Rackoff 1988); halves of a few bits need more to mix.
const ROUNDS: u64 = 8;

/// A random order of 0 … n−1.
///
/// A Feistel network over the smallest power of two that holds n, which permutes it whatever its rounds do; from a value
/// of n or more it is followed on until it is below n (Black & Rogaway 2002), fewer than twice on average. The orders of
/// all n up to 4 occur; of more, a number of orders bounded by the number of keys.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Permutation {
    key: u64,
    size: u64,
    /// Bits of the high half and of the low half.
    halves: [u32; 2],
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
        Self { key, size, halves: [bits / 2, bits - bits / 2] }
    }

    /// Where `index` goes, for index < size; any other index is taken modulo size. 0 of nothing is 0.
    #[must_use]
    pub fn at(&self, index: u64) -> u64 {
        if self.size <= 1 {
            return 0;
        }
        let mut value = index % self.size;
        // A cycle of the network meets every value of n or more at most once before it comes back below n.
        let beyond = (1u64 << (self.halves[0] + self.halves[1])) - self.size;
        for _ in 0..=beyond {
            value = self.network(value);
            if value < self.size {
                break;
            }
        }
        value
    }

    fn network(&self, value: u64) -> u64 {
        let [high_bits, low_bits] = self.halves;
        let (mut high, mut low) = (value >> low_bits, value & mask(low_bits));
        for round in 0..ROUNDS / 2 {
            high ^= mixed(low, self.key, 2 * round) & mask(high_bits);
            low ^= mixed(high, self.key, 2 * round + 1) & mask(low_bits);
        }
        high << low_bits | low
    }
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
