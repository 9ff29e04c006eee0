//! Rhythms of a table of samples: text, JSON and CSV.

use crate::render::csv::guarded;
use crate::rhythm::subjects::{RhythmTable, SalivaDay, SpecimenPopulation, SubjectRhythm};
use crate::rhythm::{Component, Cosinor};
use serde_json::{Map, Value, json as value};
use std::io::{self, Write};

/// What every rendering says.
pub const CAUTION: &str = "A fitted curve describes the samples; it is no diagnosis. The laboratory's own interval and the treating doctor decide. Not a medical device; not validated for clinical decisions.";

fn hours(hours: f64) -> String {
    let minutes = (hours * 60.0).round();
    let of_day = crate::numeric::circular::wrap(minutes, 1440.0);
    format!("{:02.0}:{:02.0}", (of_day / 60.0).floor(), of_day % 60.0)
}

/// A time after the reference: a clock time within a day, hours where the period is longer.
fn when(after_h: f64, table: &RhythmTable, period_h: f64) -> String {
    if period_h > 24.0 + 1e-9 {
        format!("{:.1} h", crate::numeric::circular::wrap(after_h, period_h))
    } else {
        hours(after_h + table.plan.reference_h)
    }
}

fn longest(table: &RhythmTable) -> f64 {
    table
        .plan
        .design
        .periods_h
        .iter()
        .copied()
        .fold(0.0, f64::max)
}

/// Lines for the terminal.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn text(table: &RhythmTable, out: &mut impl Write) -> io::Result<()> {
    writeln!(out, "{CAUTION}")?;
    writeln!(out, "{}", asked(table))?;
    for subject in &table.subjects {
        writeln!(
            out,
            "\n{} ({}): {} samples on {} days{}",
            subject.subject,
            subject.specimen,
            subject.n,
            subject.days,
            match subject.below_limit {
                0 => String::new(),
                below => format!(", {below} below the limit of detection (half of it used)"),
            }
        )?;
        match &subject.cosinor {
            Ok(cosinor) => text_of_fit(table, subject, cosinor, out)?,
            Err(refusal) => writeln!(out, "  not fitted: {refusal}")?,
        }
        for day in &subject.saliva {
            text_of_saliva(day, out)?;
        }
    }
    if table
        .subjects
        .iter()
        .any(|subject| !subject.saliva.is_empty())
    {
        writeln!(out, "\n{}", day_counts())?;
    }
    if table.populations.is_empty() {
        writeln!(
            out,
            "\nNo population: at least {} subjects with a fit in one matrix and assay are needed.",
            crate::rhythm::populations::FEWEST_SUBJECTS
        )?;
    }
    for of in &table.populations {
        text_of_population(table, of, out)?;
    }
    Ok(())
}

/// What was asked of the table, in words.
fn asked(table: &RhythmTable) -> String {
    let periods: Vec<String> = table
        .plan
        .design
        .periods_h
        .iter()
        .map(|period| format!("{period}"))
        .collect();
    format!(
        "Cosinor of {} h on the {} scale, times from {}, limits of {:.0} %. Unit nmol/L.",
        periods.join(" + "),
        if table.plan.log {
            "logarithmic"
        } else {
            "linear"
        },
        hours(table.plan.reference_h),
        100.0 * table.plan.design.level
    )
}

fn text_of_fit(
    table: &RhythmTable,
    subject: &SubjectRhythm,
    cosinor: &Cosinor,
    out: &mut impl Write,
) -> io::Result<()> {
    let (low, high) = cosinor.mesor_limits;
    let shown = |number: f64| {
        if table.plan.log {
            libm::exp(number)
        } else {
            number
        }
    };
    writeln!(
        out,
        "  {} {:.2} nmol/L ({:.2} to {:.2}); rhythm explains {:.0} %, F({:.0}, {:.0}) {:.2}, p {}",
        if table.plan.log {
            "geometric MESOR"
        } else {
            "MESOR"
        },
        subject.mesor_nmol_l(&table.plan).unwrap_or(f64::NAN),
        shown(low),
        shown(high),
        100.0 * cosinor.r2,
        f64::from(u32::try_from(cosinor.coefficients.len() - 1).unwrap_or(0)),
        cosinor.df,
        cosinor.f,
        probability(cosinor.p)
    )?;
    for component in &cosinor.components {
        writeln!(out, "  {}", component_line(table, component))?;
    }
    if let Some(shape) = &cosinor.shape
        && cosinor.components.len() > 1
    {
        writeln!(
            out,
            "  highest at {} ({:.2} nmol/L), lowest at {} ({:.2} nmol/L)",
            when(shape.peak_h, table, longest(table)),
            shown(shape.peak),
            when(shape.trough_h, table, longest(table)),
            shown(shape.trough)
        )?;
    }
    if cosinor.sampling.is_weak() {
        writeln!(
            out,
            "  weak sampling: condition number {:.1}, largest gap {:.1} h",
            cosinor.sampling.condition, cosinor.sampling.largest_gap_h
        )?;
    }
    Ok(())
}

