//! Every problem and every repair by the smallest example, and random polygons that must pass or fail.

use super::super::Ring;
use super::super::test_shapes::{Dice, any_polygon, comb, plain, reversed, spiral, star};
use super::*;
use proptest::prelude::*;

const ALWAYS: &dyn Fn(SegmentId, SegmentId) -> bool = &|_, _| true;

fn raw(rings: &[&[(f64, f64)]]) -> RawPolygon {
    let ring = |r: &&[(f64, f64)]| r.iter().map(|&(x, y)| Point::new(x, y)).collect();
    RawPolygon {
        rings: rings.iter().map(ring).collect(),
    }
}

fn closed(ring: &Ring) -> Vec<Point> {
    let mut corners = ring.corners().to_vec();
    corners.push(corners[0]);
    corners
}

fn raw_of(polygon: &Polygon) -> RawPolygon {
    RawPolygon {
        rings: polygon.rings().map(closed).collect(),
    }
}

const SQUARE: &[(f64, f64)] = &[
    (0.0, 0.0),
    (10.0, 0.0),
    (10.0, 10.0),
    (0.0, 10.0),
    (0.0, 0.0),
];

/// The sentences of the problems, in order, begin as expected.
#[track_caller]
fn check(input: &[RawPolygon], expected: &[&str]) {
    let problems = validate(input, ALWAYS).expect_err("there are problems");
    let sentences: Vec<String> = problems.iter().map(Problem::to_string).collect();
    let fits = sentences.len() == expected.len()
        && sentences
            .iter()
            .zip(expected)
            .all(|(s, e)| s.starts_with(e));
    assert!(fits, "{sentences:#?}");
}

#[track_caller]
fn check_ring(ring: &[(f64, f64)], expected: &[&str]) {
    check(&[raw(&[ring])], expected);
}

#[track_caller]
fn check_hole(hole: &[(f64, f64)], expected: &[&str]) {
    check(&[raw(&[SQUARE, hole])], expected);
}

#[track_caller]
fn check_fine(input: &[RawPolygon], area_m2: f64, n_repairs: usize) -> Validated {
    let done = validate(input, ALWAYS).expect("there is nothing wrong");
    assert!((done.area.area_m2() - area_m2).abs() < 1e-9 * area_m2.abs());
    assert_eq!(done.repairs.len(), n_repairs, "{:?}", done.repairs);
    assert_eq!(done.sources.len(), done.area.n_segments());
    done
}

#[test]
fn nothing_there() {
    check(&[], &["There is no polygon."]);
    check(&[RawPolygon::default()], &["Part 1 has no ring."]);
    check_ring(
        &[],
        &["There are only 0 different corners in the outer ring of part 1"],
    );
    check_ring(&[(1.0, 1.0)], &["There are only 1 different"]);
    check_ring(
        &[(1.0, 2.0), (3.0, 2.0), (1.0, 2.0)],
        &["There are only 2 different"],
    );
    // JTS testCollapsedLineFlat, and a line there and back twice.
    let flat = [
        (1.0, 2.0),
        (1.0, 2.0),
        (1.0, 2.0),
        (1.0, 2.0),
        (3.0, 2.0),
        (1.0, 2.0),
    ];
    check_ring(&flat, &["There are only 2 different corners"]);
    let twice = [(1.0, 2.0), (3.0, 4.0), (1.0, 2.0), (3.0, 4.0), (1.0, 2.0)];
    check_ring(&twice, &["There are only 2 different corners"]);
    let line = [(0.0, 0.0), (1.0, 0.0), (2.0, 0.0), (0.0, 0.0)];
    check_ring(
        &line,
        &["All corners are on one straight line, so there is no area: corner 1 of"],
    );
}

#[test]
fn coordinates_out_of_range() {
    let bad = [
        (0.0, 0.0),
        (f64::NAN, 0.0),
        (1.0, f64::INFINITY),
        (1e9, 0.0),
        (0.0, 1e-200),
    ];
    check_ring(
        &bad,
        &[
            "A coordinate is not a finite number: corner 2 of the outer ring of part 1",
            "A coordinate is not a finite number: corner 3",
            "A coordinate is larger than 1e8 m, or not 0 and smaller than 1e-100 m: corner 4",
            "A coordinate is larger than 1e8 m, or not 0 and smaller than 1e-100 m: corner 5",
        ],
    );
    check_fine(
        &[raw(&[&[(-0.0, 0.0), (1e8, 0.0), (0.0, 1e8), (0.0, 0.0)]])],
        5e15,
        0,
    );
}

