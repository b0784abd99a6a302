//! Tests of the way to the site plane and back: against UTM points, geodesics, and to the bit.

use super::*;
use geo::{Distance, Geodesic};
use proptest::prelude::*;
use std::f64::consts::TAU;

/// A square of 0.001 degrees round a place.
fn square_at(lon: f64, lat: f64) -> Vec<RawPolygon> {
    let e = 0.0005;
    let ring = [(-e, -e), (e, -e), (e, e), (-e, e)].map(|(x, y)| {
        let x = lon + x;
        let x = if x > 180.0 { x - 360.0 } else { x };
        Point::new(x, lat + y)
    });
    vec![RawPolygon {
        rings: vec![ring.to_vec()],
    }]
}

fn degrees_plane(lon: f64, lat: f64) -> Plane {
    Plane::around(&square_at(lon, lat), Coordinates::LonLat).expect("a plane")
}

/// UTM coordinates computed with pyproj 3.7.2 / PROJ 9.5.1, good to 1 mm; UTM is this projection times 0.9996.
#[test]
fn projection_agrees_with_utm_points() {
    #[track_caller]
    fn check(lon: f64, lat: f64, zone: u8, e: f64, n: f64) {
        let false_northing = if lat < 0.0 { 10_000_000.0 } else { 0.0 };
        let central_deg = 6.0 * f64::from(zone) - 183.0;
        let p = from_degrees(lon - central_deg, lat).expect("in range");
        assert!((500_000.0 + 0.9996 * p.x - e).abs() < 1e-3, "{p:?}");
        assert!((false_northing + 0.9996 * p.y - n).abs() < 1e-3, "{p:?}");
    }
    check(-93.625, 41.5868, 15, 447_905.356_8, 4_604_089.356_2);
    check(-97.7431, 30.2672, 14, 620_903.830_1, 3_349_062.364_1);
    check(14.4017, 50.1036, 33, 457_213.937_8, 5_550_320.918_8);
    check(151.2093, -33.8688, 56, 334_368.633_6, 6_250_948.345_4);
    check(-90.0, 45.0, 16, 263_553.973_9, 4_987_329.504_7);
}

/// GeodSolve4 of the tests of geographiclib 2.1, recomputed there: 0.07167900926641628 m.
#[test]
fn a_few_centimetres_come_out_right() {
    let plane = Plane::lon_lat_at(Point::new(0.0, 36.493_349_428_792));
    let at = |x, y| plane.to_site(Point::new(x, y)).expect("in range");
    let d = at(0.0, 36.493_349_428_792).distance(at(8e-7, 36.493_349_428_792_01));
    assert!((d - 0.071_679_009_266_416_28).abs() < 5e-9, "{d}");
}

