//! The single-component cosine that fits evenly or unevenly spaced values best.

/// A fitted cosine `mesor + amplitude * cos(2 pi (t - acrophase) / period)`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CosineFit {
    /// Midline estimating statistic of rhythm, in the unit of the values.
    pub mesor: f64,
    /// Half the distance from trough to peak of the fitted cosine.
    pub amplitude: f64,
    /// Time of the fitted peak, in [0, period), in the unit of the times.
    pub acrophase: f64,
}

/// Least-squares cosine of one period.
///
/// Returns `None` when the times do not determine the fit (fewer than three, or all at the same phases).
///
/// # Equation
///
/// ```text
/// y = M + beta cos(2 pi t / P) + gamma sin(2 pi t / P);  A = sqrt(beta^2 + gamma^2);  acrophase = atan2(gamma, beta) P / (2 pi)
/// ```
///
/// # Source
///
/// Nelson, Tong, Lee and Halberg (1979), Chronobiologia 6:305; normal equations of three unknowns.
///
/// # Example
///
/// ```
/// use acroshift::numeric::cosine::fit_cosine;
/// let times: Vec<f64> = (0..24).map(f64::from).collect();
/// let values: Vec<f64> = times.iter().map(|t| 200.0 + 150.0 * ((t - 8.0) * std::f64::consts::PI / 12.0).cos()).collect();
/// let fit = fit_cosine(&times, &values, 24.0).expect("24 hourly values determine a cosine");
/// assert!((fit.mesor - 200.0).abs() < 1e-9);
/// assert!((fit.amplitude - 150.0).abs() < 1e-9);
/// assert!((fit.acrophase - 8.0).abs() < 1e-9);
/// ```
pub fn fit_cosine(times: &[f64], values: &[f64], period: f64) -> Option<CosineFit> {
    if times.len() < 3 || times.len() != values.len() {
        return None;
    }
    let turn = 2.0 * std::f64::consts::PI / period;
    let mut normal = [[0.0; 4]; 3];
    for (time, value) in times.iter().zip(values) {
        let row = [1.0, libm::cos(turn * time), libm::sin(turn * time)];
        for (i, left) in row.iter().enumerate() {
            for (j, right) in row.iter().enumerate() {
                normal[i][j] += left * right;
            }
            normal[i][3] += left * value;
        }
    }
    fit_from_normal(normal, period)
}

/// The same from the normal equations: rows and columns for 1, cos, sin; the last column holds the sums with the values.
pub fn fit_from_normal(normal: [[f64; 4]; 3], period: f64) -> Option<CosineFit> {
    let turn = 2.0 * std::f64::consts::PI / period;
    let [mesor, beta, gamma] = solve(normal)?;
    Some(CosineFit {
        mesor,
        amplitude: libm::hypot(beta, gamma),
        acrophase: super::circular::wrap(libm::atan2(gamma, beta) / turn, period),
    })
}

/// Gauss elimination with partial pivoting for three unknowns; the last column is the right-hand side.
fn solve(mut rows: [[f64; 4]; 3]) -> Option<[f64; 3]> {
    for column in 0..3 {
        let pivot =
            (column..3).max_by(|&a, &b| rows[a][column].abs().total_cmp(&rows[b][column].abs()))?;
        if rows[pivot][column].abs() < 1e-9 {
            return None;
        }
        rows.swap(column, pivot);
        let pivot_row = rows[column];
        for (index, row) in rows.iter_mut().enumerate() {
            if index != column {
                let factor = row[column] / pivot_row[column];
                for (cell, pivot_cell) in row.iter_mut().zip(pivot_row) {
                    *cell -= factor * pivot_cell;
                }
            }
        }
    }
    Some([
        rows[0][3] / rows[0][0],
        rows[1][3] / rows[1][1],
        rows[2][3] / rows[2][2],
    ])
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn times_at_one_phase_determine_nothing() {
        assert_eq!(fit_cosine(&[0.0, 24.0, 48.0], &[1.0, 2.0, 3.0], 24.0), None);
    }
}