/// Limits are told only where the amplitude is told from 0.
fn component_line(table: &RhythmTable, component: &Component) -> String {
    let amplitude = if table.plan.log {
        format!(
            "peak over trough {:.2}",
            libm::exp(2.0 * component.amplitude)
        )
    } else {
        let (low, high) = component.amplitude_conservative;
        format!(
            "amplitude {:.2} nmol/L ({:.2} to {:.2})",
            component.amplitude, low, high
        )
    };
    let at = |radians: f64| {
        let turns = -radians / (2.0 * std::f64::consts::PI);
        when(turns * component.period_h, table, component.period_h)
    };
    let phase = match component.acrophase_conservative {
        // A later clock time is a more negative acrophase.
        Some((low, high)) => format!(
            "acrophase {} ({} to {})",
            at(component.acrophase_rad),
            at(high),
            at(low)
        ),
        None => "acrophase not told: the amplitude may be 0".to_owned(),
    };
    format!(
        "{} h: {amplitude}, {phase}, p {}",
        component.period_h,
        probability(component.p)
    )
}

fn probability(p: f64) -> String {
    if p < 0.0001 {
        "below 0.0001".to_owned()
    } else {
        format!("{p:.4}")
    }
}

/// How many days a reliable measure takes.
fn day_counts() -> String {
    let counts: Vec<String> = crate::rhythm::saliva::DAY_COUNTS
        .iter()
        .map(|count| format!("{} {}", count.measure, count.between))
        .collect();
    format!(
        "Days of sampling that tell persons apart (Segerstrom 2014, upper figures): {}. The waking response repeats poorly from day to day.",
        counts.join(", ")
    )
}

fn text_of_saliva(day: &SalivaDay, out: &mut impl Write) -> io::Result<()> {
    write!(
        out,
        "  day {}: first sample {:.0} min after waking",
        day.day + 1,
        day.first_delay_min
    )?;
    match day.first {
        crate::rhythm::saliva::Timing::Kept => {}
        crate::rhythm::saliva::Timing::Off => {
            write!(out, " (over 5 min: the waking response is overestimated)")?;
        }
        crate::rhythm::saliva::Timing::FarOff => {
            write!(out, " (over 15 min: the waking response is underestimated)")?;
        }
    }
    if let Some(response) = &day.response {
        write!(
            out,
            "; waking response: mean increase {:.2} nmol/L, AUCi {:.0}, AUCg {:.0} nmol/L min",
            response.mean_increase, response.increase, response.ground
        )?;
    }
    writeln!(out)?;
    if !day.slopes.is_empty() {
        let slopes: Vec<String> = day
            .slopes
            .iter()
            .map(|(kind, slope)| format!("{} {slope:.3}", kind.word()))
            .collect();
        writeln!(out, "    slopes, nmol/L per h: {}", slopes.join(", "))?;
    }
    Ok(())
}

