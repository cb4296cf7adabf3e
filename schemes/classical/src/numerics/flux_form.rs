//! Linear updates in flux form: u_j changes by the difference of the fluxes through its two faces, so that a uniform
//! state stays as it is and the mean of the field is kept to rounding.

/// Weights of u_{j-1}, u_j, u_{j+1}, u_{j+2} in the flux through the face between j and j + 1, times step over
/// spacing.
pub type FaceWeights = [f64; 4];

/// The weights for a velocity of either sign from those for a positive Courant number: the mirror image with the sign
/// of the flux reversed.
pub fn mirrored(courant: f64, positive: impl Fn(f64) -> FaceWeights) -> FaceWeights {
    if courant >= 0.0 {
        return positive(courant);
    }
    let [a, b, c, d] = positive(-courant);
    [-d, -c, -b, -a]
}

/// The fluxes of a periodic field: `flux[j]` goes through the face between j and j + 1.
pub fn periodic_fluxes(weights: &FaceWeights, u: &[f64], flux: &mut [f64]) {
    let n = u.len();
    let through = |w: &[f64]| weights[0] * w[0] + weights[1] * w[1] + weights[2] * w[2] + weights[3] * w[3];
    for (f, window) in flux.iter_mut().skip(1).zip(u.windows(4)) {
        *f = through(window);
    }
    let at = |j: usize| through(&[u[(j + n - 1) % n], u[j], u[(j + 1) % n], u[(j + 2) % n]]);
    // The windows serve faces 1 to n - 3; the others reach over the end.
    flux[0] = at(0);
    for (j, f) in flux.iter_mut().enumerate().skip(n.saturating_sub(2).max(1)) {
        *f = at(j);
    }
}

/// Takes the difference of the fluxes from each value: u_j -= f_j - f_{j-1}.
pub fn subtract_divergence(flux: &[f64], u: &mut [f64]) {
    let mut left = flux[flux.len() - 1];
    for (value, right) in u.iter_mut().zip(flux) {
        *value -= right - left;
        left = *right;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn faces_at_the_end_see_the_same_stencil_as_the_others() {
        let weights = [1.0, 10.0, 100.0, 1000.0];
        for n in 4..9 {
            let u: Vec<f64> = (0..n).map(|j| (j * j + 1) as f64).collect();
            let mut flux = vec![f64::NAN; n];
            periodic_fluxes(&weights, &u, &mut flux);
            for j in 0..n {
                let expected = (0..4).map(|m| weights[m] * u[(j + n + m - 1) % n]).sum::<f64>();
                assert_eq!(flux[j], expected, "face {j} of {n}");
            }
        }
    }

    #[test]
    fn mirroring_turns_the_upwind_side() {
        assert_eq!(mirrored(-0.3, |c| [0.0, c, 0.0, 0.0]), [-0.0, -0.0, -0.3, -0.0]);
    }
}