#[test]
fn repairs_are_made_and_reported() {
    let at = |corner, x, y| Place {
        ring: RingId { part: 0, ring: 0 },
        corner,
        at: Point::new(x, y),
    };
    let done = check_fine(&[raw(&[&SQUARE[..4]])], 100.0, 1);
    assert_eq!(done.repairs, [Repair::Closed(at(3, 0.0, 10.0))]);

    let repeated = [
        (0.0, 0.0),
        (10.0, 0.0),
        (10.0, 0.0),
        (10.0, 10.0),
        (0.0, 0.0),
    ];
    let done = check_fine(&[raw(&[&repeated])], 50.0, 1);
    assert_eq!(done.repairs, [Repair::RepeatedCorner(at(2, 10.0, 0.0))]);
    let segments: Vec<u32> = done.sources.iter().map(|s| s.segment).collect();
    assert_eq!(segments, [0, 2, 3]);

    let straight = [
        (5.0, 0.0),
        (7.0, 0.0),
        (10.0, 0.0),
        (10.0, 10.0),
        (0.0, 0.0),
        (5.0, 0.0),
    ];
    let done = check_fine(&[raw(&[&straight])], 50.0, 2);
    let expected = [at(0, 5.0, 0.0), at(1, 7.0, 0.0)].map(Repair::CollinearCorner);
    assert_eq!(done.repairs, expected);
    let segments: Vec<u32> = done.sources.iter().map(|s| s.segment).collect();
    assert_eq!(
        segments,
        [2, 3, 4],
        "joined segments keep the first one's name"
    );

    let clockwise = [(0.0, 0.0), (0.0, 10.0), (10.0, 0.0), (0.0, 0.0)];
    let done = check_fine(&[raw(&[&clockwise])], 50.0, 1);
    assert_eq!(done.area.parts[0].outer.corners()[1], Point::new(10.0, 0.0));
    let segments: Vec<u32> = done.sources.iter().map(|s| s.segment).collect();
    assert_eq!(segments, [2, 1, 0]);
    assert_eq!(
        done.repairs[0].to_string(),
        "Turned the outer ring of part 1 the other way round."
    );
}

#[test]
fn collinear_corners_stay_between_unlike_segments() {
    let straight = [
        (0.0, 0.0),
        (5.0, 0.0),
        (7.0, 0.0),
        (10.0, 0.0),
        (10.0, 10.0),
        (0.0, 0.0),
    ];
    let unlike = |a: SegmentId, b: SegmentId| (a.segment == 0) == (b.segment == 0);
    let done = validate(&[raw(&[&straight])], &unlike).expect("there is nothing wrong");
    let corners = done.area.parts[0].outer.corners();
    assert_eq!(corners.len(), 4);
    assert_eq!(corners[1], Point::new(5.0, 0.0));
}

#[test]
fn a_ring_that_meets_itself() {
    let spike = [
        (0.0, 0.0),
        (10.0, 0.0),
        (10.0, 5.0),
        (15.0, 5.0),
        (10.0, 5.0),
        (0.0, 0.0),
    ];
    check_ring(
        &spike,
        &[
            "The boundary turns back on itself: corner 4 of the outer ring of part 1, at (15.000, 5.000).",
        ],
    );
    let bow_tie = [(0.0, 0.0), (4.0, 4.0), (4.0, 0.0), (0.0, 4.0), (0.0, 0.0)];
    check_ring(
        &bow_tie,
        &[
            "The boundary crosses itself at (2.000, 2.000): segment 1 of the outer ring of part 1 and segment 3",
        ],
    );
    let pinched = [
        (0.0, 0.0),
        (4.0, 0.0),
        (2.0, 2.0),
        (4.0, 4.0),
        (0.0, 4.0),
        (2.0, 2.0),
        (0.0, 0.0),
    ];
    check_ring(
        &pinched,
        &["The boundary touches itself at (2.000, 2.000): segment 3"],
    );
    let on_side = [
        (0.0, 0.0),
        (4.0, 0.0),
        (4.0, 4.0),
        (2.0, 0.0),
        (0.0, 4.0),
        (0.0, 0.0),
    ];
    check_ring(
        &on_side,
        &["The boundary touches itself at (2.000, 0.000): segment 1"],
    );
    let along = [
        (0.0, 0.0),
        (9.0, 0.0),
        (9.0, 9.0),
        (7.0, 9.0),
        (7.0, 0.0),
        (5.0, 0.0),
        (5.0, 9.0),
        (0.0, 9.0),
        (0.0, 0.0),
    ];
    check_ring(
        &along,
        &[
            "The boundary runs along itself from (5.000, 0.000): segment 1",
            "The boundary touches itself at (5.000, 0.000): segment 1",
        ],
    );
    // GEOS test 9 and JTS testNearlyFlat: thin, but there.
    let thin = [
        (59.3, 100.00000000000001),
        (99.7, 100.00000000000001),
        (99.7, 100.0),
        (59.3, 100.0),
        (59.3, 100.00000000000001),
    ];
    assert!(validate(&[raw(&[&thin])], ALWAYS).is_ok());
}

