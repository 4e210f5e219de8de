//! Random numbers by their place: any of them can be had without those before it.
//!
//! A number depends on a key and a counter alone, so that a part of a long series can be made anywhere, in any order and on
//! any number of threads. For a few numbers in a row [`random`](super::random) is simpler.

/// Rounds; with ten the generator passes the batteries that its authors tried (Salmon et al. 2011).
const ROUNDS: usize = 10;
const MULTIPLIERS: [u64; 2] = [0xd2e7_470e_e14c_6c93, 0xca5a_8263_9512_1157];
/// What the key grows by each round: the golden ratio and √3 − 1, as fractions of 2^64.
const WEYL: [u64; 2] = [0x9e37_79b9_7f4a_7c15, 0xbb67_ae85_84ca_a73b];

/// 256 bits that look random: Philox 4x64 (Salmon, Moraes, Dror & Shaw 2011), a keyed permutation of the counters.
///
/// Different counters under one key give independent blocks, as do different keys. Not for secrets.
#[inline]
#[must_use]
pub fn block(mut key: [u64; 2], mut counter: [u64; 4]) -> [u64; 4] {
    for _ in 0..ROUNDS {
        let (high_0, low_0) = product(MULTIPLIERS[0], counter[0]);
        let (high_1, low_1) = product(MULTIPLIERS[1], counter[2]);
        counter = [high_1 ^ counter[1] ^ key[0], low_1, high_0 ^ counter[3] ^ key[1], low_0];
        key = [key[0].wrapping_add(WEYL[0]), key[1].wrapping_add(WEYL[1])];
    }
    counter
}

#[inline]
fn product(a: u64, b: u64) -> (u64, u64) {
    let whole = u128::from(a) * u128::from(b);
    ((whole >> 64) as u64, whole as u64)
}

/// The middle of one of 2^52 equal parts of (0, 1), by the leading bits: never 0 or 1, and u and 1 − u are both exact.
#[inline]
#[must_use]
pub fn unit(bits: u64) -> f64 {
    ((bits >> 12) as f64 + 0.5) / (1u64 << 52) as f64
}
