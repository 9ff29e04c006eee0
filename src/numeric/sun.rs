//! Sunrise and sunset: when is it light outdoors at a place?
//!
//! | symbol | meaning | unit |
//! |---|---|---|
//! | `T` | Julian centuries since 2000-01-01 12:00 | century |
//! | `delta` | declination of the sun | rad |
//! | `E` | equation of time | min |

/// A place on earth.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    /// Degrees, north positive.
    pub latitude_deg: f64,
    /// Degrees, east positive.
    pub longitude_deg: f64,
}

/// Daylight of one date.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Daylight {
    /// Minutes after 00:00 UTC of the date; before 0 or after 1440 far from Greenwich.
    Between {
        /// Sunrise.
        sunrise_min: f64,
        /// Sunset.
        sunset_min: f64,
    },
    /// The sun does not set.
    AllDay,
    /// The sun does not rise.
    None,
}

/// Altitude of the sun's centre at sunrise and sunset: refraction and half its width.
const HORIZON_DEG: f64 = -0.833;
/// Days from 0001-01-01 (day 1) to 2000-01-01 12:00.
const J2000_FROM_COMMON_ERA: f64 = 730_120.5;

/// Daylight on the date that is `day_from_common_era` days after 0000-12-31 (chrono's count), at a place.
///
/// # Equation
///
/// ```text
/// cos H = (sin(-0.833 deg) - sin(latitude) sin(delta)) / (cos(latitude) cos(delta))
/// sunrise, sunset [min UTC] = 720 - 4 longitude - E -+ 4 H        (delta and E taken at the event itself, six rounds)
/// ```
///
/// # Range
///
/// Within 10 s of an ephemeris between 70 degrees north and south for years about 2024 (tested).
///
/// # Source
///
/// Meeus, Astronomical Algorithms, chapters 25 and 28, in the form of the NOAA sheet (from memory, checked against an ephemeris).
///
/// # Example
///
/// ```
/// use acroshift::numeric::sun::{daylight, Daylight, Place};
/// let london = Place { latitude_deg: 51.5074, longitude_deg: -0.1278 };
/// // 21 June 2024 is day 739058: sunrise 03:43:11 UTC.
/// match daylight(739_058, london) {
///     Daylight::Between { sunrise_min, .. } => assert!((sunrise_min - 223.2).abs() < 0.2),
///     other => panic!("{other:?}"),
/// }
/// ```
pub fn daylight(day_from_common_era: i32, place: Place) -> Daylight {
    match (
        event(day_from_common_era, place, -1.0),
        event(day_from_common_era, place, 1.0),
    ) {
        (Ok(sunrise_min), Ok(sunset_min)) => Daylight::Between {
            sunrise_min,
            sunset_min,
        },
        (Err(always), _) | (_, Err(always)) => always,
    }
}

/// Minute of sunrise (`side` -1) or sunset (`side` 1), or what the day is without one.
fn event(day: i32, place: Place, side: f64) -> Result<f64, Daylight> {
    const ROUNDS: usize = 6;
    let latitude = place.latitude_deg.to_radians();
    let solar_noon_min = 720.0 - 4.0 * place.longitude_deg;
    let mut minute = solar_noon_min;
    for _ in 0..ROUNDS {
        let (declination, equation_min) = sun(f64::from(day) + minute / 1440.0);
        let cosine = (libm::sin(HORIZON_DEG.to_radians())
            - libm::sin(latitude) * libm::sin(declination))
            / (libm::cos(latitude) * libm::cos(declination));
        if cosine > 1.0 {
            return Err(Daylight::None);
        }
        if cosine < -1.0 {
            return Err(Daylight::AllDay);
        }
        let hour_angle_deg = libm::acos(cosine).to_degrees();
        minute = solar_noon_min - equation_min + side * 4.0 * hour_angle_deg;
    }
    Ok(minute)
}

/// Declination (rad) and equation of time (min) at a moment, days of the common era.
fn sun(moment: f64) -> (f64, f64) {
    let t = (moment - J2000_FROM_COMMON_ERA) / 36_525.0;
    let mean_longitude = 280.46646 + t * (36000.76983 + 0.0003032 * t);
    let anomaly = (357.52911 + t * (35999.05029 - 0.0001537 * t)).to_radians();
    let eccentricity = 0.016708634 - t * (0.000042037 + 1.267e-7 * t);
    let centre = libm::sin(anomaly) * (1.914602 - t * (0.004817 + 0.000014 * t))
        + libm::sin(2.0 * anomaly) * (0.019993 - 0.000101 * t)
        + libm::sin(3.0 * anomaly) * 0.000289;
    let node = (125.04 - 1934.136 * t).to_radians();
    let longitude = (mean_longitude + centre - 0.00569 - 0.00478 * libm::sin(node)).to_radians();
    let seconds = 21.448 - t * (46.815 + t * (0.00059 - 0.001813 * t));
    let obliquity =
        (23.0 + (26.0 + seconds / 60.0) / 60.0 + 0.00256 * libm::cos(node)).to_radians();
    let declination = libm::asin(libm::sin(obliquity) * libm::sin(longitude));
    let half = libm::tan(obliquity / 2.0);
    let y = half * half;
    let l0 = mean_longitude.to_radians();
    let equation = y * libm::sin(2.0 * l0) - 2.0 * eccentricity * libm::sin(anomaly)
        + 4.0 * eccentricity * y * libm::sin(anomaly) * libm::cos(2.0 * l0)
        - 0.5 * y * y * libm::sin(4.0 * l0)
        - 1.25 * eccentricity * eccentricity * libm::sin(2.0 * anomaly);
    (declination, 4.0 * equation.to_degrees())
}
