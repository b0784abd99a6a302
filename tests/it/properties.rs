//! What must hold of every placement: a lot moved and turned keeps its diameter, a relaxed rule never shrinks it, one more
//! keep-clear thing never grows it, and a planted answer is found. Seeded, with near-degenerate lots among them.

use crate::support::{
    Seeded, area, diameter, keep_clear, lot_with_setbacks, moved, place, site, star, with_reading,
};
use roundstead::geom::{Point, Vec2};
use roundstead::limits::Limits;
use roundstead::placement::{BINDING_SPARE_M, Effort, Status, report};
use roundstead::site::{From, Lot, Rule, Shape, Site, Structure, To, YardReading};

/// The two gaps of two placements, m.
const GAPS_M: f64 = 3e-9;

#[test]
fn a_lot_moved_and_turned_keeps_its_diameter() {
    let mut seeded = Seeded::new(11);
    for _ in 0..100 {
        let n = 4 + seeded.below(30);
        let lot = area(&[star(&mut seeded, n, 20.0, 80.0)]);
        let by = Vec2::new(seeded.between(-500.0, 500.0), seeded.between(-500.0, 500.0));
        let elsewhere = moved(&lot, seeded.between(0.0, std::f64::consts::TAU), by);
        let setback = seeded.between(0.0, 6.0);
        for reading in [YardReading::Parallel, YardReading::Rounded] {
            let there = |area: &roundstead::geom::Area| {
                let setbacks = vec![setback; area.n_segments()];
                diameter(&with_reading(
                    &Site::of_lot(lot_with_setbacks(area.clone(), &setbacks)),
                    reading,
                ))
            };
            let (here, there) = (there(&lot), there(&elsewhere));
            // Turning rounds the corners by a part in 1e16 of 600 m.
            assert!(
                (here - there).abs() < GAPS_M + 1e-9,
                "{here} m here, {there} m there"
            );
        }
    }
}

#[test]
fn relaxing_never_shrinks_and_another_thing_never_grows() {
    let mut seeded = Seeded::new(12);
    for _ in 0..150 {
        let mut site = site(&mut seeded);
        site.reading = [YardReading::Parallel, YardReading::Rounded][seeded.below(2)];
        let before = diameter(&site);
        let mut more = site.clone();
        let c = Point::new(seeded.between(-40.0, 40.0), seeded.between(-40.0, 40.0));
        more.keep_clear
            .push(keep_clear(Shape::Point(c), seeded.between(0.0, 10.0)));
        let with_more = diameter(&more);
        assert!(
            with_more <= before + GAPS_M,
            "one more point grew {before} m to {with_more} m"
        );
        let mut relaxed = site.clone();
        relaxed
            .keep_clear
            .iter_mut()
            .for_each(|k| k.required_m *= 0.5);
        if site.reading == YardReading::Rounded {
            let halves: Vec<f64> = (0..site.lot.area().n_segments())
                .map(|i| 0.5 * site.lot.boundary(i).setback_m)
                .collect();
            relaxed.lot = lot_with_setbacks(site.lot.area().clone(), &halves);
        }
        let after = diameter(&relaxed);
        assert!(
            after >= before - GAPS_M,
            "relaxing shrank {before} m to {after} m"
        );
    }
}

#[test]
fn a_planted_circle_is_found() {
    let mut seeded = Seeded::new(13);
    for _ in 0..200 {
        // A polygon round a circle, each side touching it, thinned into needles by moving the tangent points together.
        let n = 3 + seeded.below(6);
        let r = seeded.between(1.0, 40.0);
        let spread = seeded.between(0.02, 1.0);
        let angles: Vec<f64> = (0..n)
            .map(|i| {
                let even = i as f64 / n as f64 * std::f64::consts::TAU;
                even + spread * seeded.between(-0.4, 0.4) / n as f64
            })
            .collect();
        let meet = |a: f64, b: f64| {
            let (mid, half) = (0.5 * (a + b), 0.5 * (b - a));
            [r / half.cos() * mid.cos(), r / half.cos() * mid.sin()]
        };
        let ring = (0..n).map(|i| {
            let next = if i + 1 == n {
                angles[0] + std::f64::consts::TAU
            } else {
                angles[i + 1]
            };
            meet(angles[i], next)
        });
        let found = diameter(&Site::of_lot(Lot::plain(area(&[ring.collect()]))));
        assert!(
            (found - 2.0 * r).abs() < 1e-8,
            "{found} m found round a planted {} m",
            2.0 * r
        );
    }
}

