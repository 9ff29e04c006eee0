//! A search for the least loss without derivatives, shared by the fits.

/// First steps of the search, as shares of the start.
const FIRST_STEP: f64 = 0.15;

/// Simplex search (Nelder and Mead 1965, Comput J 7:308): reflection 1, expansion 2, contraction 1/2, shrinkage 1/2.
pub(crate) fn search<const N: usize>(
    start: [f64; N],
    rounds: usize,
    loss: impl Fn(&[f64; N]) -> f64,
) -> [f64; N] {
    let mut simplex: Vec<(f64, [f64; N])> = (0..=N)
        .map(|corner| {
            let mut point = start;
            if let Some(value) = corner.checked_sub(1).and_then(|i| point.get_mut(i)) {
                *value *= 1.0 + FIRST_STEP;
            }
            (loss(&point), point)
        })
        .collect();
    for _ in 0..rounds {
        simplex.sort_by(|a, b| a.0.total_cmp(&b.0));
        let last = simplex.len() - 1;
        let worst = simplex[last];
        let centre = mean(&simplex[..last]);
        let along = |by: f64| {
            let point = std::array::from_fn(|i| centre[i] + by * (centre[i] - worst.1[i]));
            (loss(&point), point)
        };
        let reflected = along(1.0);
        simplex[last] = if reflected.0 < simplex[0].0 {
            let expanded = along(2.0);
            if expanded.0 < reflected.0 {
                expanded
            } else {
                reflected
            }
        } else if reflected.0 < simplex[last - 1].0 {
            reflected
        } else {
            let contracted = along(if reflected.0 < worst.0 { 0.5 } else { -0.5 });
            if contracted.0 >= worst.0.min(reflected.0) {
                shrink(&mut simplex, &loss);
                continue;
            }
            contracted
        };
    }
    simplex.sort_by(|a, b| a.0.total_cmp(&b.0));
    simplex[0].1
}

fn mean<const N: usize>(corners: &[(f64, [f64; N])]) -> [f64; N] {
    let count = f64::from(u32::try_from(corners.len()).unwrap_or(1));
    std::array::from_fn(|i| corners.iter().map(|(_, point)| point[i]).sum::<f64>() / count)
}

fn shrink<const N: usize>(simplex: &mut [(f64, [f64; N])], loss: &impl Fn(&[f64; N]) -> f64) {
    let best = simplex[0].1;
    for corner in simplex.iter_mut().skip(1) {
        let point = std::array::from_fn(|i| f64::midpoint(best[i], corner.1[i]));
        *corner = (loss(&point), point);
    }
}
