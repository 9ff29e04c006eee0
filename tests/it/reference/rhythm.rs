//! Cosinor, populations, circular statistics and regularity against numbers of general-purpose statistics libraries.
//!
//! Source: `cosinor_expected.json` (statsmodels 0.15.0, scipy 1.17.1, confirmed by R 4.2.2 to 2e-12), `circular_expected.json`,
//! `rhythm_quality_expected.json`. Tolerances as suggested there: 1e-9 relative for least squares, 1e-6 for optimised limits.
//! Data: `nelson1979.csv` (attributed to Nelson et al. 1979), `nottem.csv`, `beaver1.csv`, `beaver2.csv` (open data sets of R),
//! measured 24-h cortisol of control groups (public package `VeVaPy`, MIT), synthetic tables of the reference itself.

use acroshift::rhythm::cosinor::lack_of_fit;
use acroshift::rhythm::populations::{compare, population};
use acroshift::rhythm::regularity::{
    composite_phase_deviation, least_and_most, sleep_regularity, social_jetlag,
};
use acroshift::rhythm::{Cosinor, Design, Observation, Refusal, Vector, circular, fit};
use serde_json::Value;

const EXPECTED: &str = include_str!("data/cosinor_expected.json");
const LEAST_SQUARES: f64 = 1e-9;
const OPTIMISED: f64 = 1e-6;

fn expected() -> Value {
    serde_json::from_str(EXPECTED).unwrap()
}

#[track_caller]
fn check(what: &str, found: f64, expected: &Value, tolerance: f64) {
    let expected = expected
        .as_f64()
        .unwrap_or_else(|| panic!("{what} is not in the reference"));
    let off = (found - expected).abs() / expected.abs().max(1.0);
    assert!(off < tolerance, "{what}: {found}, expected {expected}");
}

#[track_caller]
fn check_pair(what: &str, found: Option<(f64, f64)>, expected: &Value, tolerance: f64) {
    match found {
        None => assert!(expected.is_null(), "{what} should be {expected}"),
        Some((low, high)) => {
            check(what, low, &expected[0], tolerance);
            check(what, high, &expected[1], tolerance);
        }
    }
}

fn degrees(limits: Option<(f64, f64)>) -> Option<(f64, f64)> {
    limits.map(|(low, high)| (low.to_degrees(), high.to_degrees()))
}

/// Everything that the reference prints of a fit.
#[track_caller]
fn check_fit(name: &str, found: &Cosinor, expected: &Value) {
    let number = |key: &str, found: f64| {
        check(
            &format!("{name} {key}"),
            found,
            &expected[key],
            LEAST_SQUARES,
        );
    };
    for (index, coefficient) in found.coefficients.iter().enumerate() {
        check(name, *coefficient, &expected["coef"][index], LEAST_SQUARES);
        for (column, covariance) in found.covariance[index].iter().enumerate() {
            check(
                name,
                *covariance,
                &expected["cov"][index][column],
                LEAST_SQUARES,
            );
        }
    }
    number("rss", found.rss);
    number("sigma", found.sigma);
    number("tss_centered", found.tss);
    number("r2", found.r2);
    number("F", found.f);
    number("p", found.p);
    number("se_mesor", found.mesor_se);
    check_pair(
        name,
        Some(found.mesor_limits),
        &expected["ci_mesor"],
        LEAST_SQUARES,
    );
    for (index, component) in found.components.iter().enumerate() {
        let expected = &expected["components"][index];
        let number = |key: &str, found: f64| {
            check(
                &format!("{name} {key}"),
                found,
                &expected[key],
                LEAST_SQUARES,
            );
        };
        number("amplitude", component.amplitude);
        number("acrophase_deg", component.acrophase_deg());
        number("peak_h", component.peak_h());
        number("se_amplitude", component.amplitude_se);
        number("se_acrophase_rad", component.acrophase_se_rad);
        number("se_peak_h", component.peak_se_h());
        number("cov_amp_phi", component.covariance);
        number("F", component.f);
        number("p", component.p);
        let pair = |key: &str, found: Option<(f64, f64)>, tolerance: f64| {
            check_pair(&format!("{name} {key}"), found, &expected[key], tolerance);
        };
        pair(
            "ci_amp_delta",
            Some(component.amplitude_delta),
            LEAST_SQUARES,
        );
        pair(
            "ci_phi_delta_deg",
            degrees(Some(component.acrophase_delta)),
            LEAST_SQUARES,
        );
        pair(
            "ci_phi_fieller_deg",
            degrees(component.acrophase_fieller),
            OPTIMISED,
        );
        pair(
            "ci_amp_conservative",
            Some(component.amplitude_conservative),
            OPTIMISED,
        );
        pair(
            "ci_phi_conservative_deg",
            degrees(component.acrophase_conservative),
            OPTIMISED,
        );
    }
    if found.components.len() > 1 {
        let shape = found.shape.unwrap();
        for (key, found) in [
            ("peak_time_h", shape.peak_h),
            ("peak_value", shape.peak),
            ("trough_time_h", shape.trough_h),
            ("trough_value", shape.trough),
            ("magnitude", shape.magnitude),
            ("orthophase_deg", shape.orthophase_deg),
            ("bathyphase_deg", shape.bathyphase_deg),
        ] {
            check(&format!("{name} {key}"), found, &expected[key], OPTIMISED);
        }
    }
}

