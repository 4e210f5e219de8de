//! Picks the widest vector instructions that this processor has; the binary itself asks for none beyond the baseline.
//!
//! Unsafe code: a function compiled for a processor feature is called only after that feature was detected on the
//! processor at hand, which is the one condition of `#[target_feature]`. The variants differ in nothing else, and none
//! fuses a product with a sum, so all give the same bits.
#![expect(unsafe_code, reason = "calls functions compiled for a processor feature, after detecting it")]

use super::{Lanes, perform};

/// Runs every step of the lanes.
pub(super) fn execute(lanes: &mut Lanes) {
    #[cfg(target_arch = "x86_64")]
    {
        if is_x86_feature_detected!("avx512f") {
            // SAFETY: avx512f was detected just now.
            return unsafe { execute_avx512(lanes) };
        }
        if is_x86_feature_detected!("avx2") {
            // SAFETY: avx2 was detected just now.
            return unsafe { execute_avx2(lanes) };
        }
    }
    perform::execute(lanes);
}

#[cfg(target_arch = "x86_64")]
#[target_feature(enable = "avx2")]
fn execute_avx2(lanes: &mut Lanes) {
    perform::execute(lanes);
}

#[cfg(target_arch = "x86_64")]
#[target_feature(enable = "avx512f")]
fn execute_avx512(lanes: &mut Lanes) {
    perform::execute(lanes);
}
