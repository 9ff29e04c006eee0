//! How many lane-days does one core simulate in a second?
//!
//! A lane-day is one member for one day.
//! Printed for each instruction set of the machine: the pacemaker alone under prescribed light, and the full coupled physiology
//! (sleep, light, pacemaker, cortisol cascade, daily features) on a roster of night blocks; then the cost at three sizes.
//! Run with `cargo bench --bench kernel`.
#![expect(
    clippy::print_stdout,
    clippy::disallowed_methods,
    reason = "what is measured or fitted is printed"
)]

use acroshift::numeric::instruction_set::InstructionSet;
use acroshift::physiology::pacemaker::{LANES, MarkerReader, Pacemaker, UnitDrive};
use acroshift::physiology::{
    Engine, Member, ModelSets, PacemakerName, Sampling, Simulation, members,
};
use acroshift::timeline::{CivilClock, CivilDay, DutySpan, HabitFile, MeasuredLight, Timeline};
use acroshift::units::{ClockHour, Minute, minutes_to_hours};
use chrono::{Days, NaiveDate};
use std::hint::black_box;
use std::time::Instant;

const DAY: i64 = 1440;

fn main() {
    println!("pacemaker alone, 16 lanes, 80 days, 10 changes of light a day");
    for set in InstructionSet::available() {
        for name in PacemakerName::ALL {
            let sets = ModelSets::with_pacemaker(name);
            let pacemaker = Pacemaker::on(set, &sets.pacemaker);
            let mut last = 0.0;
            let rate = lane_days_per_second(80 * 16, || last = pacemaker_days(&pacemaker, 80));
            println!(
                "{:>9} {:<12} {rate:>10.0} lane-days/s   last CBTmin {last:.6} h",
                set.name(),
                name.word()
            );
        }
    }
    println!("full physiology, 32 members, 80 days of 12-h night blocks");
    for set in InstructionSet::available() {
        let rate = physiology_rate(set, 1, 80, 32);
        println!("{:>9} {rate:>10.0} lane-days/s", set.name());
    }
    println!("cost against size, {}", InstructionSet::best().name());
    for (workers, days, size) in [
        (1, 80, 32),
        (2, 80, 32),
        (4, 80, 32),
        (1, 160, 32),
        (1, 320, 32),
        (1, 80, 64),
        (1, 80, 128),
    ] {
        let rate = physiology_rate(InstructionSet::best(), workers, days, size);
        println!("{workers:>3} workers {days:>4} days {size:>4} members {rate:>10.0} lane-days/s");
    }
}

/// The best of five runs.
fn lane_days_per_second(lane_days: u32, mut run: impl FnMut()) -> f64 {
    run();
    let best = (0..5)
        .map(|_| {
            let start = Instant::now();
            run();
            start.elapsed().as_secs_f64()
        })
        .fold(f64::INFINITY, f64::min);
    f64::from(lane_days) / best
}

/// Ten changes of light a day, from darkness to 1000 lux; gives the last `CBTmin`, hours.
fn pacemaker_days(pacemaker: &Pacemaker, days: u32) -> f64 {
    let blocks = [
        (420, 0.0, true),
        (60, 40.0, false),
        (60, 1000.0, false),
        (240, 120.0, false),
        (60, 300.0, false),
        (180, 120.0, false),
        (60, 1000.0, false),
        (120, 120.0, false),
        (180, 40.0, false),
        (60, 0.0, true),
    ];
    let mut state = pacemaker.start();
    let pace = [pacemaker.pace(24.15); LANES];
    let mut drive = UnitDrive::dark(pacemaker);
    let mut reader = MarkerReader::new();
    let mut last = 0.0;
    let mut now = 0;
    for _ in 0..days {
        for (minutes, lux, asleep) in blocks {
            (0..LANES).for_each(|lane| drive.set(pacemaker, lane, lux, asleep));
            let mut left = minutes;
            while left > 0 {
                let moved = pacemaker.advance(&mut state, &drive, &pace, (now, left));
                left -= moved.minutes;
                now += moved.minutes;
                if moved.passed {
                    let passing = &state.last_passing;
                    let length = Minute(passing.minutes).as_f64();
                    let step = (Minute(now).as_f64() - length, length);
                    let before = (passing.first[0], passing.second[0]);
                    let after = (state.first[0], state.second[0]);
                    if let Some(reading) = reader.read(pacemaker, step, before, after) {
                        last = reading.cbtmin_min / 60.0;
                    }
                }
            }
        }
    }
    black_box(&state);
    last
}

fn physiology_rate(set: InstructionSet, workers: u32, days: u32, size: usize) -> f64 {
    let sets = ModelSets::embedded();
    let engine = Engine::on(set, &sets);
    let sampling = Sampling {
        members: size,
        seed: 1,
        commute_min: 30.0,
        morning_daylight: None,
        habit: None,
    };
    let members: Vec<Member> = members(&sets.ensemble, sampling);
    let timelines: Vec<Timeline> = (0..workers)
        .map(|shift| night_blocks(days, shift))
        .collect();
    let warm = engine.warm_up(&members, &timelines[0].habits);
    let lane_days = workers * days * u32::try_from(members.len()).unwrap_or(0);
    lane_days_per_second(lane_days, || {
        for timeline in &timelines {
            let simulation: Simulation = engine.live(&warm, timeline);
            black_box(&simulation);
        }
    })
}

/// Four nights 19-07, four days off, over and over.
fn night_blocks(days: u32, shift: u32) -> Timeline {
    let days = i64::from(days);
    let date = NaiveDate::from_ymd_opt(2026, 1, 5).expect("a date");
    let clock = |at: i64| ClockHour::wrapping(minutes_to_hours(at));
    Timeline {
        duties: (0..days - 1)
            .filter(|day| (day + i64::from(shift)) % 8 < 4)
            .map(|day| DutySpan {
                start: Minute(day * DAY + 1140),
                end: Minute((day + 1) * DAY + 420),
                start_clock: clock(1140),
                end_clock: clock(420),
                commute_min: None,
                light: None,
                way_light: [None; 2],
                stress: 1.0,
            })
            .collect(),
        days: (0..days)
            .map(|day| CivilDay {
                date: date + Days::new(u64::try_from(day).unwrap_or(0)),
                start: Minute(day * DAY),
                end: Minute((day + 1) * DAY),
                sunrise: Minute(day * DAY + 420),
                sunset: Minute(day * DAY + 1140),
            })
            .collect(),
        clock: CivilClock::steady(),
        measured: MeasuredLight::default(),
        end: Minute(days * DAY),
        habits: HabitFile::embedded().habits(),
    }
}
