//! Rankings of slices, read back and put together.

use serde_json::Value;

use crate::ledger::{ALL_MECHANISMS, ALL_SLOTS, Mechanism, Slot};
use crate::worst::ValueSet;

use super::By;
use super::describe;
use super::entry::{Counts, Disqualified, Entry, Gap, Outcome};
use super::slice::Slice;
use super::tops::{Front, Standing};

/// What is wrong with a set of slices: the file it is about (by place), and the words.
pub type Wrong = (Option<usize>, String);

/// Reads a ranking back from its JSON.
///
/// # Errors
/// What the text lacks.
pub fn read(text: &str) -> Result<Outcome, String> {
    let json: Value = serde_json::from_str(text).map_err(|error| format!("it is no JSON: {error}"))?;
    let text = |key: &str| string(&json, key);
    let by = By::from_name(&text("by")?).ok_or("`by` is no known order of ranking")?;
    let values = ValueSet::from_name(&text("values")?).ok_or("`values` is no known set of values")?;
    let slice = match json.get("slice").and_then(Value::as_array).map(Vec::as_slice) {
        Some([number, of]) => Slice {
            number: number.as_u64().ok_or("`slice` is no pair of numbers")?,
            of: of.as_u64().ok_or("`slice` is no pair of numbers")?,
        },
        _ => Slice::default(),
    };
    let counts = json.get("combinations").ok_or_else(|| lacks("combinations"))?;
    Ok(Outcome {
        version: text("lossbook")?,
        budget: text("budget")?,
        values,
        input: text("input")?,
        stage: text("stage")?,
        currency: json.get("currency").and_then(Value::as_str).map(Into::into),
        by,
        top: whole(&json, "top")? as usize,
        exhaustive: flag(&json, "exhaustive")?,
        slice,
        complete: flag(&json, "complete")?,
        counts: Counts {
            all: whole(counts, "all")?,
            screened: whole(counts, "screened")?,
            visited: whole(counts, "visited")?,
            abandoned: whole(counts, "abandoned")?,
            disqualified: whole(counts, "disqualified")?,
            sound: whole(counts, "sound")?,
            points: whole(counts, "points")?,
        },
        ranking: list(&json, "ranking", entry)?,
        not_comparable: list(&json, "not_comparable", entry)?,
        unbeaten: list(&json, "not_beaten", entry)?,
        disqualified: list(&json, "disqualified", disqualified)?,
    })
}

/// Puts the rankings of all slices together.
///
/// # Errors
/// Slices that are missing, twice, incomplete or of different runs.
pub fn merge(slices: Vec<Outcome>) -> Result<Outcome, Wrong> {
    let Some(first) = slices.first().cloned() else { return Err((None, "there is nothing to merge".into())) };
    let of = first.slice.of;
    for (file, slice) in slices.iter().enumerate() {
        let wrong = |what: &str| Err((Some(file), what.to_owned()));
        if !slice.complete {
            return wrong("its search was interrupted; run this slice again");
        }
        if slice.version != first.version {
            return wrong("another version of lossbook wrote it; run all slices with one version");
        }
        if (&slice.input, &slice.stage) != (&first.input, &first.stage) {
            return wrong(
                "it ranks another budget or other parts than the first file; run all slices from the same inputs",
            );
        }
        let asked = |slice: &Outcome| (slice.by, slice.top, slice.exhaustive, slice.values);
        if asked(slice) != asked(&first) {
            return wrong(
                "it was run with another --by, --top, --exhaustive or --values than the first file",
            );
        }
        if slice.slice.of != of {
            return wrong(&format!("it is one of {} slices, the first file one of {of}", slice.slice.of));
        }
        if slices[..file].iter().any(|before| before.slice == slice.slice) {
            return wrong(&format!("slice {}/{of} is there twice", slice.slice.number));
        }
    }
    let missing: Vec<String> = (1..=of)
        .filter(|number| !slices.iter().any(|slice| slice.slice.number == *number))
        .map(|number| format!("{number}/{of}"))
        .collect();
    if !missing.is_empty() {
        let shown = missing.iter().take(8).cloned().collect::<Vec<_>>().join(", ");
        let more = if missing.len() > 8 { ", ..." } else { "" };
        return Err((
            None,
            format!(
                "{} missing: {shown}{more}",
                if missing.len() == 1 { "a slice is" } else { "slices are" }
            ),
        ));
    }
    let mut whole = Outcome { slice: Slice::default(), ..first };
    whole.counts = slices.iter().fold(
        Counts { all: whole.counts.all, screened: whole.counts.screened, ..Counts::default() },
        |sum, slice| Counts {
            visited: sum.visited + slice.counts.visited,
            abandoned: sum.abandoned + slice.counts.abandoned,
            disqualified: sum.disqualified + slice.counts.disqualified,
            sound: sum.sound + slice.counts.sound,
            points: sum.points + slice.counts.points,
            ..sum
        },
    );
    let best = |of: fn(&Outcome) -> &Vec<Entry>| {
        let mut all: Vec<Entry> = slices.iter().flat_map(|slice| of(slice).iter().cloned()).collect();
        let key = |entry: &Entry| whole.by.turned(entry.value);
        all.sort_by(|a, b| key(a).total_cmp(&key(b)).then(a.place.cmp(&b.place)));
        all.truncate(whole.top);
        all
    };
    let (ranking, apart) = (best(|outcome| &outcome.ranking), best(|outcome| &outcome.not_comparable));
    let candidates: Vec<&Entry> = slices.iter().flat_map(|slice| &slice.unbeaten).collect();
    let mut front = Front::default();
    for entry in &candidates {
        front.add(Standing { value: whole.by.turned(entry.value), place: entry.place, price: entry.price });
    }
    let by_place = |standing: &Standing| candidates.iter().find(|entry| entry.place == standing.place);
    let unbeaten = front.list().filter_map(by_place).map(|entry| Entry::clone(entry)).collect();
    let disqualified = reasons(&slices);
    Ok(Outcome { ranking, not_comparable: apart, unbeaten, disqualified, ..whole })
}