fn observation(time_h: f64, value: f64) -> Observation {
    Observation {
        time_h,
        value,
        weight: 1.0,
    }
}

fn rows(csv: &str) -> Vec<Vec<&str>> {
    csv.lines()
        .skip(1)
        .map(|line| line.split(',').collect())
        .collect()
}

fn number(cell: &str) -> f64 {
    cell.trim().parse().unwrap()
}

/// Two columns of a data file, the first scaled to the unit of the period.
fn series(csv: &str, time: usize, value: usize, scale: impl Fn(f64) -> f64) -> Vec<Observation> {
    rows(csv)
        .iter()
        .map(|row| observation(scale(number(row[time])), number(row[value])))
        .collect()
}

#[test]
fn the_literature_example_is_reproduced() {
    let data = include_str!("data/nelson1979.csv");
    let samples = series(data, 0, 1, |degrees| degrees / 15.0);
    let found = fit(&samples, &Design::of(&[24.0])).unwrap();
    check_fit("Nelson", &found, &expected()["nelson1979"]);
    // The published results themselves.
    assert!((found.mesor - 99.7269745887).abs() < 1e-9);
    assert!((found.components[0].amplitude - 6.38383296016).abs() < 1e-9);
    assert!((found.components[0].acrophase_rad - -0.475_418_791_280_249_7).abs() < 1e-9);
}

#[test]
fn synthetic_cortisol_agrees_on_every_scale() {
    let expected = expected();
    for subject in ["S1", "S2", "S3"] {
        let all = rows(include_str!("data/cortisol_synth.csv"));
        let own: Vec<_> = all.iter().filter(|row| row[0] == subject).collect();
        let plain: Vec<_> = own
            .iter()
            .map(|r| observation(number(r[1]), number(r[2])))
            .collect();
        let logs: Vec<_> = own
            .iter()
            .map(|r| observation(number(r[1]), number(r[2]).ln()))
            .collect();
        let weighted: Vec<_> = own
            .iter()
            .map(|r| Observation {
                weight: number(r[3]),
                ..observation(number(r[1]), number(r[2]))
            })
            .collect();
        let expected = &expected["cortisol_synth"][subject];
        let one = Design::of(&[24.0]);
        let two = Design::of(&[24.0, 12.0]);
        for (key, samples, design) in [
            ("single", &plain, &one),
            ("two_component", &plain, &two),
            ("single_log", &logs, &one),
            ("two_component_log", &logs, &two),
            ("single_wls_nrep", &weighted, &one),
        ] {
            let found = fit(samples, design).unwrap();
            check_fit(&format!("{subject} {key}"), &found, &expected[key]);
        }
        // The test of the second period is the test of adding it.
        let both = fit(&plain, &two).unwrap();
        check(
            "adding 12 h",
            both.components[1].f,
            &expected["add_12h"]["F"],
            LEAST_SQUARES,
        );
        check(
            "adding 12 h",
            both.components[1].p,
            &expected["add_12h"]["p"],
            LEAST_SQUARES,
        );
        // With the shares of both periods all of R2 is told.
        let shares: f64 = both.components.iter().map(|c| c.percent).sum();
        assert!((shares - 100.0 * both.r2).abs() < 1e-9);
    }
}

