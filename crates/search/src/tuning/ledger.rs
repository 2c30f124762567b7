//! What a search has found: the best so far, and which limits were met, alone and together.

use serde::{Deserialize, Serialize};

use super::{Fineness, Judge, Verdict};

/// What a search has found so far.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Ledger {
    /// Best so far, judged finely: feasible, or the least infeasible while none is.
    best: Option<Verdict>,
    /// Which evaluation it was, from 1.
    best_at: usize,
    tried: usize,
    feasible: usize,
    unjudged: usize,
    /// How many met both of two limits; on the diagonal, one: shape (limits, limits).
    met: Vec<Vec<u32>>,
}

impl Ledger {
    pub(crate) fn new(limits: usize) -> Self {
        let met = vec![vec![0; limits]; limits];
        Self { best: None, best_at: 0, tried: 0, feasible: 0, unjudged: 0, met }
    }

    /// Best so far, judged finely; the least infeasible while nothing is feasible.
    pub fn best(&self) -> Option<&Verdict> {
        self.best.as_ref()
    }

    /// Which evaluation the best was, from 1.
    pub fn best_at(&self) -> usize {
        self.best_at
    }

    /// Candidates tried.
    pub fn tried(&self) -> usize {
        self.tried
    }

    /// Share of those tried that met everything, 0 to 1.
    pub fn feasible_share(&self) -> f64 {
        self.feasible as f64 / self.tried.max(1) as f64
    }

    /// How many of those tried couldn't be read, released or followed.
    pub fn unjudged(&self) -> usize {
        self.unjudged
    }

    pub(crate) fn limits(&self) -> usize {
        self.met.len()
    }

    /// How many of those tried met a limit.
    pub fn met(&self, limit: usize) -> u32 {
        self.met[limit][limit]
    }

    /// Pairs of limits of which each was met by some, but never both by the same.
    pub fn never_together(&self) -> Vec<(usize, usize)> {
        let all = 0..self.met.len();
        let pairs =
            all.clone().flat_map(|one| all.clone().skip(one + 1).map(move |two| (one, two)));
        let apart = |&(one, two): &(usize, usize)| {
            self.met(one) > 0 && self.met(two) > 0 && self.met[one][two] == 0
        };
        pairs.filter(apart).collect()
    }

    /// Puts down a candidate.
    ///
    /// - returns whether it is the best so far
    pub(crate) fn note(&mut self, judge: &Judge, verdict: &Verdict) -> bool {
        self.tried += 1;
        self.feasible += usize::from(verdict.is_feasible());
        self.unjudged += usize::from(verdict.violation.is_infinite());
        let limits = judge.limits().iter().zip(&verdict.limits);
        let met: Vec<bool> = limits.map(|(limit, value)| limit.miss(*value) == 0.0).collect();
        for (one, row) in self.met.iter_mut().enumerate() {
            for (two, count) in row.iter_mut().enumerate() {
                *count += u32::from(met[one] && met[two]);
            }
        }
        self.is_better(judge, verdict) && {
            let fine = judge.judge(verdict.values.clone(), Fineness::Fine);
            let better = self.is_better(judge, &fine);
            if better {
                (self.best, self.best_at) = (Some(fine), self.tried);
            }
            better
        }
    }

    fn is_better(&self, judge: &Judge, verdict: &Verdict) -> bool {
        let score = |verdict: &Verdict| verdict.score(judge.wish().maximise);
        let order = |best: &Verdict| score(verdict).order(&score(best));
        self.best.as_ref().is_none_or(|best| order(best).is_lt())
    }
}
