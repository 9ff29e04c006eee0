//! Zones are named as in the IANA time zone database; anything else is told what to write instead.

use super::table::short;
use chrono_tz::Tz;

/// A zone by its IANA name; otherwise what to write instead.
///
/// # Errors
///
/// A sentence for the person who gave the name.
///
/// # Example
///
/// ```
/// use acroshift::intake::zone_name::zone_named;
/// assert!(zone_named("Europe/London").is_ok());
/// assert!(zone_named("Europe/Londn").unwrap_err().contains("Europe/London"));
/// assert!(zone_named("BST").unwrap_err().contains("ambiguous"));
/// ```
pub fn zone_named(name: &str) -> Result<Tz, String> {
    let name = name.trim();
    if name == "UTC" {
        return Ok(Tz::UTC);
    }
    if !name.contains('/') {
        return Err(format!(
            "zone {:?} is ambiguous or no zone; use a name such as Europe/London, or UTC",
            short(name)
        ));
    }
    name.parse::<Tz>().map_err(|_| {
        let near = chrono_tz::TZ_VARIANTS
            .iter()
            .map(|zone| (strsim::damerau_levenshtein(zone.name(), name), zone.name()))
            .min();
        let advice = near
            .filter(|(distance, _)| *distance <= 3)
            .map(|(_, zone)| format!("; did you mean {zone}?"))
            .unwrap_or_default();
        format!(
            "zone {:?} is not in the IANA time zone database{advice}",
            short(name)
        )
    })
}
