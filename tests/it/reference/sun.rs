//! Sunrise and sunset against an ephemeris.
//!
//! Source: `solar_reference.csv`, computed with `PyEphem` (centre at -0:50), 24 cases at six places. Tolerance 10 s.

use acroshift::numeric::sun::{
    Daylight, Place, Sky, daylight, elevation_deg, horizontal_illuminance_lux,
};
use chrono::{Datelike, NaiveDate};

/// `03:43:12` or `-05:19:08` in minutes.
fn minutes(text: &str) -> f64 {
    let (sign, text) = match text.strip_prefix('-') {
        Some(rest) => (-1.0, rest),
        None => (1.0, text),
    };
    let parts: Vec<f64> = text.split(':').map(|part| part.parse().unwrap()).collect();
    sign * (parts[0] * 60.0 + parts[1] + parts[2] / 60.0)
}

#[test]
fn sunrise_and_sunset_lie_within_ten_seconds_of_an_ephemeris() {
    let table = include_str!("data/solar_reference.csv");
    let (mut with_sun, mut without) = (0, 0);
    for line in table.lines().skip(1) {
        let cells: Vec<&str> = line.split(',').collect();
        let date: NaiveDate = cells[3].parse().unwrap();
        let place = Place {
            latitude_deg: cells[1].parse().unwrap(),
            longitude_deg: cells[2].parse().unwrap(),
        };
        match daylight(date.num_days_from_ce(), place) {
            Daylight::Between {
                sunrise_min,
                sunset_min,
            } => {
                for (found, text) in [(sunrise_min, cells[12]), (sunset_min, cells[13])] {
                    let seconds = (found - minutes(text)) * 60.0;
                    assert!(seconds.abs() <= 10.0, "{line}: {seconds:.1} s");
                }
                with_sun += 1;
            }
            Daylight::AllDay => {
                assert_eq!(cells[14], "polar day", "{line}");
                without += 1;
            }
            Daylight::None => {
                assert_eq!(cells[14], "polar night", "{line}");
                without += 1;
            }
        }
    }
    assert_eq!((with_sun, without), (22, 2));
}

/// Geometric elevations over London: circadian-models.md 5.6, from the same ephemeris.
#[test]
fn the_elevation_of_the_sun_agrees_with_an_ephemeris() {
    let london = Place {
        latitude_deg: 51.5074,
        longitude_deg: -0.1278,
    };
    for (date, hour, elevation) in [
        ("2024-06-21", 6.0, 17.781),
        ("2024-06-21", 12.0, 61.926),
        ("2024-12-21", 15.0, 5.194),
    ] {
        let date: NaiveDate = date.parse().unwrap();
        let found = elevation_deg(f64::from(date.num_days_from_ce()) + hour / 24.0, london);
        assert!((found - elevation).abs() < 0.01, "{date} {hour}: {found}");
    }
}

/// Horizontal daylight on day 172, clear, partly cloudy and overcast: circadian-models.md 5.4, computed there from the practice of 1984.
#[test]
fn daylight_by_elevation_and_sky_agrees_with_the_table() {
    let table = [
        (1.0, [2848.0, 1085.0, 667.0]),
        (5.0, [6341.0, 4223.0, 2130.0]),
        (10.0, [13646.0, 8328.0, 3947.0]),
        (20.0, [32681.0, 19756.0, 7482.0]),
        (30.0, [52256.0, 35243.0, 10800.0]),
        (45.0, [78600.0, 60237.0, 15149.0]),
        (60.0, [98989.0, 81654.0, 18487.0]),
    ];
    for (elevation, row) in table {
        for (sky, expected) in [Sky::Clear, Sky::PartlyCloudy, Sky::Overcast]
            .into_iter()
            .zip(row)
        {
            let found = horizontal_illuminance_lux(elevation, 172, sky);
            assert!(
                (found - expected).abs() < 1.0,
                "{elevation} {sky:?}: {found}"
            );
        }
    }
    assert!((horizontal_illuminance_lux(-6.0, 172, Sky::Clear) - 3.4).abs() < 0.01);
    assert!(horizontal_illuminance_lux(-10.0, 172, Sky::Clear).abs() < 1e-12);
}