fn text_of_population(
    table: &RhythmTable,
    of: &SpecimenPopulation,
    out: &mut impl Write,
) -> io::Result<()> {
    let population = &of.population;
    let at = |radians: f64| {
        let turns = -radians / (2.0 * std::f64::consts::PI);
        let period = table.plan.design.periods_h[0];
        when(turns * period, table, period)
    };
    // On the log scale the MESOR is geometric and the amplitude a ratio.
    let log = table.plan.log;
    let level = |value: f64| if log { libm::exp(value) } else { value };
    let height = |value: f64| if log { libm::exp(2.0 * value) } else { value };
    let limits = population.acrophase_limits.map_or_else(
        || "limits not told".to_owned(),
        |(low, high)| format!("{} to {}", at(high), at(low)),
    );
    writeln!(
        out,
        "\nPopulation of {} ({}): {} {:.2} nmol/L ({:.2} to {:.2}), {} {:.2} ({:.2} to {:.2}; mean of the subjects' own {:.2}), acrophase {} ({limits}), F(2, {:.0}) {:.2}, p {}{}",
        population.k,
        of.specimen,
        if log { "geometric MESOR" } else { "MESOR" },
        level(population.mesor),
        level(population.mesor_limits.0),
        level(population.mesor_limits.1),
        if log { "peak over trough" } else { "amplitude" },
        height(population.amplitude),
        height(population.amplitude_limits.0),
        height(population.amplitude_limits.1),
        height(population.mean_amplitude),
        at(population.acrophase_rad),
        population.df,
        population.f,
        probability(population.p),
        if population.k < crate::rhythm::populations::DESCRIPTIVE_BELOW {
            "; fewer than five subjects: a description, no test"
        } else {
            ""
        }
    )
}

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
        "subjects": table.subjects.iter().map(|s| json_subject(table, s)).collect::<Vec<_>>(),
        "populations": table.populations.iter().map(json_population).collect::<Vec<_>>(),
        "cautions": [CAUTION],
    });
    serde_json::to_writer_pretty(&mut *out, &document)?;
    writeln!(out)
}

fn json_subject(table: &RhythmTable, subject: &SubjectRhythm) -> Value {
    let mut object = Map::new();
    let mut put = |key: &str, value: Value| {
        object.insert(key.to_owned(), value);
    };
    put("subject", value!(subject.subject));
    put("specimen", value!(subject.specimen));
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
                .map(|component| json_component(table, component))
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
    put(
        "saliva",
        value!(subject.saliva.iter().map(json_saliva).collect::<Vec<_>>()),
    );
    Value::Object(object)
}

fn json_component(table: &RhythmTable, component: &Component) -> Value {
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

fn json_saliva(day: &SalivaDay) -> Value {
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

fn json_population(of: &SpecimenPopulation) -> Value {
    let population = &of.population;
    value!({
        "specimen": of.specimen,
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

/// One row per subject and period, RFC 4180.
///
/// # Errors
///
/// Whatever the writer refuses.
pub fn csv(table: &RhythmTable, out: &mut impl Write) -> io::Result<()> {
    let mut writer = ::csv::WriterBuilder::new()
        .terminator(::csv::Terminator::CRLF)
        .from_writer(out);
    writer.write_record([
        "subject",
        "specimen",
        "n",
        "days",
        "below_limit",
        "refused",
        "mesor",
        "mesor_se",
        "r2",
        "p",
        "period_h",
        "amplitude",
        "amplitude_se",
        "acrophase_deg",
        "acrophase_h",
        "acrophase_se_h",
        "component_p",
    ])?;
    for subject in &table.subjects {
        let head = [
            guarded(&subject.subject),
            guarded(&subject.specimen),
            subject.n.to_string(),
            subject.days.to_string(),
            subject.below_limit.to_string(),
        ];
        let rows: Vec<[String; 12]> = match &subject.cosinor {
            Err(refusal) => {
                let mut row: [String; 12] = Default::default();
                row[0] = refusal.to_string();
                vec![row]
            }
            Ok(cosinor) => cosinor
                .components
                .iter()
                .map(|component| csv_cells(table, cosinor, component))
                .collect(),
        };
        for row in rows {
            writer.write_record(head.iter().chain(&row))?;
        }
    }
    writer.flush()
}

fn csv_cells(table: &RhythmTable, cosinor: &Cosinor, component: &Component) -> [String; 12] {
    let numbers = [
        cosinor.mesor,
        cosinor.mesor_se,
        cosinor.r2,
        cosinor.p,
        component.period_h,
        component.amplitude,
        component.amplitude_se,
        component.acrophase_deg(),
        crate::numeric::circular::wrap(
            component.peak_h() + table.plan.reference_h,
            component.period_h,
        ),
        component.peak_se_h(),
        component.p,
    ];
    let mut cells: [String; 12] = Default::default();
    for (cell, number) in cells.iter_mut().skip(1).zip(numbers) {
        *cell = number.to_string();
    }
    cells
}
