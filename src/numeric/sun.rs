//! The sun over a place: when is it light outdoors, how high does it stand, how much light falls?
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

/// Elevation of the sun's centre above the horizon without refraction, degrees.
///
/// `moment` counts days of the common era (chrono's count) in UTC, with the time of day as a fraction.
///
/// # Source
///
/// As [`daylight`].
///
/// # Example
///
/// ```
/// use acroshift::numeric::sun::{elevation_deg, Place};
/// let london = Place { latitude_deg: 51.5074, longitude_deg: -0.1278 };
/// // 21 June 2024, 12:00 UTC: 61.926 degrees.
/// assert!((elevation_deg(739_058.5, london) - 61.926).abs() < 0.01);
/// ```
pub fn elevation_deg(moment: f64, place: Place) -> f64 {
    let (declination, equation_min) = sun(moment);
    let of_day_min = (moment - moment.floor()) * 1440.0;
    let hour_angle =
        ((of_day_min + equation_min + 4.0 * place.longitude_deg) / 4.0 - 180.0).to_radians();
    let latitude = place.latitude_deg.to_radians();
    let sine = libm::sin(latitude) * libm::sin(declination)
        + libm::cos(latitude) * libm::cos(declination) * libm::cos(hour_angle);
    libm::asin(sine.clamp(-1.0, 1.0)).to_degrees()
}

/// What the sky is like.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sky {
    /// 0 to 3 tenths of cloud.
    Clear,
    /// 4 to 7 tenths.
    PartlyCloudy,
    /// 8 to 10 tenths.
    Overcast,
}

impl Sky {
    /// The sky of a name: `clear`, `partly-cloudy`, `overcast`.
    pub fn named(name: &str) -> Option<Self> {
        match name {
            "clear" => Some(Self::Clear),
            "partly-cloudy" => Some(Self::PartlyCloudy),
            "overcast" => Some(Self::Overcast),
            _ => None,
        }
    }
}

/// Unobstructed horizontal daylight, lux.
///
/// # Equation
///
/// ```text
/// E = 127.5 klx (1 + 0.034 cos(2 pi (J - 2)/365));  sun = E exp(-c / sin a) sin a;  sky = A + B sin^C a  [klx]
/// clear c 0.21, A 0.8, B 15.5, C 0.5;  partly cloudy 0.80, 0.3, 45.0, 1;  overcast no sun, 0.3, 21.0, 1
/// below the horizon 400 lux at -0.8 degrees, 3.4 lux at -6 degrees, log-linear, 0 below -6 degrees
/// ```
///
/// # Units
///
/// `elevation_deg` degrees, `day_of_year` 1 to 366; result lux.
///
/// # Source
///
/// IES Recommended Practice of 1984 for the sun (seen as code); the constants of the sky from memory of the IES handbook;
/// twilight is this program's choice.
///
/// # Example
///
/// ```
/// use acroshift::numeric::sun::{horizontal_illuminance_lux, Sky};
/// assert!((horizontal_illuminance_lux(10.0, 172, Sky::Overcast) - 3947.0).abs() < 1.0);
/// ```
pub fn horizontal_illuminance_lux(elevation_deg: f64, day_of_year: u32, sky: Sky) -> f64 {
    if elevation_deg <= 0.0 {
        return twilight_lux(elevation_deg);
    }
    let sine = libm::sin(elevation_deg.to_radians());
    let turn = 2.0 * std::f64::consts::PI * (f64::from(day_of_year) - 2.0) / 365.0;
    let outside_klx = 127.5 * (1.0 + 0.034 * libm::cos(turn));
    let sun = |extinction: f64| outside_klx * libm::exp(-extinction / sine) * sine;
    let klx = match sky {
        Sky::Clear => sun(0.21) + 0.8 + 15.5 * sine.sqrt(),
        Sky::PartlyCloudy => sun(0.80) + 0.3 + 45.0 * sine,
        Sky::Overcast => 0.3 + 21.0 * sine,
    };
    1000.0 * klx
}

fn twilight_lux(elevation_deg: f64) -> f64 {
    const SUNSET: (f64, f64) = (-0.8, 400.0);
    const DUSK: (f64, f64) = (-6.0, 3.4);
    if elevation_deg < DUSK.0 {
        return 0.0;
    }
    let share = ((SUNSET.0 - elevation_deg) / (SUNSET.0 - DUSK.0)).max(0.0);
    SUNSET.1 * libm::pow(DUSK.1 / SUNSET.1, share)
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
