//! The codes that intake can print: a table, so that none can exist without an id, a name and a level.

use super::Level;

macro_rules! codes {
    ($($variant:ident $id:literal $name:literal $level:ident $about:literal;)*) => {
        /// A kind of problem in the user's data.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
        #[non_exhaustive]
        pub enum Code {
            $(#[doc = $about] $variant,)*
        }

        impl Code {
            /// Every code, in the order of the trap table.
            pub const ALL: &[Self] = &[$(Self::$variant,)*];

            /// Short id: `T21`.
            pub fn id(self) -> &'static str {
                match self { $(Self::$variant => $id,)* }
            }

            /// Readable code: `end-before-start-dated`.
            pub fn name(self) -> &'static str {
                match self { $(Self::$variant => $name,)* }
            }

            /// The level this code usually has.
            pub fn level(self) -> Level {
                match self { $(Self::$variant => Level::$level,)* }
            }

            /// What the code means, in one sentence.
            pub fn about(self) -> &'static str {
                match self { $(Self::$variant => $about,)* }
            }
        }
    };
}

codes! {
    EndBeforeStart "T01" "end-before-start" Note "the end lies before the start on one date and is read as the next day";
    StartEqualsEnd "T02" "start-equals-end" Error "start and end are equal: 0 h and 24 h cannot be told apart";
    MidnightAsTwentyFour "T03" "twenty-four-hundred" Note "24:00 is read as 00:00 of the next day";
    LongShift "T04" "long-shift" Warning "the shift is longer than 16 h; above 36 h it is not used";
    ShortShift "T05" "short-shift" Warning "the shift is shorter than 15 min";
    ClockGap "T06" "time-in-clock-gap" Warning "the local time was skipped by a clock change and is read with the offset before it";
    ClockFold "T07" "time-in-clock-fold" Warning "the local time occurs twice because of a clock change; the first is used";
    CrossesClockChange "T08" "crosses-clock-change" Note "the shift crosses a clock change; its length is elapsed time";
    NoZone "T10" "no-time-zone" Error "no time zone is given in the file or by --zone";
    UnknownZone "T11" "unknown-time-zone" Error "the time zone is not a name of the IANA time zone database";
    SeveralZones "T12" "several-zones" Warning "rows name several time zones; dates and clock windows are read in that of most rows";
    SkippedDate "T13" "skipped-date" Error "the local calendar of the zone has no such date";
    UnreadableTime "T17" "unreadable-time" Error "the text is not a time of day that can be read";
    EndBeforeStartDated "T21" "end-before-start-dated" Error "the end date-time lies before the start date-time";
    UnreadableDate "D09" "unreadable-date" Error "the text is not a date that can be read";
    SpanTooLong "D10" "span-too-long" Fatal "the rows span more than twenty years, which is a slip in a year";
    NothingInRange "D11" "nothing-in-range" Fatal "no shift lies between the first and the last date asked for";
    UnsortedRows "D05" "unsorted-rows" Note "rows are not in order of time; they are sorted";
    FirstRestUnknown "D08" "first-rest-unknown" Warning "no shifts before the first day are known, so the rest before it is not judged";
    ByteOrderMark "C01" "byte-order-mark" Note "a byte-order mark was removed";
    NotUtf8 "C03" "not-utf8" Warning "the file is not UTF-8 and is read as Windows-1252";
    Undecodable "C17" "not-text" Fatal "the file holds bytes that no text file has";
    Delimiter "C04" "delimiter" Note "the field delimiter was found from the file";
    RaggedRow "C06" "ragged-row" Error "the row has another number of fields than the header";
    NoRows "C08" "no-rows" Fatal "the file is empty or has no data rows";
    BlankRows "C09" "blank-rows" Note "blank rows were left out";
    DuplicateColumn "C10" "duplicate-column" Fatal "two columns have the same meaning";
    UnusedColumns "C11" "unused-columns" Note "columns that the program does not know were left out";
    MissingColumn "C18" "missing-column" Fatal "a column that is needed is missing";
    NearTwinWorkers "C14" "near-twin-workers" Warning "two worker names differ only by case or spaces and are kept apart";
    FormulaText "C15" "formula-text" Note "cells begin with a formula sign; they are text here and are quoted on output";
    ExactDuplicate "K04" "exact-duplicate" Note "a shift is repeated exactly and is counted once";
    Overlap "K05" "overlapping-shifts" Error "two shifts of one worker overlap: by at most 15 min they are joined (warning), by more neither is used";
    UnknownKind "K21" "unknown-kind" Error "the kind of duty is not one the program knows";
    MissingWorker "K15" "missing-worker" Error "the row has no worker";
    BadBreak "K20" "break-too-long" Error "the break is no number of minutes shorter than the shift";
    BadCommute "K22" "commute-unreadable" Error "the commute is no number of minutes up to 240";
    SampleUnitMissing "M01" "sample-unit-missing" Fatal "samples need a unit that is read: nmol/L, ug/dL or ng/mL";
    SampleUnitsMixed "M02" "sample-units-mixed" Fatal "a table of samples holds two units";
    SampleValue "M03" "sample-value-unusable" Error "the value is no concentration above 0";
    SampleTwice "M04" "sample-time-repeated" Error "a subject has two samples at one time; the first is used";
    SampleMatrix "M05" "sample-matrix-questioned" Warning "a salivary value lies in the range of serum";
    BelowLimit "M06" "below-detection-limit" Note "a sample lies below the limit of detection; half of the limit is used";
    SampleTimesMixed "M07" "sample-times-mixed" Error "a table of samples writes its times in two ways";
    SampleWaking "M08" "sample-waking-apart" Error "the waking time does not begin the day of its sample";
    SampleMatrixUnknown "M09" "sample-matrix-unknown" Warning "the matrix is a word that is not read, and counts as not said";
    LightUnusable "L01" "light-unusable" Error "the reading is no illuminance from 0 to 200000 lux";
    LightWorker "L02" "light-worker-unknown" Error "the roster has no worker of this name, so the reading is not used";
    Unsupported "X10" "unsupported-format" Fatal "the format of the file is not supported";
    SeveralTables "X09" "several-tables" Fatal "the workbook has several sheets with data";
    Unreadable "F01" "unreadable-file" Fatal "the file cannot be read";
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::collections::BTreeSet;

    #[test]
    fn ids_and_names_are_unique() {
        let ids: BTreeSet<_> = Code::ALL.iter().map(|c| c.id()).collect();
        let names: BTreeSet<_> = Code::ALL.iter().map(|c| c.name()).collect();
        assert_eq!(ids.len(), Code::ALL.len());
        assert_eq!(names.len(), Code::ALL.len());
    }

    #[test]
    fn names_are_kebab_case() {
        for code in Code::ALL {
            assert!(
                code.name()
                    .chars()
                    .all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-'),
                "{}",
                code.name()
            );
        }
    }
}
