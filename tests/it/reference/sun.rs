//! Sunrise and sunset against an ephemeris.
//!
//! Source: `solar_reference.csv`, computed with `PyEphem` (centre at -0:50), 24 cases at six places. Tolerance 10 s.

use acroshift::numeric::sun::{Daylight, Place, daylight};
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
