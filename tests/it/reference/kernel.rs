//! The integration kernel against itself: steps, instruction sets, and the photoreceptors it solves exactly.
//!
//! Accuracy against an adaptive solver stands in `pacemaker.rs` and `cascade.rs`; here the coupled run is compared with the same kernel in
//! steps of one minute over 80 days with night blocks. Limits: `CBTmin` 1 min, daily mean, peak and nadir 1 nmol/L.

use acroshift::numeric::instruction_set::InstructionSet;
use acroshift::physiology::pacemaker::{LANES, Pacemaker, UnitDrive};
use acroshift::physiology::{
    Engine, Member, ModelSets, PacemakerName, Sampling, Simulation, members,
};
use acroshift::timeline::{CivilClock, CivilDay, DutySpan, HabitFile, MeasuredLight, Timeline};
use acroshift::units::{ClockHour, Minute, minutes_to_hours};
use chrono::{Days, NaiveDate};

const DAY: i64 = 1440;

/// Four 12-h nights, four days off, over and over; one duty in eight begins at an odd minute.
fn night_blocks(days: i64) -> Timeline {
    let date = NaiveDate::from_ymd_opt(2026, 1, 5).unwrap();
    let clock = |at: i64| ClockHour::wrapping(minutes_to_hours(at));
    Timeline {
        duties: (0..days - 1)
            .filter(|day| day % 8 < 4)
            .map(|day| DutySpan {
                start: Minute(day * DAY + 1140 + day % 8 % 2),
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
                date: date + Days::new(u64::try_from(day).unwrap()),
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

fn ensemble(sets: &ModelSets) -> Vec<Member> {
    let sampling = Sampling {
        members: 32,
        seed: 1,
        commute_min: 30.0,
        morning_daylight: None,
        habit: None,
    };
    members(&sets.ensemble, sampling)
}

fn lived(engine: &Engine, sets: &ModelSets, days: i64) -> Simulation {
    let timeline = night_blocks(days);
    let warm = engine.warm_up(&ensemble(sets), &timeline.habits);
    engine.live(&warm, &timeline)
}

#[test]
fn eighty_days_of_night_blocks_do_not_depend_on_the_step() {
    let sets = ModelSets::embedded();
    let fast = lived(&Engine::new(&sets), &sets, 80);
    let fine = lived(&Engine::in_minutes(&sets), &sets, 80);
    let mut worst_cbtmin = 0.0_f64;
    for (fast, fine) in fast.tracks.iter().zip(&fine.tracks) {
        assert_eq!(fast.cbtmin_min.len(), fine.cbtmin_min.len());
        for (a, b) in fast.cbtmin_min.iter().zip(&fine.cbtmin_min) {
            worst_cbtmin = worst_cbtmin.max((a - b).abs());
        }
    }
    let mut worst = [0.0_f64; 3];
    for (fast, fine) in fast.days.iter().flatten().zip(fine.days.iter().flatten()) {
        for (worst, (a, b)) in worst.iter_mut().zip([
            (fast.mean, fine.mean),
            (fast.peak, fine.peak),
            (fast.nadir, fine.nadir),
        ]) {
            *worst = worst.max((a - b).abs());
        }
    }
    assert!(worst_cbtmin < 1.0, "CBTmin differs by {worst_cbtmin} min");
    assert!(
        worst.iter().all(|off| *off < 1.0),
        "mean, peak and nadir differ by {worst:?} nmol/L"
    );
}

#[test]
fn every_instruction_set_gives_the_same_bits() {
    for name in PacemakerName::ALL {
        let sets = ModelSets::with_pacemaker(name);
        let runs: Vec<Simulation> = InstructionSet::available()
            .into_iter()
            .map(|set| lived(&Engine::on(set, &sets), &sets, 8))
            .collect();
        for run in &runs[1..] {
            assert_eq!(bits(run), bits(&runs[0]), "{}", name.word());
        }
    }
}

/// Every number of a simulation, as bits.
fn bits(simulation: &Simulation) -> Vec<u64> {
    let markers = simulation.tracks.iter().flat_map(|t| t.cbtmin_min.clone());
    let days = simulation
        .days
        .iter()
        .flatten()
        .flat_map(|d| [d.mean, d.amplitude, d.acrophase_min, d.peak, d.nadir]);
    let curve = simulation.curve.iter().map(|sample| sample.nmol_l.median);
    markers.chain(days).chain(curve).map(f64::to_bits).collect()
}

/// Halving the step of a fourth-order method divides its error by about sixteen.
#[test]
fn the_integration_is_of_fourth_order() {
    let end_state = |step: i64| {
        let sets = ModelSets::embedded();
        let pacemaker = Pacemaker::new(&sets.pacemaker).with_longest_step(step);
        let mut state = pacemaker.start();
        let mut drive = UnitDrive::dark(&pacemaker);
        // Bright light of 10 000 lux for six hours: the hardest stretch of the reference runs.
        (0..LANES).for_each(|lane| drive.set(&pacemaker, lane, 10_000.0, false));
        let pace = [pacemaker.pace(24.15); LANES];
        let mut left = 360;
        while left > 0 {
            left -= pacemaker
                .advance(&mut state, &drive, &pace, (360 - left, left))
                .minutes;
        }
        [state.first[0], state.second[0]]
    };
    let exact = end_state(1);
    let error = |step: i64| {
        let state = end_state(step);
        (state[0] - exact[0]).hypot(state[1] - exact[1])
    };
    // 6 against 3 min; the run in steps of 1 min stands for the exact one.
    let order = (error(6) / error(3)).log2();
    assert!((3.5..5.0).contains(&order), "order {order:.2}");
}