proptest! {
    #![proptest_config(crate::seeded::config())]

    /// Against geodesics on the ellipsoid (Karney's algorithm in geographiclib-rs): the bound of the module's table.
    #[test]
    fn distances_are_those_of_geodesics(
        lon in -180.0..180.0f64, lat in -88.0..88.0f64, reach_m in 10.0..20_000.0f64,
        turn in 0.0..TAU, step in 0.0..TAU, apart in 0.01..1.0f64,
    ) {
        let plane = Plane::lon_lat_at(Point::new(lon, lat));
        let a = Point::new(reach_m * turn.cos(), reach_m * turn.sin());
        let b = a.lerp(Point::new(reach_m * step.cos(), reach_m * step.sin()), apart);
        let [p, q] = [a, b].map(|p| plane.from_site(p)).map(|p| geo::Point::new(p.x, p.y));
        let ground = Geodesic.distance(p, q);
        let x = a.x.abs().max(b.x.abs());
        let bound = a.distance(b) * 1.02 * (x / 6.335e6).powi(2) / 2.0 + 2e-8;
        let error = a.distance(b) - ground;
        prop_assert!(error.abs() < bound, "{} m over {} m", error, ground);
    }

    #[test]
    fn snapped_points_are_read_again_as_they_were(
        lon in -180.0..180.0f64, lat in -88.0..88.0f64, x in -900.0..900.0f64, y in -900.0..900.0f64,
        unit in 0..3usize, base in 0..4usize,
    ) {
        let p = Point::new(x, y);
        let base = [0.0, 300.0, 6e5, -5e6][base];
        let corners = [(0.0, 0.0), (900.0, 0.0), (0.0, 900.0)].map(|(x, y)| Point::new(base + x, base - y));
        let planes = [
            Plane::lon_lat_at(Point::new(lon, lat)),
            Plane::given(LengthUnit::ALL[unit], corners.into_iter()),
        ];
        for plane in planes {
            let snapped = plane.snap(p);
            let text = [snapped.input.x, snapped.input.y].map(|v| v.to_string());
            let read = Point::new(text[0].parse().unwrap(), text[1].parse().unwrap());
            let again = plane.to_site(read).unwrap();
            match plane {
                Plane::Given { .. } => prop_assert_eq!(again, snapped.site),
                Plane::LonLat { .. } => prop_assert!(snapped.site == p && again.distance(p) < 4e-9),
            }
            prop_assert!(snapped.site.distance(p) < 1e-8);
        }
    }
}

#[test]
fn metres_keep_every_bit() {
    let ring = [
        (457_550.789, 5_549_991.418),
        (457_547.634, 5_549_991.412),
        (457_530.827, 5_550_031.117),
    ]
    .map(|(x, y)| Point::new(x, y));
    let raw = vec![RawPolygon {
        rings: vec![ring.to_vec()],
    }];
    let plane = Plane::around(&raw, Coordinates::Plane(LengthUnit::Metre)).expect("a plane");
    for p in ring {
        let site = plane.to_site(p).expect("plane coordinates");
        assert!(site.x.abs() < 50.0 && site.y.abs() < 50.0, "{site:?}");
        assert_eq!(plane.from_site(site), p);
    }
}

#[test]
fn lots_near_the_origin_stay_where_they_are() {
    let ring = [(0.0, 0.0), (60.0, 0.0), (30.1, 40.7)].map(|(x, y)| Point::new(x, y));
    let raw = vec![RawPolygon {
        rings: vec![ring.to_vec()],
    }];
    let plane = Plane::around(&raw, Coordinates::Plane(LengthUnit::Metre));
    let origin = Point::ORIGIN;
    assert_eq!(
        plane,
        Ok(Plane::Given {
            unit: LengthUnit::Metre,
            origin
        })
    );
}

#[test]
fn lots_across_the_180th_meridian_hang_together() {
    let plane = degrees_plane(180.0, -16.5);
    let [west, east] =
        [179.9995, -179.9995].map(|x| plane.to_site(Point::new(x, -16.5)).expect("in range"));
    assert!((east.x - west.x - 106.7).abs() < 0.5, "{west:?} {east:?}");
    let back = plane.from_site(east);
    assert!((back.x + 179.9995).abs() < 1e-12, "{back:?}");
}

#[test]
fn refuses_what_has_no_plane() {
    #[track_caller]
    fn check(corners: &[(f64, f64)], words: &str) {
        let ring = corners.iter().map(|&(x, y)| Point::new(x, y)).collect();
        let raw = [RawPolygon { rings: vec![ring] }];
        let error = Plane::around(&raw, Coordinates::LonLat).expect_err("a refusal");
        assert!(error.to_string().contains(words), "{error}");
    }
    check(&[(0.0, 0.0), (f64::NAN, 0.0)], "not finite");
    check(&[(0.0, 90.5), (1.0, 0.0)], "use --plane");
    check(&[(180.5, 0.0), (1.0, 0.0)], "use --plane");
    check(&[(0.0, 89.5), (0.001, 89.5)], "pole");
    check(&[(0.0, 0.0), (80.0, 0.0), (80.0, 50.0)], "km across");
    check(&[], "no coordinates");
}