#[test]
fn holes_where_they_must_not_be() {
    check_hole(
        &[(20.0, 20.0), (21.0, 20.0), (20.0, 21.0), (20.0, 20.0)],
        &["A hole lies outside the outer ring: corner 1 of hole 1 of part 1"],
    );
    check_hole(
        &[(5.0, 5.0), (5.0, 6.0), (15.0, 5.5), (5.0, 5.0)],
        &[
            "Two rings run into each other at (10.000, 5.750)",
            "Two rings run into each other at (10.000, 5.250)",
        ],
    );
    // Along a side: the segments next to it touch the side as well.
    let problems = validate(
        &[raw(&[
            SQUARE,
            &[(2.0, 0.0), (4.0, 0.0), (3.0, 2.0), (2.0, 0.0)],
        ])],
        ALWAYS,
    )
    .expect_err("shares a line");
    assert!(
        problems
            .iter()
            .any(|p| matches!(p, Problem::RingsAlong { .. })),
        "{problems:?}"
    );
    // Through a corner to the outside.
    check_hole(
        &[(8.0, 8.0), (10.0, 10.0), (12.0, 8.0), (8.0, 8.0)],
        &[
            "Two rings run into each other at (10.000, 8.000)",
            "Two rings run into each other at (10.000, 10.000)",
        ],
    );
    let (large, small) = (
        [(1.0, 1.0), (1.0, 9.0), (9.0, 1.0), (1.0, 1.0)],
        [(2.0, 2.0), (2.0, 3.0), (3.0, 2.0), (2.0, 2.0)],
    );
    check(
        &[raw(&[SQUARE, &large, &small])],
        &["A hole lies inside hole 1 of part 1: corner 1 of hole 2"],
    );
    check(
        &[raw(&[SQUARE, &small, &large])],
        &["A hole lies inside hole 2 of part 1: corner 1 of hole 1"],
    );
}

#[test]
fn holes_may_touch_but_not_cut_the_inside() {
    let corner = [(0.0, 0.0), (1.0, 2.0), (2.0, 1.0), (0.0, 0.0)];
    check_fine(&[raw(&[SQUARE, &corner])], 98.5, 0);
    let on_side = [(0.0, 5.0), (2.0, 6.0), (2.0, 4.0), (0.0, 5.0)];
    check_fine(&[raw(&[SQUARE, &on_side])], 98.0, 0);
    let (left, right) = (
        [(2.0, 5.0), (3.0, 6.0), (4.0, 5.0), (2.0, 5.0)],
        [(4.0, 5.0), (5.0, 6.0), (6.0, 5.0), (4.0, 5.0)],
    );
    check_fine(&[raw(&[SQUARE, &left, &right])], 98.0, 0);
    check_hole(
        &[(0.0, 5.0), (5.0, 6.0), (10.0, 5.0), (5.0, 4.0), (0.0, 5.0)],
        &["Rings that touch cut the inside of part 1 apart at (10.000, 5.000)."],
    );
    let (low, high) = (
        [(5.0, 0.0), (4.0, 5.0), (6.0, 5.0), (5.0, 0.0)],
        [(5.0, 10.0), (6.0, 5.0), (5.0, 6.0), (5.0, 10.0)],
    );
    check(
        &[raw(&[SQUARE, &low, &high])],
        &["Rings that touch cut the inside of part 1 apart at (6.000, 5.000)."],
    );
}

#[test]
fn parts_may_touch_but_not_overlap() {
    let part = |x: f64, y: f64| {
        raw(&[&[
            (x, y),
            (x + 4.0, y),
            (x + 4.0, y + 4.0),
            (x, y + 4.0),
            (x, y),
        ]])
    };
    check_fine(&[part(0.0, 0.0), part(4.0, 4.0), part(9.0, 0.0)], 48.0, 0);
    check_fine(
        &[
            raw(&[
                SQUARE,
                &[(2.0, 2.0), (2.0, 8.0), (8.0, 8.0), (8.0, 2.0), (2.0, 2.0)],
            ]),
            part(3.0, 3.0),
        ],
        80.0,
        0,
    );
    check(
        &[raw(&[SQUARE]), part(3.0, 3.0)],
        &["Part 2 overlaps part 1: corner 1 of the outer ring of part 2"],
    );
    check(
        &[part(3.0, 3.0), raw(&[SQUARE])],
        &["Part 1 overlaps part 2: corner 1 of the outer ring of part 1"],
    );
    check(
        &[part(0.0, 0.0), part(2.0, 2.0)],
        &["Two rings run into", "Two rings run into"],
    );
    let problems = validate(&[part(0.0, 0.0), part(4.0, 0.0)], ALWAYS).expect_err("a shared line");
    assert!(
        problems
            .iter()
            .any(|p| matches!(p, Problem::RingsAlong { .. }))
    );
}

