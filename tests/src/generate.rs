//! Generated visits for the comparison of bits between targets and for fuzzing: every kind of term, noise, profile, prior,
//! orientation, nominal characteristic, flag and question, and some that have to be refused. Invented data.
//!
//! Visit number i is a function of i alone. Kinds are dealt in turn with strides that have no common factor, so that
//! they meet in many combinations; numbers come from a seeded generator.

use crate::random::SplitMix64;
use serde_json::{Map, Value, json};

/// Seed of the sequence; visit i starts at this number plus i.
pub const SEED: u64 = 20_260_504;

/// Number of visits that the comparison between targets uses.
pub const COUNT: u64 = 500;

/// Every how many visits one has to be refused.
const REFUSED_EVERY: u64 = 25;

/// Visits 0 … count − 1.
pub fn visits(count: u64) -> Vec<Value> {
    (0..count).map(visit).collect()
}

/// Visit number i.
pub fn visit(index: u64) -> Value {
    let mut random = SplitMix64::new(SEED.wrapping_add(index));
    let plan = Plan::of(index, &mut random);
    let mut visit = json!({
        "schema": "bandleaf.visit.1",
        "instrument": plan.instrument(index),
        "occasion": {"date": "2026-05-04", "by": "A. Tester", "notes": format!("invented, number {index}")},
        "points": plan.points(&mut random),
        "model": plan.model(index, &mut random),
        "coverage": random.one_of(&[0.95, 0.95, 0.99, 0.9, 0.6827]),
        "conditions": {"temperature": 20},
        "ask": plan.ask(index, &mut random),
    });
    decorate(&mut visit, index);
    if index % REFUSED_EVERY == REFUSED_EVERY - 1 {
        spoil(&mut visit, index / REFUSED_EVERY);
    }
    visit
}

/// Three decimals and no more, as people type them.
fn rounded(value: f64) -> f64 {
    libm::round(value * 1000.0) / 1000.0
}

/// What the parts of one visit have to agree on.
struct Plan {
    terms: Value,
    columns: usize,
    orientation: &'static str,
    nominal: Value,
    low: f64,
    high: f64,
    out_low: f64,
    out_high: f64,
    noise: f64,
    per_point: bool,
}

impl Plan {
    fn of(index: u64, random: &mut SplitMix64) -> Plan {
        let orientation = match index % 9 {
            6 | 7 => "reference_from_indication",
            8 => "correction_from_indication",
            _ => "indication_from_reference",
        };
        let letter = if orientation == "indication_from_reference" { "x" } else { "y" };
        let (terms, columns) = shape(index, letter);
        let low = rounded(random.between(0.5, 5.0));
        let high = rounded(low + random.between(20.0, 120.0));
        let (nominal, out_low, out_high) = match (orientation, index % 5) {
            ("correction_from_indication", _) | (_, 0) => (json!({"kind": "identity"}), low, high),
            (_, 1) => (Value::Null, low, high),
            (_, 2) => (json!({"kind": "linear", "range": [4, 20]}), 4.0, 20.0),
            (_, 3) => (json!({"kind": "square_root", "range": [4, 20]}), 4.0, 20.0),
            _ => (json!({"kind": "linear", "range": [10, 0]}), 10.0, 0.0),
        };
        let noise = rounded((out_high - out_low).abs() * random.between(0.0005, 0.01)).max(0.001);
        Plan { terms, columns, orientation, nominal, low, high, out_low, out_high, noise, per_point: index % 7 < 2 }
    }

    /// Indication of an instrument that is a little off its nominal characteristic, without noise.
    fn shown(&self, x: f64) -> f64 {
        let share = (x - self.low) / (self.high - self.low);
        let share = if self.nominal["kind"] == "square_root" { libm::sqrt(share.max(0.0)) } else { share };
        let bent = share + 0.004 * libm::sin(3.0 * share) + 0.002;
        self.out_low + (self.out_high - self.out_low) * bent
    }