#[test]
fn open_data_sets_agree_with_the_libraries() {
    let expected = expected();
    let beavers = [
        ("beaver1", include_str!("data/beaver1.csv")),
        ("beaver2", include_str!("data/beaver2.csv")),
    ];
    for (name, data) in beavers {
        let samples = series(data, 0, 1, |minute| minute / 60.0);
        let found = fit(&samples, &Design::of(&[24.0])).unwrap();
        check_fit(name, &found, &expected[name]["single"]);
    }
    // Twenty years of months: replicates at each phase.
    let samples: Vec<_> = rows(include_str!("data/nottem.csv"))
        .iter()
        .map(|row| observation(number(row[1]), number(row[3])))
        .collect();
    for (key, periods) in [("single", &[12.0][..]), ("two", &[12.0, 6.0][..])] {
        let found = fit(&samples, &Design::of(periods)).unwrap();
        check_fit(key, &found, &expected["nottem"][key]);
        let lack = lack_of_fit(&samples, &found).unwrap();
        let expected = &expected["nottem"][format!("{key}_lof")];
        for (key, found) in [
            ("sspe", lack.pure_error),
            ("sslof", lack.lack),
            ("F", lack.f),
            ("p", lack.p),
        ] {
            check(key, found, &expected[key], LEAST_SQUARES);
        }
    }
}

/// Control groups of published studies: verified.md A3 prints one and two decimals.
#[test]
fn measured_cortisol_of_control_groups_is_fitted_as_the_reference_does() {
    let groups = [
        (
            include_str!("data/Carroll-2007-controlGroupCortisol.txt"),
            1.0 / 60.0,
            0.0,
            [5.58, 4.14, 9.45, 0.848, 8.13, 23.07, 0.906],
        ),
        (
            include_str!("data/Yehuda-1996-control-cortisol.txt"),
            1.0 / 60.0,
            10.0,
            [9.29, 3.65, 10.90, 0.535, 8.12, 0.73, 0.873],
        ),
        (
            include_str!("data/Golier-2007-non-exposed-control-cortisol.txt"),
            1.0,
            6.25,
            [6.84, 3.68, 10.08, 0.875, 8.92, 23.85, 0.936],
        ),
        (
            include_str!("data/Bremner-2007-non-abused-non-PTSD-cortisol.txt"),
            1.0,
            17.0,
            [9.33, 4.97, 11.43, 0.854, 9.68, 1.05, 0.950],
        ),
        (
            include_str!("data/Bangsgaard-Ottesen-2017-patient-f-cortisol-data.txt"),
            1.0,
            0.0,
            [5.24, 5.21, 9.65, 0.696, 9.32, 0.47, 0.778],
        ),
    ];
    for (data, hours, origin, [m, a, peak, r2, peak2, trough2, r2_2]) in groups {
        let samples: Vec<_> = data
            .lines()
            .map(|line| {
                let mut cells = line.split_whitespace().map(number);
                let (time, value) = (cells.next().unwrap(), cells.next().unwrap());
                observation((time * hours + origin) % 24.0, value)
            })
            .collect();
        let one = fit(&samples, &Design::of(&[24.0])).unwrap();
        let two = fit(&samples, &Design::of(&[24.0, 12.0])).unwrap();
        let shape = two.shape.unwrap();
        let close = |found: f64, expected: f64, within: f64| {
            let off = acroshift::numeric::circular::wrap_half(found - expected, 24.0).abs();
            assert!(off <= within, "{found}, expected {expected}");
        };
        close(one.mesor, m, 0.006);
        close(one.components[0].amplitude, a, 0.006);
        close(one.components[0].peak_h(), peak, 0.011);
        close(one.r2, r2, 0.0006);
        // Times of the curve were read on a grid of minutes.
        close(shape.peak_h, peak2, 0.02);
        close(shape.trough_h, trough2, 0.02);
        close(two.r2, r2_2, 0.0006);
    }
}

fn vectors(group: &str) -> Vec<Vector> {
    rows(include_str!("data/pop_params_synth.csv"))
        .iter()
        .filter(|row| row[0] == group)
        .map(|row| {
            Vector::of_amplitude(number(row[2]), number(row[3]), number(row[4]).to_radians())
        })
        .collect()
}