#[test]
fn every_problem_is_reported_and_many_are_summed_up() {
    let bow_tie: &[(f64, f64)] = &[(1.0, 1.0), (2.0, 2.0), (2.0, 1.0), (1.0, 2.0), (1.0, 1.0)];
    check(
        &[
            raw(&[
                SQUARE,
                &[(f64::NAN, 1.0)],
                bow_tie,
                &[(50.0, 50.0), (51.0, 50.0), (50.0, 51.0)],
            ]),
            raw(&[]),
        ],
        &[
            "A coordinate is not",
            "Part 2 has no ring",
            "The boundary crosses itself",
            "A hole lies outside",
        ],
    );
    // A star polygon with 41 points whose sides all cross each other.
    let star: Vec<(f64, f64)> = (0..41)
        .map(|k| (f64::from(k) * 20.0 * std::f64::consts::TAU / 41.0).sin_cos())
        .collect();
    let problems = validate(&[raw(&[&star])], ALWAYS).expect_err("crosses itself");
    assert_eq!(problems.len(), 101);
    let last = problems.last().expect("there are some").to_string();
    assert_eq!(
        last,
        format!(
            "The boundary meets itself at {} more places.",
            41 * 19 - 100
        )
    );
}

#[test]
fn large_rings_pass() {
    let mut dice = Dice(3);
    let rings = [
        spiral(1000),
        comb(&mut dice, 300),
        star(&mut dice, 20_000, Point::ORIGIN, 90.0, 100.0),
    ];
    for ring in rings {
        let area = ring.signed_area();
        check_fine(&[raw_of(&plain(ring))], area, 0);
    }
}

proptest! {
    #![proptest_config(crate::seeded::config())]

    #[test]
    fn simple_polygons_pass_unchanged(seed: u64) {
        let polygon = any_polygon(&mut Dice(seed));
        let done = validate(&[raw_of(&polygon)], &|_, _| false).expect("it is simple");
        prop_assert_eq!(done.repairs, Vec::new());
        prop_assert_eq!(&done.area.parts, &vec![polygon]);
    }

    #[test]
    fn another_start_direction_or_repetition_changes_nothing(seed: u64) {
        let mut dice = Dice(seed);
        let mut polygon = any_polygon(&mut dice);
        let area = polygon.area_m2();
        let n = polygon.outer.len();
        let mut corners = polygon.outer.corners().to_vec();
        corners.rotate_left(dice.below(0, n));
        polygon.outer = Ring::new(corners);
        let mut turned = polygon.clone();
        turned.outer = reversed(&polygon.outer);
        let mut input = raw_of(&turned);
        let again = dice.below(0, n);
        let corner = input.rings[0][again];
        input.rings[0].insert(again, corner);
        let done = validate(&[input], ALWAYS).expect("it is simple");
        prop_assert!((done.area.area_m2() - area).abs() <= 1e-9 * area + 1e-9);
        prop_assert!(done.area.parts[0].outer.signed_area() > 0.0);
        // Every segment starts or ends where the segment it came from does.
        for (segment, source) in done.area.segments().zip(&done.sources) {
            let ring = &turned.rings().nth(source.ring as usize).expect("it exists").corners();
            let at = source.segment as usize;
            let at = if source.ring == 0 && at > again { at - 1 } else { at };
            prop_assert!([segment.a, segment.b].contains(&ring[at]));
        }
    }

    #[test]
    fn planted_crossings_are_found(seed: u64) {
        let mut dice = Dice(seed);
        let n = dice.below(5, 80);
        let ring = star(&mut dice, n, Point::ORIGIN, 50.0, 100.0);
        // One segment makes a small loop: on to two thirds, back to one third, and on, a little beside the line.
        let k = dice.below(0, n);
        let segment = ring.segment(k);
        let aside = segment.vector().left() * -1e-3;
        let beside = |t: f64, share: f64| segment.a.lerp(segment.b, t) + aside * share;
        let mut corners = closed(&ring);
        corners.splice(k + 1..k + 1, [beside(2.0 / 3.0, 1.0), beside(1.0 / 3.0, 1.0)]);
        let problems = validate(&[RawPolygon { rings: vec![corners] }], ALWAYS).expect_err("it crosses itself");
        let planted = beside(0.5, 0.75);
        let found = |problem: &Problem| {
            matches!(problem, Problem::SelfCrossing { at, .. } if at.distance(planted) < 1e-9)
        };
        prop_assert!(problems.iter().any(found), "{:?}", problems);
    }
}
