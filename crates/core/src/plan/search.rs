//! A good timetable: rounded starts, then exchange of dwell steps until nothing improves.
//!
//! With settle times and fills the problem is not convex. The order inside a window needs no
//! search: a run straight through the energies visits them with the least settling (settle
//! times grow with the size of a step), so only its direction is chosen.

use super::rounding::efficient;
use super::timetable::{Judge, Row, Stretch, Visit};

/// Shares of the relaxed optimum at separate energies: runs of adjacent candidates are one.
pub(crate) fn clusters(hours: &[f64]) -> Vec<(usize, f64)> {
    let total: f64 = hours.iter().sum();
    let mut out: Vec<(usize, f64)> = Vec::new();
    let mut heaviest = 0.0;
    let mut last = None;
    for (j, &t) in hours.iter().enumerate() {
        let share = t / total;
        if share < 2e-3 {
            continue;
        }
        match out.last_mut() {
            Some(open) if last == Some(j.wrapping_sub(1)) => {
                open.1 += share;
                if share > heaviest {
                    heaviest = share;
                    open.0 = j;
                }
            }
            _ => {
                out.push((j, share));
                heaviest = share;
            }
        }
        last = Some(j);
    }
    out
}

/// Score of a draft: unmet demands first, then the criterion, then the hours of settling (time
/// saved lets a later move add a dwell step); smaller is better.
#[derive(Clone, Copy, PartialEq)]
struct Score(f64, f64, f64);

impl Score {
    fn better_than(self, other: Self) -> bool {
        if self.0 != other.0 {
            return self.0 < other.0;
        }
        let gain = other.1 - self.1;
        gain > 1e-12 || (gain > -1e-12 && self.2 < other.2 - 1e-9)
    }
}

/// What a search found.
pub(crate) struct Found {
    pub draft: Vec<Stretch>,
    /// phi over the truths used in the search.
    pub value: f64,
    /// Demands that could not be met, in units; 0 if none.
    pub shortfall: f64,
}

/// Starts that are improved, the best ones first.
const STARTS: usize = 5;

/// The best of several starts after local exchange. `budget` bounds the drafts judged per start.
/// `known` is a draft to start from as well (empty: none), so that a search never ends below it.
pub(crate) fn search(
    judge: &Judge<'_>,
    relaxed_hours: &[f64],
    known: &[Stretch],
    budget: usize,
) -> Option<Found> {
    let support = clusters(relaxed_hours);
    let mut pool: Vec<usize> = support.iter().map(|c| c.0).collect();
    let n = judge.w_gev.len();
    pool.extend(judge.demands.reference);
    // A few energies all over the window, so that flanks, off-resonance and distinctness can be met.
    let coarse = 9.min(n);
    pool.extend((0..coarse).map(|i| i * (n - 1) / (coarse - 1).max(1)));
    pool.sort_unstable();
    pool.dedup();
    let mut best: Option<(Score, Vec<Stretch>)> = None;
    let total: f64 = relaxed_hours.iter().sum();
    // Where candidates are few, adjacent ones are not the same energy.
    let apart: Vec<(usize, f64)> = (0..n)
        .map(|j| (j, relaxed_hours[j] / total))
        .filter(|c| c.1 > 2e-3)
        .collect();
    let mut all = Vec::new();
    if !known.is_empty() {
        all.push(known.to_vec());
    }
    let mut supports = vec![support.clone(), apart.clone()];
    // A least dwell and its settling may make one energy less the better design.
    for without in 0..support.len().min(8) {
        let mut fewer = support.clone();
        fewer.remove(without);
        supports.push(fewer);
    }
    for raise in [false, true] {
        for s in &supports {
            all.extend(starts(judge, s, raise));
        }
    }
    let mut scored: Vec<(Score, Vec<Stretch>)> = Vec::new();
    for start in all {
        if let Some(s) = score(judge, &start, true)
            && !scored.iter().any(|other| other.1 == start)
        {
            scored.push((s, start));
        }
    }
    scored.sort_by(|a, b| a.0.0.total_cmp(&b.0.0).then(a.0.1.total_cmp(&b.0.1)));
    scored.truncate(STARTS);
    for (_, start) in scored {
        let Some((_, roomy)) = improve(judge, start, &pool, budget / 2, true) else {
            continue;
        };
        let Some(found) = improve(judge, roomy, &pool, budget / 2, false) else {
            continue;
        };
        if best.as_ref().is_none_or(|b| found.0.better_than(b.0)) {
            best = Some(found);
        }
    }
    best.map(|(score, draft)| Found {
        draft,
        value: score.1,
        shortfall: score.0,
    })
}