#[test]
fn populations_and_their_comparison_agree_with_the_corrected_tests() {
    let expected = &expected()["pop_params_synth"];
    let groups: Vec<_> = ["day", "night"]
        .map(|group| {
            let found = population(&vectors(group), 0.95).unwrap();
            let expected = &expected[group];
            for (key, found) in [
                ("mesor", found.mesor),
                ("amplitude", found.amplitude),
                ("acrophase_rad", found.acrophase_rad),
                ("F", found.f),
                ("p", found.p),
            ] {
                check(key, found, &expected[key], LEAST_SQUARES);
            }
            check_pair(
                "mesor",
                Some(found.mesor_limits),
                &expected["ci_mesor"],
                LEAST_SQUARES,
            );
            check_pair(
                "amplitude",
                Some(found.amplitude_limits),
                &expected["ci_amp"],
                LEAST_SQUARES,
            );
            check_pair(
                "acrophase",
                degrees(found.acrophase_limits),
                &expected["ci_phi_deg"],
                OPTIMISED,
            );
            check_pair(
                "conservative",
                Some(found.amplitude_conservative),
                &expected["ci_amp_conservative"],
                OPTIMISED,
            );
            check_pair(
                "conservative",
                degrees(found.acrophase_conservative),
                &expected["ci_phi_conservative_deg"],
                OPTIMISED,
            );
            found
        })
        .into();
    let found = compare(&groups).unwrap();
    let expected = &expected["compare"];
    for (key, test) in [
        ("mesor", found.mesor),
        ("phase", found.acrophase),
        ("amp", found.amplitude),
    ] {
        check(key, test.f, &expected[format!("F_{key}")], LEAST_SQUARES);
        check(key, test.p, &expected[format!("p_{key}")], LEAST_SQUARES);
    }
    let joint = found.joint.unwrap();
    check(
        "joint",
        joint.f,
        &expected["joint_beta_gamma"]["F"],
        LEAST_SQUARES,
    );
    check(
        "joint",
        joint.p,
        &expected["joint_beta_gamma"]["p"],
        LEAST_SQUARES,
    );
}

#[test]
fn directions_agree_with_the_textbook_and_the_libraries() {
    let file: Value = serde_json::from_str(include_str!("data/circular_expected.json")).unwrap();
    let values = |value: &Value| -> Vec<f64> {
        value
            .as_array()
            .unwrap()
            .iter()
            .map(|v| v.as_f64().unwrap())
            .collect()
    };
    for (name, key, period, unit) in [
        ("zar_ex26_4", "theta_deg", 360.0, "deg"),
        ("midsleep_synth", "hours", 24.0, "h"),
    ] {
        let expected = &file[name];
        let found = circular::directions(&values(&expected[key]), period).unwrap();
        check(
            "mean",
            found.mean,
            &expected[format!("mean_{unit}")],
            LEAST_SQUARES,
        );
        check("R", found.length, &expected["R"], LEAST_SQUARES);
        check(
            "SD",
            found.sd,
            &expected[format!("circ_sd_{unit}")],
            LEAST_SQUARES,
        );
        check("z", found.z, &expected["z"], LEAST_SQUARES);
        check("p", found.p, &expected["p_rayleigh_zar"], LEAST_SQUARES);
        let se_rad = found.mean_se * std::f64::consts::TAU / period;
        check("SE", se_rad, &expected["se_mean_rad_fisher"], LEAST_SQUARES);
    }
    let zar = &file["zar_ex27_2_v_test"];
    let (u, p) = circular::v_test(&values(&zar["theta_deg"]), 90.0, 360.0).unwrap();
    check("u", u, &zar["u"], LEAST_SQUARES);
    check("p", p, &zar["p_normal"], LEAST_SQUARES);
    // Fisher's 254 arrivals: probability 1.7e-12 without loss of digits.
    let arrivals: Vec<f64> = rows(include_str!("data/fisher_b1_icu.csv"))
        .iter()
        .map(|row| number(row[row.len() - 1]))
        .collect();
    let found = circular::directions(&arrivals, 24.0).unwrap();
    let copies = [&file["fisher_b1_pypi_copy"], &file["fisher_b1_r_copy"]];
    assert!(
        copies
            .iter()
            .any(|copy| (found.mean - copy["mean_h"].as_f64().unwrap()).abs() < 1e-9)
    );
}

