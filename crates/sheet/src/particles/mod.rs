//! Common particles of beams and final states.

mod table;

/// A particle of the table.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Particle {
    /// Name, as a sheet uses it.
    pub name: &'static str,
    /// Number in the Monte Carlo scheme of the Particle Data Group.
    pub pdg_number: i32,
    /// Mass, GeV.
    pub mass_gev: f64,
    /// Width, GeV; 0: stable, or a width that never shows.
    pub width_gev: f64,
    /// 2s.
    pub twice_spin: u8,
}

impl Particle {
    /// Number of spin states in an average: 2s+1, for a massless particle 2.
    #[must_use]
    pub fn spin_states(&self) -> u8 {
        if self.mass_gev == 0.0 {
            2
        } else {
            self.twice_spin + 1
        }
    }

    /// A charged lepton: radiates as the formula of Kuraev and Fadin has it.
    #[must_use]
    pub fn is_charged_lepton(&self) -> bool {
        matches!(self.pdg_number.abs(), 11 | 13 | 15)
    }
}

/// Every particle of the table.
#[must_use]
pub fn all() -> &'static [Particle] {
    table::TABLE
}

/// The particle of this name.
#[must_use]
pub fn find(name: &str) -> Option<&'static Particle> {
    let name = name.trim();
    table::TABLE.iter().find(|p| p.name == name)
}

#[cfg(test)]
mod tests {
    use super::*;
    use widthwise_core::units;

    #[test]
    fn names_are_unique_and_masses_agree_with_the_core() {
        for (i, p) in all().iter().enumerate() {
            assert!(
                all().iter().skip(i + 1).all(|q| q.name != p.name),
                "{}",
                p.name
            );
        }
        assert_eq!(find("e-").unwrap().mass_gev, units::M_ELECTRON_GEV);
        assert_eq!(find("mu+").unwrap().mass_gev, units::M_MUON_GEV);
        assert_eq!(find("pbar").unwrap().mass_gev, units::M_PROTON_GEV);
        assert_eq!(find("pi-").unwrap().mass_gev, units::M_PION_GEV);
    }

    /// The read-out of the PDG data was made by another script.
    #[test]
    fn the_table_agrees_with_the_separate_readout() {
        let text = include_str!("../../../../tests/reference/data/pdg2026_readout.csv");
        let rows = text.lines().filter(|l| !l.starts_with('#')).skip(1);
        let mut seen = 0;
        for row in rows {
            let cells: Vec<&str> = row.split(',').collect();
            let number: i32 = cells[1].parse().unwrap();
            let Some(p) = all().iter().find(|p| p.pdg_number == number) else {
                continue;
            };
            let mass_mev: f64 = cells[11].parse().unwrap();
            let width_mev: f64 = cells[13].parse().unwrap();
            assert!(
                (p.mass_gev * 1e3 / mass_mev - 1.0).abs() < 1e-12,
                "{}",
                p.name
            );
            assert!(
                (p.width_gev * 1e3 - width_mev).abs() <= 1e-12 * width_mev,
                "{}",
                p.name
            );
            let spin = match cells[2] {
                "0" => 0,
                "1/2" => 1,
                "1" => 2,
                "3/2" => 3,
                "2" => 4,
                other => panic!("spin {other}"),
            };
            assert_eq!(p.twice_spin, spin, "{}", p.name);
            seen += 1;
        }
        assert!(seen >= 20, "{seen}");
    }
}
