//! Rhythms as lines for the terminal.

use super::{CAUTION, hours, longest, when};
use crate::rhythm::groups::{GroupComparison, GroupPopulation};
use crate::rhythm::populations::Test;
use crate::rhythm::subjects::{RhythmTable, SalivaDay, SubjectRhythm};
use crate::rhythm::{Component, Cosinor};
use std::io::{self, Write};

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
            described(&subject.specimen, subject.group.as_deref()),
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
        text_of_timing(subject, out)?;
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
    for comparison in &table.comparisons {
        text_of_comparison(comparison, out)?;
    }
    Ok(())
}

/// Specimen, and group where there is one.
fn described(specimen: &str, group: Option<&str>) -> String {
    match group {
        Some(group) => format!("{specimen}, group {group}"),
        None => specimen.to_owned(),
    }
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

/// Results with and without the days whose first sample came late, where these differ.
fn text_of_timing(subject: &SubjectRhythm, out: &mut impl Write) -> io::Result<()> {
    let (all, on_time) = subject.response_with_and_without();
    let Some(mean) = all.mean_increase else {
        return Ok(());
    };
    write!(
        out,
        "  waking response over {} days: mean increase {mean:.2} nmol/L",
        all.days
    )?;
    match on_time.mean_increase {
        _ if on_time.days == all.days => writeln!(out),
        Some(mean) => writeln!(
            out,
            "; over the {} with a first sample within 5 min of waking: {mean:.2} nmol/L",
            on_time.days
        ),
        None => writeln!(out, "; no day has a first sample within 5 min of waking"),
    }
}

fn text_of_population(
    table: &RhythmTable,
    of: &GroupPopulation,
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
        described(&of.specimen, of.group.as_deref()),
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

/// One period only, whatever the design: the tests are those of the first.
fn text_of_comparison(comparison: &GroupComparison, out: &mut impl Write) -> io::Result<()> {
    let names = comparison.groups.join(", ");
    write!(out, "\nGroups {names} ({}): ", comparison.specimen)?;
    match &comparison.tests {
        Err(why) => writeln!(out, "not compared: {why}"),
        Ok(tests) => {
            let mut told = vec![
                tested("MESOR", &tests.mesor),
                tested("acrophase", &tests.acrophase),
                tested("amplitude", &tests.amplitude),
            ];
            told.extend(
                tests
                    .joint
                    .iter()
                    .map(|t| tested("amplitude and acrophase at once", t)),
            );
            writeln!(
                out,
                "{}. The test of the amplitude alone says nothing where acrophases differ.",
                told.join("; ")
            )
        }
    }
}

fn tested(what: &str, test: &Test) -> String {
    format!(
        "{what} F({:.0}, {:.0}) {:.2}, p {}",
        test.df.0,
        test.df.1,
        test.f,
        probability(test.p)
    )
}
