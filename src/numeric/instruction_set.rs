//! Which vector instructions does this machine have, and how is a loop compiled for them?
//!
//! The work is written once, as plain loops over arrays; it is compiled for each set and the best one present is chosen while the program runs.
//! No fused multiply-add is used, so every set gives the same bits.
#![expect(
    clippy::inline_always,
    reason = "what is compiled for several instruction sets must be inlined"
)]

/// A set of vector instructions.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum InstructionSet {
    /// What every processor of the architecture has (SSE2 on x86-64).
    Baseline,
    /// x86-64-v3: 4 numbers at a time.
    Avx2,
    /// x86-64-v4: 8 numbers at a time.
    Avx512,
}

impl InstructionSet {
    /// The sets that this machine can run, the best one last.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::numeric::instruction_set::InstructionSet;
    /// assert_eq!(InstructionSet::available()[0], InstructionSet::Baseline);
    /// ```
    pub fn available() -> Vec<Self> {
        let mut sets = vec![Self::Baseline];
        #[cfg(target_arch = "x86_64")]
        {
            if pulp::x86::V3::try_new().is_some() {
                sets.push(Self::Avx2);
            }
            if pulp::x86::V4::try_new().is_some() {
                sets.push(Self::Avx512);
            }
        }
        sets
    }

    /// The best set of this machine.
    pub fn best() -> Self {
        Self::available().pop().unwrap_or(Self::Baseline)
    }

    /// Its name, as benchmarks print it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Baseline => "baseline",
            Self::Avx2 => "AVX2",
            Self::Avx512 => "AVX-512",
        }
    }

    /// Runs `work` compiled for this set; on a machine without it, for the baseline.
    ///
    /// # Example
    ///
    /// ```
    /// use acroshift::numeric::instruction_set::{InstructionSet, Work};
    /// struct Sum<'a>(&'a [f64]);
    /// impl Work for Sum<'_> {
    ///     type Result = f64;
    ///     #[inline(always)]
    ///     fn done(self) -> f64 {
    ///         self.0.iter().sum()
    ///     }
    /// }
    /// assert_eq!(InstructionSet::best().run(Sum(&[1.0, 2.0, 3.5])), 6.5);
    /// ```
    #[inline]
    pub fn run<W: Work>(self, work: W) -> W::Result {
        #[cfg(target_arch = "x86_64")]
        {
            if self == Self::Avx512
                && let Some(simd) = pulp::x86::V4::try_new()
            {
                return simd.vectorize(Compiled(work));
            }
            if self == Self::Avx2
                && let Some(simd) = pulp::x86::V3::try_new()
            {
                return simd.vectorize(Compiled(work));
            }
        }
        work.done()
    }
}

/// Something to be compiled for several instruction sets.
///
/// `done` and everything that it calls in its inner loops must bear `#[inline(always)]`: a function that is called is compiled for the baseline.
pub trait Work {
    /// What comes out.
    type Result;
    /// Does it.
    fn done(self) -> Self::Result;
}

/// Hands a work over to the dispatching library.
#[cfg(target_arch = "x86_64")]
struct Compiled<W>(W);

#[cfg(target_arch = "x86_64")]
impl<W: Work> pulp::NullaryFnOnce for Compiled<W> {
    type Output = W::Result;

    #[inline(always)]
    fn call(self) -> W::Result {
        self.0.done()
    }
}