    fn instrument(&self, index: u64) -> Value {
        let other = self.nominal["kind"] == "linear" || self.nominal["kind"] == "square_root";
        let limits = match index % 7 {
            0 => json!([0, null]),
            1 => json!([self.low, self.high]),
            2 => json!([null, self.high + 1.0]),
            _ => Value::Null,
        };
        json!({
            "name": "invented", "serial": format!("{index:04}"), "quantity": "level", "unit": "mm",
            "range": if index % 8 == 5 && !other { Value::Null } else { json!([self.low, self.high]) },
            "hard_limits": limits,
            "output": {
                "unit": if other { json!("mA") } else { Value::Null },
                "resolution": if index % 4 == 1 { json!(0.001) } else { Value::Null },
                "nominal": self.nominal,
            },
            "influences": {"temperature": {"unit": "°C"}},
        })
    }

    fn points(&self, random: &mut SplitMix64) -> Vec<Value> {
        let count = self.columns as u64 + 3 + random.below(8);
        let states = random.chance(0.15);
        let mut points: Vec<Value> = (0..count)
            .map(|i| {
                let x = rounded(self.low + (self.high - self.low) * i as f64 / (count - 1) as f64);
                self.point(x, random)
            })
            .collect();
        if states {
            let after: Vec<Value> = points
                .iter()
                .map(|point| {
                    let mut point = point.clone();
                    point["state"] = json!("as_left");
                    point
                })
                .collect();
            points.extend(after);
        }
        if random.chance(0.2) {
            let last = points.len() - 1;
            points[last]["set_aside"] = json!("knocked while reading");
        }
        points
    }

    fn point(&self, x: f64, random: &mut SplitMix64) -> Value {
        let one = |random: &mut SplitMix64| rounded(self.shown(x) + self.noise * random.normal());
        let raw = random.chance(0.2);
        let indication = if raw {
            let repeats = 2 + random.below(3);
            json!((0..repeats).map(|_| one(random)).collect::<Vec<f64>>())
        } else {
            json!(one(random))
        };
        let mut point = json!({
            "reference": x,
            "indication": indication,
            "influences": {"temperature": rounded(random.between(10.0, 30.0))},
        });
        if !raw && random.chance(0.15) {
            point["repeats"] = json!(2 + random.below(9));
        }
        if self.per_point {
            point["indication_uncertainty"] = json!(rounded(self.noise * random.between(0.5, 2.0)).max(0.001));
        }
        if random.chance(0.2) {
            point["approach"] = json!(random.one_of(&["up", "down"]));
        }
        point
    }

    fn model(&self, index: u64, random: &mut SplitMix64) -> Value {
        let mut noise = match index % 4 {
            0 | 1 => json!({"kind": "unknown"}),
            2 if self.per_point && index % 8 == 2 => json!({"kind": "known", "standard_deviation": 0}),
            2 => json!({"kind": "known", "standard_deviation": self.noise}),
            _ => {
                json!({"kind": "stated", "standard_deviation": self.noise, "degrees_of_freedom": 4.5})
            }
        };
        match index % 11 {
            0 => noise["profile"] = json!({"kind": "constant"}),
            1 | 2 => noise["profile"] = json!({"kind": "proportional", "rho": 0.5}),
            3 => noise["profile"] = json!({"kind": "proportional", "rho": "integrated"}),
            _ => {}
        }
        json!({
            "orientation": self.orientation,
            "terms": self.terms,
            "noise": noise,
            "known_before": self.known_before(index, random),
            "suspects": if index.is_multiple_of(10) { json!({"enabled": true, "prior_probability": 0.02}) } else { Value::Null },
            "candidates": if index % 10 == 1 { json!([["1", "x"], ["1", "x", "x^2"]]) } else { json!([]) },
        })
    }