#[test]
fn regularity_measures_agree_with_their_definitions() {
    let file: Value =
        serde_json::from_str(include_str!("data/rhythm_quality_expected.json")).unwrap();
    let hourly: Vec<f64> = file["profile"]
        .as_array()
        .unwrap()
        .iter()
        .map(|v| v.as_f64().unwrap())
        .collect();
    let found = least_and_most(&hourly.try_into().unwrap());
    check("L5", found.l5, &file["L5"], LEAST_SQUARES);
    check(
        "L5 onset",
        found.l5_onset_h,
        &file["L5_onset_h"],
        LEAST_SQUARES,
    );
    check("M10", found.m10, &file["M10"], LEAST_SQUARES);
    check(
        "M10 onset",
        found.m10_onset_h,
        &file["M10_onset_h"],
        LEAST_SQUARES,
    );
    check("RA", found.relative_amplitude, &file["RA"], LEAST_SQUARES);
    let example = &file["SRI_example"];
    let states: Vec<_> = example["S"]
        .as_array()
        .unwrap()
        .iter()
        .flat_map(|day| {
            day.as_array()
                .unwrap()
                .iter()
                .map(|s| Some(s.as_i64() == Some(1)))
        })
        .collect();
    check(
        "SRI",
        sleep_regularity(&states, 12).unwrap(),
        &example["SRI"],
        LEAST_SQUARES,
    );
    let example = &file["CPD_example"];
    let mids: Vec<f64> = example["midsleep_h"]
        .as_array()
        .unwrap()
        .iter()
        .map(|v| v.as_f64().unwrap())
        .collect();
    check(
        "CPD",
        composite_phase_deviation(&mids, 4.0).unwrap(),
        &example["CPD"],
        LEAST_SQUARES,
    );
    for example in file["SJL_examples"].as_array().unwrap() {
        let hours = |key: &str| example[key].as_f64().unwrap();
        check(
            "SJL",
            social_jetlag(hours("msw"), hours("msf")),
            &example["sjl_rel"],
            LEAST_SQUARES,
        );
    }
}

#[test]
fn moving_time_or_scale_moves_only_what_it_should() {
    let all = rows(include_str!("data/cortisol_synth.csv"));
    let samples: Vec<_> = all
        .iter()
        .filter(|row| row[0] == "S1")
        .map(|row| observation(number(row[1]), number(row[2])))
        .collect();
    let design = Design::of(&[24.0, 12.0]);
    let base = fit(&samples, &design).unwrap();
    let moved: Vec<_> = samples
        .iter()
        .map(|s| observation(s.time_h + 53.0, 2.0 * s.value + 7.0))
        .collect();
    let found = fit(&moved, &design).unwrap();
    assert!((found.mesor - (2.0 * base.mesor + 7.0)).abs() < 1e-9);
    assert!((found.r2 - base.r2).abs() < 1e-12 && (found.p - base.p).abs() < 1e-12);
    for (found, base) in found.components.iter().zip(&base.components) {
        assert!((found.amplitude - 2.0 * base.amplitude).abs() < 1e-9);
        let later = found.peak_h() - base.peak_h() - 53.0;
        assert!(acroshift::numeric::circular::wrap_half(later, base.period_h).abs() < 1e-9);
    }
}

#[test]
fn designs_that_cannot_tell_a_rhythm_are_refused() {
    let at = |hours: &[f64]| -> Vec<Observation> {
        hours
            .iter()
            .zip([3.0, 5.0, 4.0, 6.0, 5.0])
            .map(|(h, v)| observation(*h, v))
            .collect()
    };
    let design = Design::of(&[24.0]);
    assert!(matches!(
        fit(&at(&[8.0, 12.0, 20.0]), &design),
        Err(Refusal::TooFew { needed: 4, .. })
    ));
    assert!(matches!(
        fit(&at(&[8.0, 10.0, 12.0, 14.0]), &design),
        Err(Refusal::Design { .. })
    ));
    assert!(matches!(
        fit(&at(&[8.0, f64::NAN, 12.0, 20.0]), &design),
        Err(Refusal::NotFinite { index: 2, .. })
    ));
    // 07, 11, 15, 19, 23 h: condition 1.77.
    let spread = fit(&at(&[7.0, 11.0, 15.0, 19.0, 23.0]), &design).unwrap();
    assert!((spread.sampling.condition - 1.77).abs() < 0.01 && !spread.sampling.is_weak());
}