#[test]
fn rules_with_shares_floors_and_caps_meet_closed_forms() {
    // A square of 20 m; the distance from the shell to its lot lines is to be half the diameter: 2 r + 2 · r ... the centre
    // is 10 m from every side, and 10 = r + 0.5 · 2 r, so that r = 5.
    let square = || {
        Site::of_lot(Lot::plain(area(&[vec![
            [0.0, 0.0],
            [20.0, 0.0],
            [20.0, 20.0],
            [0.0, 20.0],
        ]])))
    };
    let with = |rule: Rule| {
        diameter(&Site {
            rules: vec![rule],
            ..square()
        })
    };
    let half = Rule {
        share_of_diameter: 0.5,
        ..Rule::fixed(To::LotLines, 0.0)
    };
    let check = |found: f64, expected: f64| {
        assert!((found - expected).abs() < 1e-8, "{found} is not {expected}")
    };
    check(with(half.clone()), 10.0);
    // Need not exceed 3 m: 10 = r + 3. At least 6 m: 10 = r + 6, where half the diameter (4 m) asks for less.
    check(
        with(Rule {
            need_not_exceed_m: Some(3.0),
            ..half.clone()
        }),
        14.0,
    );
    check(
        with(Rule {
            at_least_m: Some(6.0),
            ..half
        }),
        8.0,
    );
    // From the centre, 1.1 times a height of 8 m: 8.8 m are there, so the shell fills the square.
    let mast = Rule {
        from: From::Centre,
        share_of_height: 1.1,
        ..Rule::fixed(To::LotLines, 0.0)
    };
    let structure = |height_m| Structure {
        height_m: Some(height_m),
        ..Structure::default()
    };
    check(
        diameter(&Site {
            rules: vec![mast.clone()],
            structure: structure(8.0),
            ..square()
        }),
        20.0,
    );
    // 1.1 times 9.5 m is more than the 10 m there are.
    let tall = Site {
        rules: vec![mast],
        structure: structure(9.5),
        ..square()
    };
    assert_eq!(place(&tall).status, Status::NoRoom);
}

#[test]
fn reports_agree_with_the_placement() {
    let mut seeded = Seeded::new(14);
    let mut n_binding = 0;
    for _ in 0..100 {
        let mut site = site(&mut seeded);
        site.reading = [YardReading::Parallel, YardReading::Rounded][seeded.below(2)];
        let limits = Limits::new(&site).expect("the site holds");
        let placement = place(&site);
        let report = report(&limits, &site, &placement, Effort::default(), &|p| p)
            .expect("the report holds");
        let Some(circle) = placement.circle else {
            continue;
        };
        for limit in &report.limits {
            assert!(limit.spare_m > -1e-9, "{limit:?} is broken");
            assert_eq!(limit.is_binding, limit.spare_m < BINDING_SPARE_M);
            assert!(
                limit.is_binding
                    || limit.relief_gain == 0.0
                    || site.reading == YardReading::Parallel,
                "{limit:?}"
            );
            n_binding += usize::from(limit.is_binding);
        }
        assert!(
            report.limits.iter().any(|l| l.is_binding),
            "nothing binds the best circle"
        );
        for spot in &report.other_spots {
            assert!(spot.diameter_m <= placement.upper_m);
            assert!(
                spot.centre.distance(circle.centre) > 0.5 * circle.diameter_m,
                "the other spot is another one"
            );
        }
    }
    assert!(n_binding > 150, "{n_binding} limits bound");
}

/// Gains against one-sided differences: a new placement with the limit's distance reduced by a little.
#[test]
fn relief_gains_agree_with_one_sided_differences() {
    let mut seeded = Seeded::new(15);
    let mut n_checked = 0;
    for _ in 0..60 {
        let mut site = site(&mut seeded);
        site.reading = YardReading::Rounded;
        let limits = Limits::new(&site).expect("the site holds");
        let placement = place(&site);
        let Some(circle) = placement.circle else {
            continue;
        };
        let report = report(&limits, &site, &placement, Effort::default(), &|p| p)
            .expect("the report holds");
        for (i, keep_clear) in site.keep_clear.iter().enumerate() {
            let limit = &report.limits[site.lot.lines().len() + i];
            if keep_clear.required_m < 1e-3 {
                continue;
            }
            let step = 1e-4;
            let mut relieved = site.clone();
            relieved.keep_clear[i].required_m -= step;
            let gained = (diameter(&relieved) - circle.diameter_m) / step;
            assert!(
                (gained - limit.relief_gain).abs() < 1e-3,
                "{gained} by difference, {} said",
                limit.relief_gain
            );
            n_checked += usize::from(limit.relief_gain > 0.0);
        }
    }
    assert!(n_checked > 10, "{n_checked} gains were not zero");
}

/// In a square relief of one side gains nothing, and in a rectangle relief of a long side gains itself.
#[test]
fn ties_gain_what_they_should() {
    let gains = |w: f64, h: f64| {
        let lot = area(&[vec![[0.0, 0.0], [w, 0.0], [w, h], [0.0, h]]]);
        let site = Site::of_lot(lot_with_setbacks(lot, &[2.0; 4]));
        let limits = Limits::new(&site).expect("the site holds");
        let placement = place(&site);
        let report = report(&limits, &site, &placement, Effort::default(), &|p| p)
            .expect("the report holds");
        report
            .limits
            .iter()
            .map(|l| l.relief_gain)
            .collect::<Vec<_>>()
    };
    gains(20.0, 20.0)
        .iter()
        .for_each(|gain| assert!(gain.abs() < 1e-6, "{gain} in a square"));
    let long = gains(40.0, 20.0);
    for (gain, expected) in long.iter().zip([1.0, 0.0, 1.0, 0.0]) {
        assert!((gain - expected).abs() < 1e-6, "{long:?} in a rectangle");
    }
}