    fn known_before(&self, index: u64, random: &mut SplitMix64) -> Value {
        let p = self.columns;
        let means: Vec<f64> = (0..p).map(|_| rounded(random.normal())).collect();
        let spread: Vec<Vec<f64>> = (0..p)
            .map(|i| (0..p).map(|j| if i == j { 4.0 } else { 0.5 / (1.0 + (i as f64 - j as f64).abs()) }).collect())
            .collect();
        match (index % 4, index % 13) {
            (2, 0..=2) => json!([{"kind": "coefficients", "mean": means, "covariance": spread}]),
            (2, 3..=5) => json!([{
                "kind": "coefficients", "mean": means,
                "standard_uncertainty": (0..p).map(|j| if j == 1 { Value::Null } else { json!(2.5) }).collect::<Vec<_>>(),
            }]),
            (2, 6) => json!([{"kind": "shrinkage", "precision": 0.25}]),
            (2, 7) => {
                json!([{"kind": "shrinkage", "precision": 2.5, "basis": "as_given", "intercept": "shrunk"}])
            }
            (2, 8) => {
                json!([{"kind": "shrinkage", "precision": 0.01, "basis": "as_given", "intercept": "flat"}])
            }
            (2, 9) => json!([{"kind": "shrinkage", "precision": 0.01, "intercept": "shrunk"}]),
            (3, 0..=6) => {
                json!([{"kind": "conjugate", "mean": means, "covariance_over_variance": spread}])
            }
            (1, 0) => json!([{"kind": "shrinkage", "precision": "integrated"}]),
            (1, 1) => {
                json!([{"kind": "values", "values": [{"x": 10, "lower": 9.8, "upper": 10.2, "probability": 0.95}]}])
            }
            (1, 2) => json!([{"kind": "carried"}]),
            (_, 10) => json!([]),
            _ => json!([{"kind": "flat"}]),
        }
    }

    fn ask(&self, index: u64, random: &mut SplitMix64) -> Value {
        let place = |random: &mut SplitMix64| rounded(random.between(self.low, self.high));
        let mut at = vec![json!(place(random)), json!(rounded(self.high * 1.2))];
        at.push(json!({"x": place(random), "influences": {"temperature": 15}}));
        let shown = |x: f64| rounded(self.shown(x));
        let middle = shown(place(random));
        let mut readings = vec![json!([middle]), json!([middle, middle + 0.002, middle - 0.001])];
        match index % 6 {
            0 => readings.push(json!({"indications": [middle], "resolution": 0.01})),
            1 => readings.push(json!({"indications": [middle], "influences": {"temperature": 25}})),
            2 => readings.push(json!({
                "indications": [middle],
                "known": {"mean": place(random), "standard_uncertainty": 5},
            })),
            3 => readings.push(json!([self.out_high + 3.0 * (self.out_high - self.out_low)])),
            4 => readings.push(json!(shown(self.high))),
            _ => readings.push(json!([])),
        }
        json!({"at": at, "readings": readings})
    }
}

/// Terms in the given letter, and how many columns they make.
fn shape(index: u64, letter: &str) -> (Value, usize) {
    let list = |terms: &[&str]| {
        let written: Vec<String> = terms.iter().map(|term| term.replace('@', letter)).collect();
        (json!(written), written.len())
    };
    match index % 17 {
        0 | 1 => list(&["1", "@"]),
        2 => list(&["1", "@", "@^2"]),
        3 => (json!({"kind": "polynomial", "degree": 3}), 4),
        4 => list(&["1", "ln(@)"]),
        5 => list(&["1", "sqrt(@)"]),
        6 => list(&["1", "@", "1/@"]),
        7 => list(&["1", "exp(-@/50)"]),
        8 => list(&["1", "@", "sin(2*pi*@/40)"]),
        9 => list(&["1", "@", "temperature"]),
        10 => list(&["1", "@", "@*temperature"]),
        11 => list(&["@"]),
        12 => list(&["1", "@-20", "(@-20)^2"]),
        13 => (json!([{"kind": "polynomial", "degree": 1}, format!("{letter}^3")]), 3),
        14 => (json!({"kind": "polynomial", "degree": 6 + index % 7}), 7 + index as usize % 7),
        15 => list(&["1", "@", "cos(@/9)", "sqrt(@)*temperature"]),
        _ if index.is_multiple_of(2) => (json!({"kind": "spline", "knots": [5, 20, 40]}), 4),
        _ => (json!({"kind": "broken_line", "knots": [5, 20, 40]}), 4),
    }
}

