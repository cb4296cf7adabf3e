//! The processor's floating-point mode. A library built with -ffast-math switches flush-to-zero on in the thread that loads it,
//! after which subnormal numbers are zero for everybody in that thread.

/// Flush-to-zero and denormals-are-zero of the MXCSR register (Intel 64 manual, volume 1, 10.2.3).
#[cfg(target_arch = "x86_64")]
const FLUSHING: u32 = 1 << 15 | 1 << 6;

/// The control register; `None` on processors where this is not known.
#[cfg(target_arch = "x86_64")]
pub(super) fn read() -> Option<u32> {
    let mut mode = 0u32;
    // SAFETY: stores the register into a local.
    unsafe { std::arch::asm!("stmxcsr [{}]", in(reg) &raw mut mode, options(nostack, preserves_flags)) };
    Some(mode)
}

/// Puts the control register back.
#[cfg(target_arch = "x86_64")]
pub(super) fn write(mode: Option<u32>) {
    if let Some(mode) = mode {
        // SAFETY: loads a value that the register held before.
        unsafe { std::arch::asm!("ldmxcsr [{}]", in(reg) &raw const mode, options(nostack, preserves_flags)) };
    }
}

/// Whether subnormal numbers are flushed to zero in this thread.
#[cfg(target_arch = "x86_64")]
pub(super) fn flushes_to_zero() -> bool {
    read().is_some_and(|mode| mode & FLUSHING != 0)
}

/// Not known on this processor.
#[cfg(not(target_arch = "x86_64"))]
pub(super) fn read() -> Option<u32> {
    None
}

/// Nothing to put back on this processor.
#[cfg(not(target_arch = "x86_64"))]
pub(super) fn write(_: Option<u32>) {}

/// Asks the arithmetic itself.
#[cfg(not(target_arch = "x86_64"))]
pub(super) fn flushes_to_zero() -> bool {
    std::hint::black_box(f64::MIN_POSITIVE) * std::hint::black_box(0.5) == 0.0
}
