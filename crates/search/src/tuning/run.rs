//! A search under way: generation by generation, each kept before the next begins.

use std::collections::HashMap;
use std::sync::Mutex;

use serde::{Deserialize, Serialize};

use super::{Fineness, Judge, Ledger, TuningError, Verdict};
use crate::optimiser::{Objective, Plan, Score, Search};

/// A search under way, with all it needs to go on to the same bits.
#[derive(Debug, Clone, Serialize, Deserialize)]
pub struct Run {
    search: Search,
    ledger: Ledger,
    generation: usize,
}

/// A candidate that was tried.
#[derive(Debug, Clone, PartialEq)]
pub struct Tried {
    /// From 1.
    pub evaluation: usize,
    /// From 1.
    pub generation: usize,
    /// What it came to, with a coarse look at the loads.
    pub verdict: Verdict,
}

/// Where a search is kept.
pub trait Store {
    /// Why something couldn't be kept.
    type Error;

    /// Keeps what a generation tried, and the run after it.
    ///
    /// - `improved`: whether the best is among them
    ///
    /// # Errors
    ///
    /// Where it can't; what was kept before must then still be whole.
    fn keep(&mut self, tried: &[Tried], run: &Run, improved: bool) -> Result<(), Self::Error>;
}

/// How a search ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Ended {
    /// There is nothing left to try.
    Done,
    /// It was asked to stop.
    Stopped,
}

impl Run {
    /// A search that has tried nothing yet, and begins at the design's own numbers.
    ///
    /// # Errors
    ///
    /// Where the search can't begin.
    pub fn new(judge: &Judge, evaluations: usize) -> Result<Self, TuningError> {
        Self::planned(judge, Plan::new(judge.start(), evaluations, judge.seed()))
    }

    pub(crate) fn planned(judge: &Judge, plan: Plan) -> Result<Self, TuningError> {
        let ledger = Ledger::new(judge.limits().len());
        Ok(Self { search: Search::new(plan)?, ledger, generation: 0 })
    }

    /// What it has found.
    pub fn ledger(&self) -> &Ledger {
        &self.ledger
    }

    /// Whether there is nothing left to try.
    pub fn is_over(&self) -> bool {
        self.search.is_over()
    }

    /// Whether it could be of this judge: as many numbers vary, and as much is required.
    pub fn is_of(&self, judge: &Judge) -> bool {
        let varied = self.search.plan().start.len();
        varied == judge.varied().len() && self.ledger.limits() == judge.limits().len()
    }

    /// All of it, to be read again by [`Run::from_bytes`].
    pub fn to_bytes(&self) -> Vec<u8> {
        postcard::to_stdvec(self).expect("numbers and lists are always written")
    }

    /// A run that was written; none where these bytes are no run.
    pub fn from_bytes(bytes: &[u8]) -> Option<Self> {
        postcard::from_bytes(bytes).ok()
    }

    /// Searches until there is nothing left to try, or until it is asked to stop.
    ///
    /// - `stop`: asked after every generation
    ///
    /// # Errors
    ///
    /// What kept a generation from being kept.
    pub fn go_on<S: Store>(
        &mut self,
        judge: &Judge,
        store: &mut S,
        stop: &dyn Fn() -> bool,
    ) -> Result<Ended, S::Error> {
        while !self.is_over() {
            let (tried, improved) = self.next(judge);
            store.keep(&tried, self, improved)?;
            if stop() && !self.is_over() {
                return Ok(Ended::Stopped);
            }
        }
        Ok(Ended::Done)
    }

    /// One generation.
    fn next(&mut self, judge: &Judge) -> (Vec<Tried>, bool) {
        let trying = Trying { judge, verdicts: Mutex::default() };
        let generation = self.search.advance(&trying);
        let mut verdicts = trying.verdicts.into_inner().expect("no thread panicked");
        self.generation += 1;
        let (mut tried, mut improved) = (Vec::new(), false);
        for (unit, _) in &generation.candidates {
            let verdict = match verdicts.remove(&bits(unit)) {
                Some(verdict) => verdict,
                // The same candidate twice.
                None => judge.judge(judge.values(unit), Fineness::Coarse),
            };
            improved |= self.ledger.note(judge, &verdict);
            let (evaluation, generation) = (self.ledger.tried(), self.generation);
            tried.push(Tried { evaluation, generation, verdict });
        }
        (tried, improved)
    }
}

/// The judge as an objective that remembers what it said.
struct Trying<'a> {
    judge: &'a Judge,
    verdicts: Mutex<HashMap<Vec<u64>, Verdict>>,
}

impl Objective for Trying<'_> {
    fn n(&self) -> usize {
        self.judge.varied().len()
    }

    fn score(&self, unit: &[f64]) -> Score {
        let verdict = self.judge.judge(self.judge.values(unit), Fineness::Coarse);
        let score = verdict.score(self.judge.wish().maximise);
        self.verdicts.lock().expect("no thread panicked").insert(bits(unit), verdict);
        score
    }
}

fn bits(unit: &[f64]) -> Vec<u64> {
    unit.iter().map(|value| value.to_bits()).collect()
}