/// Parts that are kept and told of, though not all are computed.
fn decorate(visit: &mut Value, index: u64) {
    let Some(fields) = visit.as_object_mut() else {
        return;
    };
    match index % 12 {
        0 => {
            fields.insert("tolerance".into(), json!({"combine": "sum", "constant": 4, "of_value": 0.002}));
        }
        1 => {
            let errors = json!([{"kind": "offset", "standard_uncertainty": 0.05, "source": "certificate"}]);
            fields.insert("standards".into(), json!([{"id": "S1", "name": "tape", "errors": errors}]));
            each_point(fields, "standard", &json!("S1"));
        }
        2 => each_point(fields, "setting_uncertainty", &json!(0.02)),
        3 => each_point(fields, "reference_uncertainty", &json!(0.01)),
        4 => {
            fields.insert("plan".into(), json!({"admissible": [1, 10, 20], "evaluate": [1, 20, 5]}));
            fields.insert("target_expanded_uncertainty".into(), json!(0.2));
        }
        5 => {
            let installation = json!([{"source": "installation", "limits": 1, "distribution": "rectangular"}]);
            fields.insert("in_use".into(), json!({"contributions": installation}));
        }
        6 => {
            fields.insert("earlier".into(), json!([{"schema": "bandleaf.visit.1", "points": []}]));
            fields.insert("history".into(), json!([{"at": "2026-05-04T09:12:00Z", "change": "typed"}]));
        }
        7 => {
            fields.insert("unheard_of".into(), json!({"kept": ["as it is", 1e-7, -0.0, "</script>", "\u{2028}"]}));
        }
        _ => {}
    }
}

fn each_point(fields: &mut Map<String, Value>, name: &str, value: &Value) {
    if let Some(Value::Array(points)) = fields.get_mut("points") {
        for point in points {
            point[name] = value.clone();
        }
    }
}

/// Makes a visit that has no result.
fn spoil(visit: &mut Value, kind: u64) {
    let points = visit["points"].as_array().cloned().unwrap_or_default();
    match kind % 10 {
        0 => visit["points"] = json!([]),
        1 => visit["points"] = json!(points.iter().take(1).collect::<Vec<_>>()),
        2 => visit["model"]["terms"] = json!(["1", "ln(x-1000)"]),
        3 => visit["model"]["terms"] = json!(["1", "x", "2*x"]),
        4 => visit["model"]["terms"] = json!(["1", "x +"]),
        5 => {
            for at in 0..points.len() {
                visit["points"][at]["reference"] = json!(7);
                visit["points"][at]["indication"] = json!(7.1);
            }
        }
        6 => visit["coverage"] = json!(1.5),
        7 => visit["instrument"]["hard_limits"] = json!([10, 2]),
        8 => visit["model"]["noise"] = json!({"kind": "known", "standard_deviation": -1}),
        _ => visit["model"]["terms"] = json!([]),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_same_number_gives_the_same_visit() {
        assert_eq!(visit(17), visit(17));
        assert_ne!(visit(17)["points"], visit(34)["points"]);
    }

    #[test]
    fn every_visit_can_be_read() {
        for (index, json) in visits(COUNT).into_iter().enumerate() {
            let read = crate::read(json);
            assert!(read.is_ok(), "{index}: {read:?}");
        }
    }

    #[test]
    fn every_kind_is_among_the_visits_of_the_comparison() {
        let all = visits(COUNT).iter().map(Value::to_string).collect::<Vec<_>>();
        for kind in [
            "\"kind\":\"unknown\"",
            "\"kind\":\"known\",\"standard_deviation\":0}",
            "\"kind\":\"stated\"",
            "\"rho\":0.5",
            "\"rho\":\"integrated\"",
            "\"known_before\":[]",
            "\"kind\":\"shrinkage\",\"precision\":0.25",
            "\"intercept\":\"shrunk\"",
            "\"kind\":\"coefficients\"",
            "\"kind\":\"conjugate\"",
            "\"kind\":\"values\"",
            "\"kind\":\"carried\"",
            "reference_from_indication",
            "correction_from_indication",
            "\"kind\":\"square_root\"",
            "\"degree\":12",
            "*temperature",
            "\"set_aside\":\"",
            "\"state\":\"as_left\"",
            "\"repeats\":2",
            "\"hard_limits\":[0,null]",
            "\"known\":{\"mean\"",
            "\"resolution\":0.01",
        ] {
            let count = all.iter().filter(|text| text.contains(kind)).count();
            assert!(count >= 3, "{kind} is in {count} visits");
        }
    }
}
