/// Where an integration went, step by step: a polynomial of fourth order in each.
#[derive(Debug, Clone)]
pub(crate) struct Path {
    from_s: f64,
    /// Ends of steps, s.
    ends_s: Vec<f64>,
    length: usize,
    /// Five for each step, each as long as the state.
    coefficients: Vec<f64>,
}

/// Coefficients of a step.
const TERMS: usize = 5;

impl Path {
    /// - `length`: of the state
    pub(crate) fn new(from_s: f64, length: usize) -> Self {
        Self { from_s, ends_s: Vec::new(), length, coefficients: Vec::new() }
    }

    /// Adds a step.
    ///
    /// - `ends`: states where it begins and ends; `rates` likewise
    /// - `add_between`: adds the last term, which leaves both ends alone, to zeros
    ///
    /// # Source
    ///
    /// E. Hairer, S. P. Nørsett, G. Wanner, *Solving Ordinary Differential Equations I*, 1993, II.6.
    pub(crate) fn push(
        &mut self,
        step_s: f64,
        [from, to]: [&[f64]; 2],
        [from_rates, to_rates]: [&[f64]; 2],
        add_between: impl FnOnce(&mut [f64]),
    ) {
        self.ends_s.push(self.ends_s.last().unwrap_or(&self.from_s) + step_s);
        let begin = self.coefficients.len();
        let slope = |k: usize| to[k] - from[k];
        let bend = |k: usize| from_rates[k] * step_s - slope(k);
        let twist = |k: usize| slope(k) - to_rates[k] * step_s - bend(k);
        self.coefficients.extend_from_slice(from);
        self.coefficients.extend((0..self.length).map(slope));
        self.coefficients.extend((0..self.length).map(bend));
        self.coefficients.extend((0..self.length).map(twist));
        self.coefficients.resize(begin + TERMS * self.length, 0.0);
        add_between(&mut self.coefficients[begin + (TERMS - 1) * self.length..]);
    }

    /// State at a time; times outside the path give its ends.
    pub(crate) fn at(&self, time_s: f64) -> Vec<f64> {
        let step = self.ends_s.partition_point(|&end_s| end_s < time_s).min(self.ends_s.len() - 1);
        let begin_s = step.checked_sub(1).map_or(self.from_s, |before| self.ends_s[before]);
        let share = ((time_s - begin_s) / (self.ends_s[step] - begin_s)).clamp(0.0, 1.0);
        let rest = 1.0 - share;
        let begin = step * TERMS * self.length;
        let term = |which: usize, k: usize| self.coefficients[begin + which * self.length + k];
        let value = |k: usize| {
            let twisted = term(3, k) + rest * term(4, k);
            term(0, k) + share * (term(1, k) + rest * (term(2, k) + share * twisted))
        };
        (0..self.length).map(value).collect()
    }
}
