//! Fluxes between two states of a perfect gas. A state is (density, velocity, pressure); a flux is that of (density,
//! momentum, energy).

/// Density, velocity and pressure.
pub type Primitive = [f64; 3];

/// Density, momentum and total energy per volume.
pub type Conserved = [f64; 3];

/// A flux between the states left and right of a face, for the ratio of specific heats given first.
pub type EulerFlux = fn(f64, Primitive, Primitive) -> Conserved;

/// The conserved state.
pub fn conserved(gamma: f64, [density, velocity, pressure]: Primitive) -> Conserved {
    [density, density * velocity, pressure / (gamma - 1.0) + 0.5 * density * velocity * velocity]
}

/// The primitive state.
pub fn primitive(gamma: f64, [density, momentum, energy]: Conserved) -> Primitive {
    let velocity = momentum / density;
    [density, velocity, (gamma - 1.0) * (energy - 0.5 * momentum * velocity)]
}

/// The flux of a state.
pub fn physical_flux(gamma: f64, state: Primitive) -> Conserved {
    let [_, velocity, pressure] = state;
    let [density, momentum, energy] = conserved(gamma, state);
    [density * velocity, momentum * velocity + pressure, (energy + pressure) * velocity]
}

/// The speed of sound.
pub fn sound_speed(gamma: f64, [density, _, pressure]: Primitive) -> f64 {
    (gamma * pressure / density).sqrt()
}

/// The mean flux with the largest signal speed of both sides as viscosity.
///
/// Source: Rusanov 1961, J. Comput. Math. Phys. USSR 1:267-279.
pub fn rusanov(gamma: f64, left: Primitive, right: Primitive) -> Conserved {
    let speed = (left[1].abs() + sound_speed(gamma, left)).max(right[1].abs() + sound_speed(gamma, right));
    let (fl, fr) = (physical_flux(gamma, left), physical_flux(gamma, right));
    let (ul, ur) = (conserved(gamma, left), conserved(gamma, right));
    std::array::from_fn(|k| 0.5 * (fl[k] + fr[k]) - 0.5 * speed * (ur[k] - ul[k]))
}

/// Two acoustic waves and a contact between them; exact for a lone contact.
///
/// Source: Toro, Spruce & Speares 1994, Shock Waves 4:25-34; signal speeds after Davis 1988, SIAM J. Sci. Stat.
/// Comput. 9:445-473.
pub fn hllc(gamma: f64, left: Primitive, right: Primitive) -> Conserved {
    let (al, ar) = (sound_speed(gamma, left), sound_speed(gamma, right));
    let slowest = (left[1] - al).min(right[1] - ar);
    let fastest = (left[1] + al).max(right[1] + ar);
    let (ml, mr) = (left[0] * (slowest - left[1]), right[0] * (fastest - right[1]));
    let contact = (right[2] - left[2] + left[1] * ml - right[1] * mr) / (ml - mr);
    let beside_contact = |state: Primitive, speed: f64| -> Conserved {
        let [density, velocity, pressure] = state;
        let [_, _, energy] = conserved(gamma, state);
        let factor = density * (speed - velocity) / (speed - contact);
        let star_energy =
            energy / density + (contact - velocity) * (contact + pressure / (density * (speed - velocity)));
        let star = [factor, factor * contact, factor * star_energy];
        let (flux, own) = (physical_flux(gamma, state), conserved(gamma, state));
        std::array::from_fn(|k| flux[k] + speed * (star[k] - own[k]))
    };
    if slowest >= 0.0 {
        physical_flux(gamma, left)
    } else if fastest <= 0.0 {
        physical_flux(gamma, right)
    } else if contact >= 0.0 {
        beside_contact(left, slowest)
    } else {
        beside_contact(right, fastest)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const GAMMA: f64 = 1.3;

    fn assert_close(a: Conserved, b: Conserved) {
        // A few tens of roundings of numbers below 10.
        assert!(a.iter().zip(b).all(|(a, b)| (a - b).abs() < 500.0 * f64::EPSILON), "{a:?} {b:?}");
    }

    #[test]
    fn fluxes_between_equal_states_are_the_physical_one() {
        for velocity in [-3.0, -0.4, 0.0, 0.4, 3.0] {
            let state = [1.2, velocity, 0.9];
            assert_close(hllc(GAMMA, state, state), physical_flux(GAMMA, state));
            assert_close(rusanov(GAMMA, state, state), physical_flux(GAMMA, state));
        }
    }

    #[test]
    fn a_moving_contact_is_resolved_exactly_by_hllc_alone() {
        for velocity in [0.4, -0.4] {
            let (left, right) = ([1.2, velocity, 0.9], [0.3, velocity, 0.9]);
            let upwind = if velocity > 0.0 { left } else { right };
            assert_close(hllc(GAMMA, left, right), physical_flux(GAMMA, upwind));
            let difference = rusanov(GAMMA, left, right)[0] - physical_flux(GAMMA, upwind)[0];
            assert!(difference.abs() > 0.1);
        }
    }

    #[test]
    fn mirrored_states_give_the_mirrored_flux() {
        let (left, right) = ([1.2, 0.3, 0.9], [0.5, -0.6, 1.4]);
        let mirror = |[density, velocity, pressure]: Primitive| [density, -velocity, pressure];
        for flux in [hllc as EulerFlux, rusanov] {
            let [mass, momentum, energy] = flux(GAMMA, left, right);
            assert_close(flux(GAMMA, mirror(right), mirror(left)), [-mass, momentum, -energy]);
        }
    }

    #[test]
    fn both_forms_of_a_state_lead_back_to_each_other() {
        let state = [1.2, -0.7, 0.9];
        assert_close(primitive(GAMMA, conserved(GAMMA, state)), state);
    }
}
