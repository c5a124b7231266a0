//! Goals in words.

use crate::check::{GoalReading, Wanted};
use crate::doc::Sheet;
use crate::requests::parameter;
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::plan::goal::Goal;
use widthwise_core::scan::Scan;

/// "r1.mass", "r1.strength / r1.width", "r2.mass - r1.mass": ids between `*` and `/`, or `+` and `-`.
pub(super) fn goal(sheet: &Sheet, scan: &Scan, reading: &GoalReading, i: usize) -> Answer<Goal> {
    let text = &reading.quantity;
    let wrong = || {
        Refusal::new(
            format!("plan.goals[{i}].quantity"),
            text,
            "a parameter, or parameters between * and /, or between + and -, with spaces: r2.mass - r1.mass",
            "this goal is not understood",
        )
    };
    let words: Vec<&str> = text.split_whitespace().collect();
    let mut terms = Vec::new();
    let (mut sum, mut product) = (false, false);
    let mut factor = 1.0;
    for (k, word) in words.iter().enumerate() {
        if k % 2 == 0 {
            terms.push(((*word).to_string(), factor));
            continue;
        }
        (factor, sum, product) = match *word {
            "+" => (1.0, true, product),
            "-" => (-1.0, true, product),
            "*" => (1.0, sum, true),
            "/" => (-1.0, sum, true),
            _ => return Err(wrong()),
        };
    }
    if words.len().is_multiple_of(2) || (sum && product) {
        return Err(wrong());
    }
    let mut goal = Goal {
        name: text.clone(),
        terms,
        sum,
        wanted_error: None,
        weight: reading.weight,
    };
    goal.wanted_error = match reading.wanted {
        Some(Wanted::Relative(relative)) => Some(relative * goal.value(scan)?.abs()),
        Some(Wanted::Absolute(error, dimension)) => {
            let own = goal
                .terms
                .first()
                .and_then(|t| parameter::find(sheet, &t.0).ok());
            if (goal.terms.len() > 1 && !goal.sum) || own.is_none_or(|p| p.dimension != dimension) {
                return Err(Refusal::new(
                    format!("plan.goals[{i}].wanted"),
                    format!("{error} {}", dimension.core_unit()),
                    "an error in the quantity's own unit, or a relative one such as 2 %",
                    format!("this error does not measure {text}"),
                ));
            }
            Some(error)
        }
        None => None,
    };
    Ok(goal)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::check;
    use crate::quantity::Dimension;

    fn reading(quantity: &str) -> GoalReading {
        GoalReading {
            quantity: quantity.into(),
            wanted: None,
            weight: 1.0,
        }
    }

    fn sheet() -> Sheet {
        crate::demos::open("saltmere").unwrap()
    }

    fn scan() -> Scan {
        check::understand(&sheet()).scan().unwrap()
    }

    #[test]
    fn goals_in_words() {
        let ratio = goal(&sheet(), &scan(), &reading("r1.strength / r1.width"), 0).unwrap();
        assert!(!ratio.sum && ratio.terms[1] == ("r1.width".to_string(), -1.0));
        let splitting = goal(&sheet(), &scan(), &reading("r2.mass - r1.mass"), 0).unwrap();
        assert!(splitting.sum && splitting.terms[1].1 == -1.0);
        for nonsense in [
            "",
            "r1.mass r1.width",
            "r1.mass -",
            "r1.mass / r1.width + r1.mass",
        ] {
            assert!(
                goal(&sheet(), &scan(), &reading(nonsense), 0).is_err(),
                "{nonsense}"
            );
        }
    }

    /// An error is typed in the quantity's own unit or as a share of it.
    #[test]
    fn wanted_errors_have_the_unit_of_their_quantity() {
        let with = |quantity: &str, wanted| GoalReading {
            wanted: Some(wanted),
            ..reading(quantity)
        };
        let relative = goal(
            &sheet(),
            &scan(),
            &with("r1.width", Wanted::Relative(0.1)),
            0,
        );
        assert!((relative.unwrap().wanted_error.unwrap() - 0.062e-3).abs() < 1e-12);
        let phase = Wanted::Absolute(0.05, Dimension::Angle);
        let found = goal(&sheet(), &scan(), &with("coherent.phase", phase), 0).unwrap();
        assert_eq!(found.wanted_error, Some(0.05));
        assert!(goal(&sheet(), &scan(), &with("r1.mass", phase), 0).is_err());
        assert!(goal(&sheet(), &scan(), &with("r1.strength / r1.width", phase), 0).is_err());
    }
}
