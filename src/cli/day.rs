//! Today's date, for acceptances that run out.

use std::time::{Duration, SystemTime, UNIX_EPOCH};

/// Seconds of a day.
const DAY: u64 = 86_400;

/// Today as `YYYY-MM-DD` in UTC: of `SOURCE_DATE_EPOCH` where it is set, so that a run can be repeated, else of the
/// system's clock.
pub(super) fn today() -> String {
    let set = std::env::var("SOURCE_DATE_EPOCH").ok().and_then(|text| text.trim().parse().ok());
    let seconds =
        set.unwrap_or_else(|| SystemTime::now().duration_since(UNIX_EPOCH).map_or(0, |d: Duration| d.as_secs()));
    date(seconds)
}

/// The date of a time in seconds since 1970 (proleptic Gregorian calendar, counted in eras of 400 years from 1 March).
fn date(seconds: u64) -> String {
    // 0000-03-01 lies 719 468 days before 1970-01-01; an era has 146 097 days.
    let days = (seconds / DAY).min(2_900_000) + 719_468;
    let (era, day) = (days / 146_097, days % 146_097);
    let year = (day - day / 1_460 + day / 36_524 - day / 146_096) / 365;
    let in_year = day - (365 * year + year / 4 - year / 100);
    let month = (5 * in_year + 2) / 153;
    let day = in_year - (153 * month + 2) / 5 + 1;
    let (month, year) = if month < 10 { (month + 3, year) } else { (month - 9, year + 1) };
    format!("{:04}-{month:02}-{day:02}", year + era * 400)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn dates_follow_the_calendar() {
        for (seconds, expected) in [
            (0, "1970-01-01"),
            (951_782_399, "2000-02-28"),
            (951_782_400, "2000-02-29"),
            (951_868_800, "2000-03-01"),
            (1_767_225_599, "2025-12-31"),
            (1_767_225_600, "2026-01-01"),
            (4_107_542_400, "2100-03-01"),
        ] {
            assert_eq!(date(seconds), expected);
        }
        assert_eq!(date(u64::MAX).len(), 10);
    }
}