/// Score of a draft; with `filled`, as if the time left over in each window were shared out in
/// proportion, so that what saves settling is seen before it makes up a whole dwell step.
fn score(judge: &Judge<'_>, draft: &[Stretch], filled: bool) -> Option<Score> {
    let mut rows = judge.rows(draft)?;
    if filled {
        fill_up(judge, &mut rows);
    }
    let settle_h = rows.iter().map(|r| r.settle_h).sum();
    Some(Score(judge.shortfall(draft), judge.value(&rows), settle_h))
}

fn fill_up(judge: &Judge<'_>, rows: &mut [Row]) {
    for (fill, window) in judge.windows.iter().enumerate() {
        let (mut live, mut settle) = (0.0, 0.0);
        for row in rows.iter().filter(|r| r.fill == fill) {
            live += row.live_h;
            settle += row.settle_h;
        }
        let factor = (window.end_h - window.start_h - settle) / live;
        if live > 0.0 {
            for row in rows.iter_mut().filter(|r| r.fill == fill) {
                row.live_h *= factor;
                row.bright_h *= factor;
            }
        }
    }
}

fn starts(judge: &Judge<'_>, support: &[(usize, f64)], raise: bool) -> Vec<Vec<Stretch>> {
    let step = judge.machine.dwell_step_h;
    let least = judge.machine.least_units();
    let falling = judge.machine.one_way == Some(false);
    let capacity: Vec<u32> = judge
        .windows
        .iter()
        .map(|w| (((w.end_h - w.start_h) / step) + 1e-9).floor() as u32)
        .collect();
    // Each window a copy of the whole design, as far as least dwells allow.
    let whole: Vec<Stretch> = capacity
        .iter()
        .map(|&units| Stretch {
            visits: rounded(support, units, least, raise),
            falling,
        })
        .collect();
    // The design once, poured window by window from the lowest energy up.
    let mut poured: Vec<Stretch> = capacity
        .iter()
        .map(|_| Stretch {
            visits: Vec::new(),
            falling,
        })
        .collect();
    let mut queue = rounded(support, capacity.iter().sum(), least, raise).into_iter();
    let mut open = queue.next();
    for (stretch, &units) in poured.iter_mut().zip(&capacity) {
        let mut left = units;
        while let Some(visit) = open {
            if left < least {
                break;
            }
            let take = visit.units.min(left);
            stretch.visits.push(Visit {
                candidate: visit.candidate,
                units: take,
            });
            left -= take;
            let rest = visit.units - take;
            open = if rest >= least {
                Some(Visit {
                    candidate: visit.candidate,
                    units: rest,
                })
            } else {
                queue.next()
            };
        }
    }
    // The design once, dealt out like cards so that every window sees the whole range.
    let mut dealt: Vec<Stretch> = poured
        .iter()
        .map(|s| Stretch {
            visits: Vec::new(),
            falling: s.falling,
        })
        .collect();
    for (i, visit) in rounded(support, capacity.iter().sum(), least, raise)
        .into_iter()
        .enumerate()
    {
        let mut left = visit.units;
        let windows = dealt.len();
        for turn in 0..windows {
            let k = (i + turn) % windows;
            let used: u32 = dealt[k].visits.iter().map(|v| v.units).sum();
            let take = left.min(capacity[k].saturating_sub(used));
            if take >= least {
                dealt[k].visits.push(Visit {
                    candidate: visit.candidate,
                    units: take,
                });
                left -= take;
            }
            if left < least {
                break;
            }
        }
    }
    let mut list = vec![whole];
    if capacity.len() > 1 {
        list.push(poured);
        list.push(dealt);
    }
    if judge.machine.one_way.is_none() {
        let turned: Vec<Vec<Stretch>> = list
            .iter()
            .map(|draft| {
                draft
                    .iter()
                    .map(|s| Stretch {
                        visits: s.visits.clone(),
                        falling: true,
                    })
                    .collect()
            })
            .collect();
        list.extend(turned);
    }
    for draft in &mut list {
        shrink_to_fit(judge, draft);
    }
    list
}

