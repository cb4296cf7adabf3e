//! Dam break over a flat bed: a wet downstream side (Stoker, "Water Waves", 1957) or a dry one (Ritter, 1892).

use super::root::increasing_root;
use super::{ExactError, ExactSolution, Sample, after, positive};

/// Water at rest, `upstream` deep below `position` and `downstream` deep above it, released at `start`.
#[derive(Debug, Clone)]
pub struct DamBreak {
    upstream: f64,
    downstream: f64,
    gravity: f64,
    position: f64,
    start: f64,
    middle: f64,
    velocity: f64,
}

impl DamBreak {
    /// Solves for the depth between the rarefaction and the bore.
    ///
    /// # Errors
    /// `upstream` or `gravity` not positive, or `downstream` not in [0, upstream).
    pub fn new(upstream: f64, downstream: f64, gravity: f64, position: f64, start: f64) -> Result<Self, ExactError> {
        positive("the upstream depth", upstream)?;
        positive("gravity", gravity)?;
        if !(0.0..upstream).contains(&downstream) {
            let requirement = "at least 0 and below the upstream depth";
            return Err(ExactError::Argument { name: "the downstream depth", value: downstream, requirement });
        }
        // Riemann invariant of the rarefaction against the jump conditions of the bore, both as velocity behind.
        let celerity = (gravity * upstream).sqrt();
        let residual = |depth: f64| {
            let local = (gravity * depth).sqrt();
            let root = (0.5 * gravity * (depth + downstream) / (depth * downstream)).sqrt();
            let jump = depth - downstream;
            let root_slope = -0.25 * gravity / (depth * depth) / root;
            (2.0 * (local - celerity) + jump * root, local / depth + root + jump * root_slope)
        };
        let middle = if downstream == 0.0 { 0.0 } else { increasing_root(downstream, upstream, residual) };
        let velocity = 2.0 * (celerity - (gravity * middle).sqrt());
        Ok(Self { upstream, downstream, gravity, position, start, middle, velocity })
    }

    /// Depth and velocity between the rarefaction and the bore; depth 0 where the downstream side is dry.
    #[must_use]
    pub fn middle(&self) -> (f64, f64) {
        (self.middle, self.velocity)
    }

    /// Speeds of the head and the tail of the rarefaction and of the bore, which over a dry bed is the tail.
    fn speeds(&self) -> [f64; 3] {
        let tail = self.velocity - (self.gravity * self.middle).sqrt();
        let bore =
            if self.downstream == 0.0 { tail } else { self.middle * self.velocity / (self.middle - self.downstream) };
        [-(self.gravity * self.upstream).sqrt(), tail, bore]
    }
}

impl ExactSolution for DamBreak {
    fn fields(&self) -> usize {
        2
    }

    /// Depth and discharge.
    fn sample(&self, time: f64, position: f64) -> Result<Sample, ExactError> {
        let elapsed = after(self.start, time)?;
        let distance = position - self.position;
        let speed = match elapsed == 0.0 {
            true if distance < 0.0 => f64::NEG_INFINITY,
            true => f64::INFINITY,
            false => distance / elapsed,
        };
        let [head, tail, bore] = self.speeds();
        let mut sample = Sample::default();
        if speed < head {
            sample.value[0] = self.upstream;
        } else if speed < tail {
            let celerity = (self.gravity * self.upstream).sqrt();
            let local = (2.0 * celerity - speed) / 3.0;
            let velocity = 2.0 / 3.0 * (celerity + speed);
            let depth = local * local / self.gravity;
            let depth_slope = -2.0 / 3.0 * local / self.gravity;
            sample.value = [depth, depth * velocity, 0.0];
            sample.slope = [depth_slope / elapsed, (depth_slope * velocity + depth * 2.0 / 3.0) / elapsed, 0.0];
        } else if speed < bore {
            sample.value = [self.middle, self.middle * self.velocity, 0.0];
        } else {
            sample.value[0] = self.downstream;
        }
        Ok(sample)
    }

    fn breaks(&self, time: f64) -> Vec<f64> {
        let elapsed = (time - self.start).max(0.0);
        let mut breaks: Vec<f64> = self.speeds().into_iter().map(|speed| self.position + speed * elapsed).collect();
        breaks.dedup();
        breaks
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: Ritter's closed form, and the jump conditions themselves.
    use super::*;

    #[test]
    fn bore_satisfies_the_jump_conditions() {
        for (upstream, downstream) in [(1.0, 0.5), (10.0, 0.1), (2.3, 2.2)] {
            let gravity = 9.81;
            let dam = DamBreak::new(upstream, downstream, gravity, 0.0, 0.0).unwrap();
            let (depth, velocity) = dam.middle();
            let bore = dam.breaks(1.0)[2];
            let discharge = depth * velocity;
            let mass = bore * (depth - downstream) - discharge;
            let momentum =
                bore * discharge - discharge * velocity - 0.5 * gravity * (depth + downstream) * (depth - downstream);
            let size = gravity * upstream * upstream;
            assert!(mass.abs() <= 8.0 * f64::EPSILON * bore * depth, "mass {mass}");
            assert!(momentum.abs() <= 32.0 * f64::EPSILON * size, "momentum {momentum}");
            let invariant = velocity + 2.0 * (gravity * depth).sqrt() - 2.0 * (gravity * upstream).sqrt();
            assert!(invariant.abs() <= 8.0 * f64::EPSILON * size.sqrt(), "invariant {invariant}");
        }
    }

    /// Ritter: at the dam the depth is 4/9 of the upstream depth and the velocity 2/3 of the celerity.
    #[test]
    fn dry_bed_agrees_with_ritter_at_the_dam() {
        let dam = DamBreak::new(1.7, 0.0, 9.81, 0.4, 0.1).unwrap();
        let sample = dam.sample(0.3, 0.4).unwrap();
        let celerity = (9.81_f64 * 1.7).sqrt();
        assert!((sample.value[0] - 4.0 / 9.0 * 1.7).abs() <= 4.0 * f64::EPSILON);
        assert!((sample.value[1] / sample.value[0] - 2.0 / 3.0 * celerity).abs() <= 8.0 * f64::EPSILON * celerity);
        assert_eq!(dam.breaks(0.3).len(), 2);
        assert_eq!(dam.sample(0.3, 0.4 + 2.1 * 0.2 * celerity).unwrap().value, [0.0; 3]);
    }

    #[test]
    fn refuses_depths_that_are_no_dam() {
        assert!(DamBreak::new(1.0, 1.0, 9.81, 0.0, 0.0).is_err());
        assert!(DamBreak::new(1.0, -0.1, 9.81, 0.0, 0.0).is_err());
        let dam = DamBreak::new(1.0, 0.0, 9.81, 0.0, 0.5).unwrap();
        assert!(matches!(dam.sample(0.2, 0.0), Err(ExactError::Time { .. })));
    }
}
