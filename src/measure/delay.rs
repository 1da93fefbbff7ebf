//! Half-swing delay of a driver, a distributed line and a load.
//!
//! 0.69 R_d (C l + C_L) + 0.38 R C l² + 0.69 R l C_L: ln 2 for what charges through one
//! resistance, 0.38 for the open distributed line, added up as in Elmore, J. Appl. Phys. 19, 55
//! (1948). Against a ladder of many sections the sum is within 8 % for any driver and load.

/// A net as its delay sees it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Driven {
    /// Length of the line, µm.
    pub length_um: f64,
    /// Resistance of the line, ohm/µm.
    pub resistance_ohm_per_um: f64,
    /// Capacitance of the line, aF/µm.
    pub capacitance_af_per_um: f64,
    /// Resistance of the driver, ohm.
    pub driver_ohm: f64,
    /// Capacitance of the load, aF.
    pub load_af: f64,
}

/// Delay to half of the swing, in ps.
pub fn delay_ps(net: &Driven) -> f64 {
    /// ps in one ohm aF.
    const PS_PER_OHM_AF: f64 = 1e-6;
    let resistance = net.resistance_ohm_per_um * net.length_um;
    let capacitance = net.capacitance_af_per_um * net.length_um;
    let through_driver = 0.69 * net.driver_ohm * (capacitance + net.load_af);
    let along_line = 0.38 * resistance * capacitance + 0.69 * resistance * net.load_af;
    (through_driver + along_line) * PS_PER_OHM_AF
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Far end of an open distributed line after a step, t in R C: the classical series.
    fn open_line(t: f64) -> f64 {
        let term = |k: u32| {
            let odd = f64::from(2 * k + 1);
            let rate = (odd * std::f64::consts::FRAC_PI_2).powi(2);
            let sign = if k.is_multiple_of(2) { 1.0 } else { -1.0 };
            sign * 4.0 / (odd * std::f64::consts::PI) * (-rate * t).exp()
        };
        1.0 - (0..200).map(term).sum::<f64>()
    }

    /// t50 0.37875 R C and t90 1.03110 R C of the series; 0.38 is the first, rounded.
    #[test]
    fn an_open_line_takes_the_time_of_its_series() {
        assert!((open_line(0.37875) - 0.5).abs() < 1e-5);
        assert!((open_line(1.03110) - 0.9).abs() < 1e-5);
        let line = Driven {
            length_um: 100.0,
            resistance_ohm_per_um: 20.0,
            capacitance_af_per_um: 200.0,
            driver_ohm: 0.0,
            load_af: 0.0,
        };
        // R C = 2 kohm · 20 fF = 40 ps.
        assert!((delay_ps(&line) / (0.37875 * 40.0) - 1.0).abs() < 0.004);
    }

    /// Far end of driver, line (many sections) and load by implicit steps: time to half swing, in
    /// units of the line's R C; `driver` over R, `load` over C.
    fn ladder(driver: f64, load: f64) -> f64 {
        const SECTIONS: usize = 100;
        let (r, c) = (1.0 / SECTIONS as f64, 1.0 / SECTIONS as f64);
        let whole = 0.69 * driver * (1.0 + load) + 0.38 + 0.69 * load;
        let dt = whole / 4000.0;
        // Nodes 0..=SECTIONS with half a section of capacitance at both ends.
        let capacitance = |node: usize| match node {
            0 => c / 2.0,
            SECTIONS => c / 2.0 + load,
            _ => c,
        };
        let first = 1.0 / driver.max(1e-6);
        let mut voltage = [0.0; SECTIONS + 1];
        let mut time = 0.0;
        loop {
            // Backward Euler: a tridiagonal system, by the Thomas algorithm.
            let (mut upper, mut right) = ([0.0; SECTIONS + 1], [0.0; SECTIONS + 1]);
            for node in 0..=SECTIONS {
                let left_g = if node == 0 { first } else { 1.0 / r };
                let right_g = if node == SECTIONS { 0.0 } else { 1.0 / r };
                let mut diagonal = capacitance(node) / dt + left_g + right_g;
                let mut source = capacitance(node) / dt * voltage[node];
                if node == 0 {
                    source += left_g;
                } else {
                    diagonal -= left_g * upper[node - 1];
                    source += left_g * right[node - 1];
                }
                upper[node] = right_g / diagonal;
                right[node] = source / diagonal;
            }
            let before = voltage[SECTIONS];
            voltage[SECTIONS] = right[SECTIONS];
            for node in (0..SECTIONS).rev() {
                voltage[node] = right[node] + upper[node] * voltage[node + 1];
            }
            time += dt;
            if voltage[SECTIONS] >= 0.5 {
                return time - dt * (voltage[SECTIONS] - 0.5) / (voltage[SECTIONS] - before);
            }
        }
    }

    #[test]
    fn any_driver_and_load_is_near_the_ladder() {
        assert!((ladder(0.0, 0.0) - 0.37875).abs() < 2e-3);
        for driver in [0.0, 0.1, 0.5, 1.0, 5.0] {
            for load in [0.0, 0.1, 0.5, 1.0, 5.0] {
                let net = Driven {
                    length_um: 1.0,
                    resistance_ohm_per_um: 1.0,
                    capacitance_af_per_um: 1.0,
                    driver_ohm: driver,
                    load_af: load,
                };
                let ratio = delay_ps(&net) * 1e6 / ladder(driver, load);
                assert!((ratio - 1.0).abs() < 0.08, "{driver}, {load}: {ratio}");
            }
        }
    }
}