/// Parts as in any slice; reasons of combinations added up.
fn reasons(slices: &[Outcome]) -> Vec<Disqualified> {
    let mut parts = Vec::new();
    let mut reasons: Vec<Disqualified> = Vec::new();
    for (file, slice) in slices.iter().enumerate() {
        for one in &slice.disqualified {
            if one.part.is_some() {
                if file == 0 {
                    parts.push(one.clone());
                }
                continue;
            }
            match reasons.iter_mut().find(|known| (known.slot, &known.reason) == (one.slot, &one.reason)) {
                Some(known) => known.combinations += one.combinations,
                None => reasons.push(one.clone()),
            }
        }
    }
    reasons.sort_by(describe::order);
    parts.extend(reasons);
    parts
}

fn entry(json: &Value) -> Result<Entry, String> {
    let parts =
        ALL_SLOTS.into_iter().filter_map(|slot| Some((slot, json.get(slot.name())?.as_str()?.to_owned())));
    let mechanisms = json.get("mechanisms").ok_or_else(|| lacks("mechanisms"))?;
    let watts = |mechanism: Mechanism| Some((mechanism, mechanisms.get(mechanism.name())?.as_f64()?));
    let hottest = json.get("hottest").and_then(Value::as_array).and_then(|pair| match pair.as_slice() {
        [slot, temperature] => Some((Slot::from_name(slot.as_str()?)?, temperature.as_f64()?)),
        _ => None,
    });
    let words = |value: &Value| value.as_str().map(Into::into).ok_or_else(|| "text is expected".to_owned());
    Ok(Entry {
        place: whole(json, "place")?,
        parts: parts.collect(),
        switching_frequency: json.get("switching_frequency").and_then(Value::as_f64),
        value: number(json, "value")?,
        loss: number(json, "loss")?,
        efficiency: json.get("efficiency").and_then(Value::as_f64),
        price: json.get("price").and_then(Value::as_f64),
        hottest,
        mechanisms: ALL_MECHANISMS.into_iter().filter_map(watts).collect(),
        missed: list(json, "requirements_missed", words)?,
        needs: list(json, "needs", words)?,
        not_modelled: list(json, "not_modelled", |gap| {
            Ok(Gap {
                lacking: string(gap, "lacking")?,
                slot: string(gap, "slot")?,
                mechanism: string(gap, "mechanism")?,
                needs: string(gap, "needs")?,
            })
        })?,
    })
}

fn disqualified(json: &Value) -> Result<Disqualified, String> {
    Ok(Disqualified {
        slot: json.get("slot").and_then(Value::as_str).and_then(Slot::from_name),
        part: json.get("part").and_then(Value::as_str).map(Into::into),
        reason: string(json, "reason")?,
        combinations: whole(json, "combinations")?,
        example: json.get("example").and_then(Value::as_str).map(Into::into),
    })
}

fn lacks(key: &str) -> String {
    format!("it lacks `{key}`; name the JSON files that `lossbook pick --slice` wrote")
}

fn string(json: &Value, key: &str) -> Result<String, String> {
    json.get(key).and_then(Value::as_str).map(Into::into).ok_or_else(|| lacks(key))
}

fn number(json: &Value, key: &str) -> Result<f64, String> {
    json.get(key).and_then(Value::as_f64).ok_or_else(|| lacks(key))
}

fn whole(json: &Value, key: &str) -> Result<u64, String> {
    json.get(key).and_then(Value::as_u64).ok_or_else(|| lacks(key))
}

fn flag(json: &Value, key: &str) -> Result<bool, String> {
    json.get(key).and_then(Value::as_bool).ok_or_else(|| lacks(key))
}

fn list<T>(json: &Value, key: &str, read: impl Fn(&Value) -> Result<T, String>) -> Result<Vec<T>, String> {
    json.get(key).and_then(Value::as_array).ok_or_else(|| lacks(key))?.iter().map(read).collect()
}
