//! A search as scripts read it.

use serde_json::{Map, Value, json};
use undulift_search::tuning::{Bound, Held, Limit, Origin, Verdict};

use super::Told;
use crate::json as whole;

pub fn object(told: &Told<'_>) -> Value {
    let Told { judge, run, record, closing, folder } = told;
    let ledger = run.ledger();
    let mut object = whole::heading(judge.design());
    let mut put = |key: &str, value: Value| object.insert(key.into(), value);
    let wish = judge.wish();
    let way = if wish.maximise { "maximise" } else { "minimise" };
    put("want", json!({ way: wish.key }));
    put("seed", json!(record.seed));
    put("evaluations", json!(ledger.tried()));
    put("launches", json!(judge.launches()));
    put("feasible_share", json!(ledger.feasible_share()));
    put("feasible", json!(closing.after.is_feasible()));
    put("best_evaluation", json!(ledger.best_at()));
    put("before", verdict(told, &closing.before));
    put("best", verdict(told, &closing.after));
    put("limits", judge.limits().iter().map(limit).collect());
    put("slopes", slopes(told));
    put("active", active(told));
    put("settled_within", json!(closing.settled_within));
    put("local_evaluations", json!(closing.local_evaluations));
    let columns = Limit::columns(judge.limits());
    let met = columns.iter().enumerate().map(|(idx, key)| (key.clone(), json!(ledger.met(idx))));
    put("met", Value::Object(met.collect()));
    let apart = ledger.never_together().into_iter();
    put("never_together", apart.map(|(a, b)| json!([columns[a], columns[b]])).collect());
    put("best_file", json!(folder.best_path().display().to_string()));
    put("history_file", json!(folder.history_path().display().to_string()));
    Value::Object(object)
}

fn verdict(told: &Told<'_>, verdict: &Verdict) -> Value {
    json!({
        "wish": verdict.wish,
        "violation": Some(verdict.violation).filter(|violation| violation.is_finite()),
        "varied": by_number(told, verdict.values.iter().map(|value| json!(value))),
        "required": by_limit(told, &verdict.limits),
    })
}

fn by_number(told: &Told<'_>, values: impl Iterator<Item = Value>) -> Value {
    let keys = told.judge.varied().iter().map(|one| one.knob.key().to_owned());
    Value::Object(keys.zip(values).collect())
}

fn by_limit(told: &Told<'_>, values: &[Option<f64>]) -> Value {
    let keys = Limit::columns(told.judge.limits()).into_iter();
    Value::Object(keys.zip(values.iter().map(|value| json!(value))).collect::<Map<_, _>>())
}

fn limit(limit: &Limit) -> Value {
    let side = match limit.bound {
        Bound::Least(_) => "at_least",
        Bound::Most(_) => "at_most",
    };
    let origin = match limit.origin {
        Origin::Always => "always",
        Origin::Design => "design",
        Origin::Search => "search",
    };
    json!({ "key": limit.key, side: limit.bound.value(), "from": origin })
}

/// A step to either side, and what that comes to for each unit of the file.
fn slopes(told: &Told<'_>) -> Value {
    let n_limits = told.judge.limits().len();
    let slopes = told.closing.slopes.iter().map(|slope| {
        let required: Vec<_> = (0..n_limits).map(|limit| slope.limit_per_unit(limit)).collect();
        json!({
            "values": slope.values,
            "wish": slope.verdicts.each_ref().map(|verdict| verdict.wish),
            "feasible": slope.verdicts.each_ref().map(Verdict::is_feasible),
            "wish_per_unit": slope.wish_per_unit(),
            "required_per_unit": by_limit(told, &required),
        })
    });
    by_number(told, slopes)
}

fn active(told: &Told<'_>) -> Value {
    let judge = told.judge;
    let columns = Limit::columns(judge.limits());
    let active = told.closing.active.iter().map(|active| {
        let of = |idx: usize| &judge.varied()[idx];
        let (key, side, at) = match active.held {
            Held::Low(idx) => (of(idx).knob.key(), "low", of(idx).low),
            Held::High(idx) => (of(idx).knob.key(), "high", of(idx).high),
            Held::Limit(idx) => (columns[idx].as_str(), "limit", judge.limits()[idx].bound.value()),
        };
        json!({ "key": key, "side": side, "at": at, "loosened_to": active.loosened,
            "gain": active.gain })
    });
    active.collect()
}