/// Whole visits of at least `least` units from shares. What would be shorter is raised to that
/// at the expense of the longest, or goes, the smallest share first, while that cannot be had.
fn rounded(support: &[(usize, f64)], units: u32, least: u32, raise: bool) -> Vec<Visit> {
    let mut kept = support.to_vec();
    while !kept.is_empty() && units >= least {
        let shares: Vec<f64> = kept.iter().map(|c| c.1).collect();
        let mut counts = efficient(&shares, units);
        if raise && units >= least * kept.len() as u32 {
            while let Some(i) = counts.iter().position(|&c| c < least) {
                let Some(longest) = (0..counts.len()).max_by_key(|&k| counts[k]) else {
                    break;
                };
                counts[longest] -= 1;
                counts[i] += 1;
            }
        }
        let short = (0..kept.len())
            .filter(|&i| counts[i] < least)
            .min_by(|&a, &b| shares[a].total_cmp(&shares[b]));
        match short {
            Some(i) if kept.len() > 1 => {
                kept.remove(i);
            }
            _ => {
                return kept
                    .iter()
                    .zip(&counts)
                    .map(|(c, &units)| Visit {
                        candidate: c.0,
                        units,
                    })
                    .collect();
            }
        }
    }
    Vec::new()
}

/// Takes units from the largest visits until every window holds its settling.
fn shrink_to_fit(judge: &Judge<'_>, draft: &mut [Stretch]) {
    let least = judge.machine.least_units();
    for k in 0..draft.len() {
        loop {
            let mut alone: Vec<Stretch> = draft[..=k].to_vec();
            for earlier in &mut alone[..k] {
                // Only the last energy of the windows before matters here.
                let keep = if earlier.falling {
                    0
                } else {
                    earlier.visits.len().saturating_sub(1)
                };
                earlier.visits = earlier.visits.get(keep).copied().into_iter().collect();
            }
            if judge.rows(&alone).is_some() || draft[k].visits.is_empty() {
                break;
            }
            let visits = &mut draft[k].visits;
            let largest = (0..visits.len()).max_by_key(|&i| (visits[i].units, usize::MAX - i));
            let smallest = (0..visits.len()).min_by_key(|&i| (visits[i].units, i));
            match (largest, smallest) {
                (Some(i), _) if visits[i].units > least => visits[i].units -= 1,
                (_, Some(i)) => {
                    visits.remove(i);
                }
                _ => break,
            }
        }
    }
}

/// Adds `units` at `candidate`, keeping the order.
fn put(stretch: &mut Stretch, candidate: usize, units: u32) {
    match stretch
        .visits
        .binary_search_by_key(&candidate, |v| v.candidate)
    {
        Ok(i) => stretch.visits[i].units += units,
        Err(i) => stretch.visits.insert(i, Visit { candidate, units }),
    }
}

/// Takes `units` from `candidate`; false if that would leave less than a least dwell.
fn take(stretch: &mut Stretch, candidate: usize, units: u32, least: u32) -> bool {
    let Ok(i) = stretch
        .visits
        .binary_search_by_key(&candidate, |v| v.candidate)
    else {
        return false;
    };
    let have = stretch.visits[i].units;
    if have == units {
        stretch.visits.remove(i);
        true
    } else if have >= units + least {
        stretch.visits[i].units -= units;
        true
    } else {
        false
    }
}

/// One change of a draft.
#[derive(Clone, Copy)]
enum Move {
    /// One more unit.
    Grow(usize, usize),
    /// Units from one visit to a candidate of a window; `lost` more make room for settling,
    /// `won` are added because less has to settle.
    Carry {
        from: (usize, usize),
        units: u32,
        lost: u32,
        won: u32,
        to: (usize, usize),
    },
    /// The energies of two visits change places.
    Swap((usize, usize), (usize, usize)),
    /// A new visit of the least dwell.
    Insert(usize, usize),
    /// The other direction.
    Turn(usize),
    /// Nothing in this window (a stub of a fill that cannot hold what every fill must).
    Clear(usize),
}

