//! A fixed, even sample of several independent spreads.

use statrs::function::erf::erfc_inv;

/// Standard normal deviates: one row per member, one column per spread, each column with mean 0 and standard deviation 1.
///
/// # Equation
///
/// ```text
/// u(i, j) = frac(s(j) + i / g^j),  g the positive root of g^(d+1) = g + 1,  s(j) from the seed;  z = normal quantile of u
/// ```
///
/// # Source
///
/// Additive recurrence of Kronecker type with the constant of Roberts (2018), "The unreasonable effectiveness of quasirandom sequences" (from memory);
/// rotation of Cranley and Patterson (1976), SIAM J Numer Anal 13:904 (from memory).
/// Deviations: the columns are made uncorrelated (Gram-Schmidt) and standardised, so that a small ensemble has exactly the published, independent spreads.
///
/// # Example
///
/// ```
/// use acroshift::numeric::low_discrepancy::normal_sample;
/// let sample = normal_sample(32, 5, 1);
/// let mean: f64 = sample.iter().map(|row| row[0]).sum::<f64>() / 32.0;
/// assert!(mean.abs() < 1e-12);
/// ```
pub fn normal_sample(members: usize, spreads: usize, seed: u64) -> Vec<Vec<f64>> {
    let golden = golden_root(spreads);
    let mut state = seed;
    let mut alpha = 1.0;
    let mut columns: Vec<Vec<f64>> = Vec::new();
    for _ in 0..spreads {
        alpha /= golden;
        let mut u = next_uniform(&mut state);
        let column: Vec<f64> = (0..members)
            .map(|_| {
                u = (u + alpha).fract();
                // 1e-6 from either end keeps the deviate below 4.8.
                -std::f64::consts::SQRT_2 * erfc_inv(2.0 * u.clamp(1e-6, 1.0 - 1e-6))
            })
            .collect();
        columns.push(standardise(&without_shared_part(column, &columns)));
    }
    (0..members)
        .map(|member| columns.iter().map(|column| column[member]).collect())
        .collect()
}

/// Takes away what a column shares with earlier, standardised ones, so that the spreads are independent in a small sample too.
#[expect(
    clippy::cast_precision_loss,
    reason = "the number of members is far below 2^53"
)]
fn without_shared_part(mut column: Vec<f64>, earlier: &[Vec<f64>]) -> Vec<f64> {
    // With as many columns as members nothing would be left.
    if earlier.len() + 1 >= column.len() {
        return column;
    }
    for other in earlier {
        let shared = column.iter().zip(other).map(|(a, b)| a * b).sum::<f64>() / other.len() as f64;
        for (value, part) in column.iter_mut().zip(other) {
            *value -= shared * part;
        }
    }
    column
}

/// Positive root of g^(d+1) = g + 1, by fixed-point iteration.
fn golden_root(dimensions: usize) -> f64 {
    let mut golden = 2.0_f64;
    let power = 1.0 / (f64::from(u32::try_from(dimensions).unwrap_or(u32::MAX)) + 1.0);
    for _ in 0..64 {
        golden = libm::pow(1.0 + golden, power);
    }
    golden
}

#[expect(
    clippy::cast_precision_loss,
    reason = "the number of members is far below 2^53"
)]
fn standardise(column: &[f64]) -> Vec<f64> {
    let count = column.len() as f64;
    let mean = column.iter().sum::<f64>() / count;
    let variance = column.iter().map(|z| (z - mean) * (z - mean)).sum::<f64>() / count;
    let spread = if variance > 0.0 { variance.sqrt() } else { 1.0 };
    column.iter().map(|z| (z - mean) / spread).collect()
}

/// A uniform number in [0, 1) from the splitmix64 sequence (Steele, Lea and Flood 2014, from memory).
#[expect(
    clippy::cast_precision_loss,
    reason = "the upper 53 bits fit a double exactly"
)]
fn next_uniform(state: &mut u64) -> f64 {
    *state = state.wrapping_add(0x9e37_79b9_7f4a_7c15);
    let mut z = *state;
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    z ^= z >> 31;
    (z >> 11) as f64 / 9_007_199_254_740_992.0
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_have_unit_spread_and_do_not_correlate() {
        for (members, seed) in [(16, 1), (32, 1), (32, 2), (64, 7)] {
            let sample = normal_sample(members, 5, seed);
            let count = f64::from(u32::try_from(members).unwrap());
            for a in 0..5 {
                let variance = sample.iter().map(|row| row[a] * row[a]).sum::<f64>() / count;
                assert!((variance - 1.0).abs() < 1e-9);
                for b in 0..a {
                    let correlation = sample.iter().map(|row| row[a] * row[b]).sum::<f64>() / count;
                    assert!(
                        correlation.abs() < 1e-9,
                        "columns {a} and {b}: {correlation}"
                    );
                }
            }
        }
    }

    #[test]
    fn the_same_seed_gives_the_same_sample() {
        assert_eq!(normal_sample(8, 3, 5), normal_sample(8, 3, 5));
        assert_ne!(normal_sample(8, 3, 5), normal_sample(8, 3, 6));
    }
}
