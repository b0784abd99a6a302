//! Seeded comparisons with libraries that share nothing with the search: polylabel (a quadtree search) on lots that are not
//! convex, good_lp with microlp on convex ones. Neither ever finds more than the proven bound, nor more than was found.

use crate::support::{Seeded, area, convex, lot_with_setbacks, place, star};
use geo::{LineString, Polygon};
use roundstead::geom::Area;
use roundstead::lp::model::{HalfPlane, chebyshev};
use roundstead::site::{Lot, Site};

/// Rounding of a distance between coordinates of some hundred metres, in two orders of operations.
const ROUNDING_M: f64 = 1e-11;

fn to_geo(area: &Area) -> Polygon<f64> {
    let ring = |r: &roundstead::geom::Ring| {
        LineString::from(r.corners().iter().map(|p| (p.x, p.y)).collect::<Vec<_>>())
    };
    let part = &area.parts[0];
    Polygon::new(ring(&part.outer), part.holes.iter().map(ring).collect())
}

fn check_quadtree(lot: Area, tolerance_m: f64) {
    let polygon = to_geo(&lot);
    let placement = place(&Site::of_lot(Lot::plain(lot.clone())));
    let found = placement.circle.expect("a lot has room").diameter_m;
    let point = polylabel::polylabel(&polygon, &tolerance_m).expect("polylabel finds a place");
    let centre = roundstead::geom::Point::new(point.x(), point.y());
    assert!(lot.contains(centre), "the quadtree's centre lies inside");
    let other = 2.0
        * lot
            .segments()
            .map(|s| s.distance(centre))
            .fold(f64::INFINITY, f64::min);
    assert!(
        other <= placement.upper_m + ROUNDING_M,
        "{other} is above the proven bound {}",
        placement.upper_m
    );
    assert!(
        other <= found + 1e-9 + ROUNDING_M,
        "{other} is more than the {found} found"
    );
    assert!(
        found <= other + 2.0 * tolerance_m,
        "{found} is more than the quadtree's {other} and its tolerance"
    );
}

#[test]
fn a_quadtree_never_beats_the_bound_on_stars_and_holes() {
    let mut seeded = Seeded::new(1);
    for _ in 0..150 {
        let n = 5 + seeded.below(40);
        let mut rings = vec![star(&mut seeded, n, 15.0, 90.0)];
        if seeded.below(2) == 0 {
            // A star keeps all within its least radius; so does its hole.
            rings.push(star(&mut seeded, 6, 2.0, 9.0));
        }
        check_quadtree(area(&rings), 1e-3);
    }
}

#[test]
fn a_quadtree_never_beats_the_bound_on_stairs() {
    let mut seeded = Seeded::new(2);
    for _ in 0..50 {
        let steps = 2 + seeded.below(6);
        let mut ring = vec![[0.0, 0.0]];
        let (mut x, mut y) = (seeded.between(60.0, 120.0), 0.0);
        for _ in 0..steps {
            ring.push([x, y]);
            y += seeded.between(4.0, 30.0);
            ring.push([x, y]);
            x *= seeded.between(0.4, 0.9);
        }
        ring.push([0.0, y]);
        check_quadtree(area(&[ring]), 1e-3);
    }
}

/// The half-planes of a convex lot's setback lines, from its corners alone.
fn half_planes(lot: &Area, setbacks: &[f64]) -> Vec<HalfPlane> {
    let line = |(s, setback): (roundstead::geom::Segment, &f64)| {
        let (dx, dy) = (s.b.x - s.a.x, s.b.y - s.a.y);
        let length = dx.hypot(dy);
        let (nx, ny) = (-dy / length, dx / length);
        HalfPlane {
            nx,
            ny,
            w: 1.0,
            b: nx * s.a.x + ny * s.a.y + setback,
        }
    };
    lot.segments().zip(setbacks).map(line).collect()
}

#[test]
fn the_convex_lot_program_equals_the_search() {
    let mut seeded = Seeded::new(3);
    let mut n_with_room = 0;
    for _ in 0..300 {
        let n = 3 + seeded.below(9);
        let lot = area(&[convex(&mut seeded, n)]);
        let n = lot.n_segments();
        // Corners that turn by less than 27 degrees end a yard at twice its setback; one setback all round meets anyway.
        let setback = seeded.between(0.0, 12.0);
        let setbacks = vec![setback; n];
        let placement = place(&Site::of_lot(lot_with_setbacks(lot.clone(), &setbacks)));
        let Ok([_, _, r]) = chebyshev(&half_planes(&lot, &setbacks)) else {
            continue;
        };
        let found = placement.circle.map_or(0.0, |c| c.diameter_m);
        assert!(
            2.0 * r <= placement.upper_m + 1e-8,
            "{} is above the bound {}",
            2.0 * r,
            placement.upper_m
        );
        assert!(
            (found - (2.0 * r).max(0.0)).abs() < 1e-7,
            "{found} m by the search, {} m by the program",
            2.0 * r
        );
        n_with_room += usize::from(r > 0.0);
    }
    assert!(n_with_room > 200, "{n_with_room} lots had room");
}

#[test]
fn the_game_equals_the_model_layer() {
    use roundstead::lp::game::{Game, GameRow};
    use roundstead::lp::model::{Compare, Model, ModelRow};
    let mut seeded = Seeded::new(4);
    for _ in 0..500 {
        let n = 1 + seeded.below(10);
        let rows: Vec<GameRow> = (0..n as u32)
            .map(|tag| GameRow {
                d: [0; 3].map(|_| seeded.between(-5.0, 50.0)),
                w: seeded.between(0.2, 3.0),
                tag,
            })
            .collect();
        let mut game = Game::new();
        game.start(rows[0]);
        rows[1..].iter().for_each(|&row| assert!(game.push(row)));
        let found = game.solve();
        // Variables l_0, l_1, l_2 >= 0 with sum 1, and r.
        let row = |r: &GameRow| ModelRow {
            coefficients: vec![r.d[0], r.d[1], r.d[2], -r.w],
            compare: Compare::AtLeast,
            right: 0.0,
        };
        let mut model_rows: Vec<ModelRow> = rows.iter().map(row).collect();
        model_rows.push(ModelRow {
            coefficients: vec![1.0, 1.0, 1.0, 0.0],
            compare: Compare::Equal,
            right: 1.0,
        });
        let model = Model {
            objective: vec![0.0, 0.0, 0.0, 1.0],
            lower: vec![0.0, 0.0, 0.0, f64::NEG_INFINITY],
            rows: model_rows,
        };
        let expected = model.maximise().expect("the game has a value").value;
        assert!(
            (found.bound - expected).abs() < 1e-7,
            "{} by the kernel, {expected} by the model",
            found.bound
        );
    }
}