fn apply(draft: &[Stretch], change: Move, least: u32) -> Option<Vec<Stretch>> {
    let mut next = draft.to_vec();
    match change {
        Move::Grow(k, c) => put(&mut next[k], c, 1),
        Move::Insert(k, c) => put(&mut next[k], c, least),
        Move::Turn(k) => next[k].falling = !next[k].falling,
        Move::Clear(k) => next[k].visits.clear(),
        Move::Carry {
            from,
            units,
            lost,
            won,
            to,
        } => {
            if from == to || !take(&mut next[from.0], from.1, units + lost, least) {
                return None;
            }
            put(&mut next[to.0], to.1, units + won);
            let at = next[to.0]
                .visits
                .binary_search_by_key(&to.1, |v| v.candidate)
                .ok()?;
            if next[to.0].visits[at].units < least {
                return None;
            }
        }
        Move::Swap(a, b) => {
            let units = |s: &[Stretch], (k, c): (usize, usize)| {
                s[k].visits
                    .iter()
                    .find(|v| v.candidate == c)
                    .map(|v| v.units)
            };
            let (ua, ub) = (units(&next, a)?, units(&next, b)?);
            take(&mut next[a.0], a.1, ua, least);
            take(&mut next[b.0], b.1, ub, least);
            put(&mut next[a.0], b.1, ua);
            put(&mut next[b.0], a.1, ub);
        }
    }
    Some(next)
}

fn moves(judge: &Judge<'_>, draft: &[Stretch], pool: &[usize]) -> Vec<Move> {
    let n = judge.w_gev.len();
    let least = judge.machine.least_units();
    let visits: Vec<(usize, Visit)> = draft
        .iter()
        .enumerate()
        .flat_map(|(k, s)| s.visits.iter().map(move |v| (k, *v)))
        .collect();
    // Dwell steps that the longest single change of energy costs.
    let span = judge.w_gev.first().zip(judge.w_gev.last());
    let longest_h = span.map_or(0.0, |(a, b)| {
        judge
            .machine
            .settle_h(*a, *b)
            .max(judge.machine.settle_h(*b, *a))
    });
    let settling = (longest_h / judge.machine.dwell_step_h).ceil().min(1e3) as u32;
    let mut list = Vec::new();
    for &(k, v) in &visits {
        list.push(Move::Grow(k, v.candidate));
    }
    for &(k, v) in &visits {
        let mut reach = 1;
        while reach < n {
            for to in [v.candidate.checked_sub(reach), Some(v.candidate + reach)] {
                if let Some(to) = to.filter(|&t| t < n) {
                    list.push(Move::Carry {
                        from: (k, v.candidate),
                        units: v.units,
                        lost: 0,
                        won: 0,
                        to: (k, to),
                    });
                }
            }
            reach *= 2;
        }
    }
    for &(k, v) in &visits {
        for &(g, u) in &visits {
            for units in [1, v.units / 2, v.units] {
                if units > 0 {
                    list.push(Move::Carry {
                        from: (k, v.candidate),
                        units,
                        lost: 0,
                        won: 0,
                        to: (g, u.candidate),
                    });
                }
            }
            for won in [1, settling] {
                if won > 0 {
                    list.push(Move::Carry {
                        from: (k, v.candidate),
                        units: v.units,
                        lost: 0,
                        won,
                        to: (g, u.candidate),
                    });
                }
            }
            if g > k && u.candidate != v.candidate {
                list.push(Move::Swap((k, v.candidate), (g, u.candidate)));
            }
        }
        for g in 0..draft.len() {
            for &c in pool {
                for lost in [0, 1, settling] {
                    list.push(Move::Carry {
                        from: (k, v.candidate),
                        units: least,
                        lost,
                        won: 0,
                        to: (g, c),
                    });
                }
                list.push(Move::Carry {
                    from: (k, v.candidate),
                    units: v.units,
                    lost: 0,
                    won: 0,
                    to: (g, c),
                });
            }
        }
    }
    for (k, stretch) in draft.iter().enumerate() {
        list.extend(pool.iter().map(|&c| Move::Insert(k, c)));
        list.push(Move::Clear(k));
        if judge.machine.one_way.is_none() && !stretch.visits.is_empty() {
            list.push(Move::Turn(k));
        }
    }
    list
}

fn improve(
    judge: &Judge<'_>,
    start: Vec<Stretch>,
    pool: &[usize],
    budget: usize,
    filled: bool,
) -> Option<(Score, Vec<Stretch>)> {
    let least = judge.machine.least_units();
    let mut draft = start;
    let mut best = score(judge, &draft, filled)?;
    let mut judged = 0;
    loop {
        let mut improved = false;
        for change in moves(judge, &draft, pool) {
            // Earlier accepted changes may have removed what this one speaks of: `apply` says so.
            let Some(next) = apply(&draft, change, least) else {
                continue;
            };
            judged += 1;
            if let Some(s) = score(judge, &next, filled)
                && s.better_than(best)
            {
                best = s;
                draft = next;
                improved = true;
            }
            if judged >= budget {
                return Some((best, draft));
            }
        }
        if !improved {
            return Some((best, draft));
        }
    }
}
