//! How many subjects are fitted in a second on one core, 24 + 12 h with every limit?
//!
//! Run with `cargo bench --no-default-features --bench cosinor`.
#![expect(
    clippy::print_stdout,
    clippy::disallowed_methods,
    reason = "what is measured is printed"
)]

use acroshift::rhythm::{Design, Observation, fit};
use std::hint::black_box;
use std::time::Instant;

const SUBJECTS: u32 = 100_000;

fn main() {
    let design = Design::of(&[24.0, 12.0]);
    let mut samples: Vec<Observation> = (0..24)
        .map(|hour| Observation {
            time_h: f64::from(hour),
            value: 0.0,
            weight: 1.0,
        })
        .collect();
    let start = Instant::now();
    let mut rhythmic = 0_u32;
    for subject in 0..SUBJECTS {
        // A rhythm whose phase and noise differ from subject to subject, from a fixed sequence.
        let mut noise = f64::from(subject) * 0.618_033_988_749;
        for sample in &mut samples {
            noise = (noise * 1.324_717_957 + 0.754_877_666).fract();
            let turn = std::f64::consts::TAU * (sample.time_h - noise) / 24.0;
            sample.value = 200.0 + 120.0 * turn.cos() + 60.0 * noise;
        }
        let fitted = fit(black_box(&samples), &design);
        rhythmic += u32::from(fitted.is_ok_and(|cosinor| cosinor.p < 0.05));
    }
    let seconds = start.elapsed().as_secs_f64();
    println!(
        "{:.0} subjects/s on one core ({rhythmic} of {SUBJECTS} with a rhythm)",
        f64::from(SUBJECTS) / seconds
    );
}
