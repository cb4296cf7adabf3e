//! A copy of a field with layers around it, so that inner loops need no index arithmetic.

/// Copies a periodic field with `layers` values of the other end on each side. The copy has u.len() + 2 layers
/// values.
pub fn pad_periodic(u: &[f64], layers: usize, padded: &mut Vec<f64>) {
    let n = u.len();
    padded.clear();
    padded.extend((0..layers).map(|k| u[(n * layers + k - layers) % n]));
    padded.extend_from_slice(u);
    padded.extend((0..layers).map(|k| u[k % n]));
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn layers_repeat_the_field_even_where_they_are_wider_than_it() {
        for n in 1..6_usize {
            let u: Vec<f64> = (0..n).map(|j| j as f64).collect();
            let mut padded = Vec::new();
            pad_periodic(&u, 3, &mut padded);
            let expected: Vec<f64> = (0..n + 6).map(|k| ((k + 3 * n - 3) % n) as f64).collect();
            assert_eq!(padded, expected);
        }
    }
}
