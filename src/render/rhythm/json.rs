//! Rhythms as JSON.

use super::{CAUTION, longest};
use crate::rhythm::Component;
use crate::rhythm::groups::{GroupComparison, GroupPopulation};
use crate::rhythm::populations::Test;
use crate::rhythm::subjects::{ResponseMean, RhythmTable, SalivaDay, SubjectRhythm};
use serde_json::{Map, Value, json as value};
use std::io::{self, Write};

/// Schema `acroshift.rhythm/1`.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn json(table: &RhythmTable, version: &str, out: &mut impl Write) -> io::Result<()> {
    let document = value!({
        "schema": "acroshift.rhythm/1",
        "tool": { "name": "acroshift", "version": version },
        "run": {
            "periods_h": table.plan.design.periods_h,
            "log": table.plan.log,
            "reference_h": table.plan.reference_h,
            "level": table.plan.design.level,
            "unit": "nmol/L",
        },
        "subjects": table.subjects.iter().map(|s| subject_value(table, s)).collect::<Vec<_>>(),
        "populations": table.populations.iter().map(population_value).collect::<Vec<_>>(),
        "comparisons": table.comparisons.iter().map(comparison_value).collect::<Vec<_>>(),
        "cautions": [CAUTION],
    });
    serde_json::to_writer_pretty(&mut *out, &document)?;
    writeln!(out)
}

fn subject_value(table: &RhythmTable, subject: &SubjectRhythm) -> Value {
    let mut object = Map::new();
    let mut put = |key: &str, value: Value| {
        object.insert(key.to_owned(), value);
    };
    put("subject", value!(subject.subject));
    put("specimen", value!(subject.specimen));
    put("group", value!(subject.group));
    put("n", value!(subject.n));
    put("below_limit", value!(subject.below_limit));
    put("days", value!(subject.days));
    match &subject.cosinor {
        Err(refusal) => put("refused", value!(refusal.to_string())),
        Ok(cosinor) => {
            put("period_h", value!(table.plan.design.periods_h[0]));
            put("mesor", value!(cosinor.mesor));
            put("mesor_se", value!(cosinor.mesor_se));
            put("mesor_nmol_l", value!(subject.mesor_nmol_l(&table.plan)));
            let components: Vec<Value> = cosinor
                .components
                .iter()
                .map(|component| component_value(table, component))
                .collect();
            put("components", value!(components));
            let longest = longest(table);
            let clock = |after_h: f64| {
                crate::numeric::circular::wrap(after_h + table.plan.reference_h, longest)
            };
            put("f", value!(cosinor.f));
            put("df", value!([cosinor.coefficients.len() - 1, cosinor.df]));
            put("p", value!(cosinor.p));
            put("r2", value!(cosinor.r2));
            put("rss", value!(cosinor.rss));
            put("condition", value!(cosinor.sampling.condition));
            put("largest_gap_h", value!(cosinor.sampling.largest_gap_h));
            put(
                "shape",
                value!(cosinor.shape.map(|shape| value!({
                    "peak_h": clock(shape.peak_h), "peak": shape.peak, "trough_h": clock(shape.trough_h), "trough": shape.trough,
                    "magnitude": shape.magnitude, "orthophase_deg": shape.orthophase_deg, "bathyphase_deg": shape.bathyphase_deg,
                }))),
            );
        }
    }
    let (all, on_time) = subject.response_with_and_without();
    put("response", response_value(all));
    put("response_on_time", response_value(on_time));
    put(
        "saliva",
        value!(subject.saliva.iter().map(saliva_value).collect::<Vec<_>>()),
    );
    Value::Object(object)
}

fn component_value(table: &RhythmTable, component: &Component) -> Value {
    let degrees = |limits: Option<(f64, f64)>| {
        limits.map(|(low, high)| [low.to_degrees(), high.to_degrees()])
    };
    let (low, high) = component.amplitude_conservative;
    value!({
        "period_h": component.period_h,
        "beta": component.beta,
        "gamma": component.gamma,
        "amplitude": component.amplitude,
        "amplitude_se": component.amplitude_se,
        "amplitude_conservative": [low, high],
        "acrophase_deg": component.acrophase_deg(),
        "acrophase_h": crate::numeric::circular::wrap(component.peak_h() + table.plan.reference_h, component.period_h),
        "acrophase_se_h": component.peak_se_h(),
        "acrophase_fieller_deg": degrees(component.acrophase_fieller),
        "acrophase_conservative_deg": degrees(component.acrophase_conservative),
        "percent_rhythm": component.percent,
        "f": component.f,
        "p": component.p,
    })
}

fn response_value(mean: ResponseMean) -> Value {
    value!({ "days": mean.days, "mean_increase": mean.mean_increase })
}

fn saliva_value(day: &SalivaDay) -> Value {
    let slopes: Map<String, Value> = day
        .slopes
        .iter()
        .map(|(kind, slope)| (kind.word().to_owned(), value!(slope)))
        .collect();
    value!({
        "day": day.day,
        "samples": day.samples,
        "first_delay_min": day.first_delay_min,
        "mean_increase": day.response.map(|areas| areas.mean_increase),
        "response_auc_i": day.response.map(|areas| areas.increase),
        "response_auc_g": day.response.map(|areas| areas.ground),
        "auc_g": day.whole.map(|areas| areas.ground),
        "auc_i": day.whole.map(|areas| areas.increase),
        "slopes": slopes,
    })
}

fn population_value(of: &GroupPopulation) -> Value {
    let population = &of.population;
    value!({
        "specimen": of.specimen,
        "group": of.group,
        "k": population.k,
        "mesor": population.mesor,
        "mesor_ci": [population.mesor_limits.0, population.mesor_limits.1],
        "amplitude": population.amplitude,
        "amplitude_ci": [population.amplitude_limits.0, population.amplitude_limits.1],
        "mean_amplitude": population.mean_amplitude,
        "acrophase_deg": population.acrophase_rad.to_degrees(),
        "acrophase_ci_deg": population.acrophase_limits.map(|(low, high)| [low.to_degrees(), high.to_degrees()]),
        "f": population.f,
        "df": [2.0, population.df],
        "p": population.p,
    })
}

fn comparison_value(comparison: &GroupComparison) -> Value {
    let test = |test: &Test| value!({ "f": test.f, "df": [test.df.0, test.df.1], "p": test.p });
    let tests = comparison.tests.as_ref();
    value!({
        "specimen": comparison.specimen,
        "groups": comparison.groups,
        "not_compared": tests.err().map(ToString::to_string),
        "mesor": tests.ok().map(|tests| test(&tests.mesor)),
        "acrophase": tests.ok().map(|tests| test(&tests.acrophase)),
        "amplitude": tests.ok().map(|tests| test(&tests.amplitude)),
        "amplitude_and_acrophase": tests.ok().and_then(|tests| tests.joint.as_ref()).map(test),
    })
}
