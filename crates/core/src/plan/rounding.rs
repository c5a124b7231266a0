//! From shares to whole dwell steps.

/// Efficient rounding of `shares` (each above 0) to `total` whole units:
/// Pukelsheim & Rieder, Biometrika 79 (1992) 763. With fewer units than shares the smallest shares get none.
#[must_use]
pub fn efficient(shares: &[f64], total: u32) -> Vec<u32> {
    let mut kept: Vec<usize> = (0..shares.len()).filter(|&i| shares[i] > 0.0).collect();
    kept.sort_by(|&a, &b| shares[b].total_cmp(&shares[a]).then(a.cmp(&b)));
    kept.truncate(total as usize);
    kept.sort_unstable();
    let sum: f64 = kept.iter().map(|&i| shares[i]).sum();
    let mut units = vec![0_u32; shares.len()];
    if kept.is_empty() {
        return units;
    }
    let share = |i: usize| shares[i] / sum;
    let free = f64::from(total) - 0.5 * kept.len() as f64;
    for &i in &kept {
        // A share that is whole but for rounding stays whole.
        units[i] = ((free * share(i)) - 1e-9).ceil().max(1.0) as u32;
    }
    loop {
        let used: u32 = units.iter().sum();
        let step = if used < total {
            kept.iter().copied().min_by(|&a, &b| {
                (f64::from(units[a]) / share(a)).total_cmp(&(f64::from(units[b]) / share(b)))
            })
        } else if used > total {
            kept.iter().copied().max_by(|&a, &b| {
                ((f64::from(units[a]) - 1.0) / share(a))
                    .total_cmp(&((f64::from(units[b]) - 1.0) / share(b)))
            })
        } else {
            return units;
        };
        match step {
            Some(i) if used < total => units[i] += 1,
            Some(i) => units[i] -= 1,
            None => return units,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    /// Pukelsheim & Rieder's example (shares .5, .3, .2 to 7 units).
    #[test]
    fn published_example() {
        assert_eq!(efficient(&[0.5, 0.3, 0.2], 7), vec![3, 2, 2]);
    }

    proptest! {
        /// The sum is kept, nothing with a share is lost while units last, and the efficiency
        /// bound min n_i/(N w_i) is at least 1 - l/N (Pukelsheim & Rieder, theorem).
        #[test]
        fn keeps_its_bound(weights in prop::collection::vec(0.01_f64..1.0, 1..8), extra in 0_u32..60) {
            let l = weights.len() as u32;
            let total = l + extra;
            let units = efficient(&weights, total);
            prop_assert_eq!(units.iter().sum::<u32>(), total);
            let sum: f64 = weights.iter().sum();
            for (n, w) in units.iter().zip(&weights) {
                prop_assert!(*n >= 1);
                let bound = f64::from(*n) / (f64::from(total) * w / sum);
                prop_assert!(bound >= 1.0 - f64::from(l) / f64::from(total) - 1e-9);
            }
        }
    }
}
