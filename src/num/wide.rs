//! Picks the widest vector instructions that this processor has; the binary itself asks for none beyond the baseline.
//!
//! Unsafe code: a function compiled for a processor feature is called only after that feature was detected on the
//! processor at hand, which is the one condition of `#[target_feature]`. The variants differ in nothing else, and none
//! fuses a product with a sum, so all give the same bits.
#![expect(unsafe_code, reason = "calls functions compiled for a processor feature, after detecting it")]

/// Work that vector instructions make faster: loops over arrays.
pub trait Loops {
    /// Does it. To be inlined always, with all that it calls, for only then are the loops compiled for each processor.
    fn run(self);
}

/// Does the work with the widest instructions there are.
pub fn execute(loops: impl Loops) {
    #[cfg(target_arch = "x86_64")]
    {
        if is_x86_feature_detected!("avx512f") {
            // SAFETY: avx512f was detected just now.
            return unsafe { execute_avx512(loops) };
        }
        if is_x86_feature_detected!("avx2") {
            // SAFETY: avx2 was detected just now.
            return unsafe { execute_avx2(loops) };
        }
    }
    loops.run();
}

#[cfg(target_arch = "x86_64")]
#[target_feature(enable = "avx2")]
fn execute_avx2(loops: impl Loops) {
    loops.run();
}

#[cfg(target_arch = "x86_64")]
#[target_feature(enable = "avx512f")]
fn execute_avx512(loops: impl Loops) {
    loops.run();
}
