//! What the integration tests share: areas from rings and WKT, sites, placements.

pub use crate::seeded::Seeded;
use roundstead::geom::validate::{RawPolygon, validate};
use roundstead::geom::{Area, Point, Vec2};
use roundstead::limits::Limits;
use roundstead::placement::{Effort, Placement, largest};
use roundstead::site::{Class, KeepClear, Lot, Role, Shape, Site, YardReading, lot::Boundary};

/// A validated area from rings of coordinates, the outer ring first.
pub fn area(rings: &[Vec<[f64; 2]>]) -> Area {
    areas(&[rings.to_vec()])
}

/// A validated area of several parts.
pub fn areas(parts: &[Vec<Vec<[f64; 2]>>]) -> Area {
    let ring = |r: &Vec<[f64; 2]>| r.iter().map(|&[x, y]| Point::new(x, y)).collect();
    let raw: Vec<RawPolygon> = parts
        .iter()
        .map(|rings| RawPolygon {
            rings: rings.iter().map(ring).collect(),
        })
        .collect();
    validate(&raw, &|_, _| true)
        .unwrap_or_else(|problems| panic!("the lot is valid: {problems:?}"))
        .area
}

/// A lot with one setback per segment of its outer ring, in the order given; the ring runs counter-clockwise and no corner
/// is straight.
pub fn lot_with_setbacks(area: Area, setbacks_m: &[f64]) -> Lot {
    let mut boundary = vec![Boundary::default(); area.n_segments()];
    for (boundary, &setback_m) in boundary.iter_mut().zip(setbacks_m) {
        *boundary = Boundary {
            role: Role::Other,
            setback_m,
        };
    }
    Lot::new(area, boundary).expect("setbacks are distances")
}

pub fn keep_clear(shape: Shape, required_m: f64) -> KeepClear {
    KeepClear::new(None, Class::Other, required_m, shape).expect("the distance is one")
}

/// The placement of a site, verified, to the default gap.
#[track_caller]
pub fn place(site: &Site) -> Placement {
    let limits = Limits::new(site).expect("the site holds");
    largest(&limits, site, Effort::default(), &|p| p).expect("the placement verifies")
}

/// The diameter found, 0 where nothing fits.
#[track_caller]
pub fn diameter(site: &Site) -> f64 {
    place(site).circle.map_or(0.0, |circle| circle.diameter_m)
}

pub fn with_reading(site: &Site, reading: YardReading) -> Site {
    Site {
        reading,
        ..site.clone()
    }
}

/// The area turned by an angle about the origin and moved.
pub fn moved(area: &Area, angle: f64, by: Vec2) -> Area {
    let (sin, cos) = angle.sin_cos();
    let point = |p: &Point| [p.x * cos - p.y * sin + by.x, p.x * sin + p.y * cos + by.y];
    let ring = |r: &roundstead::geom::Ring| r.corners().iter().map(point).collect::<Vec<_>>();
    areas(
        &area
            .parts
            .iter()
            .map(|part| part.rings().map(ring).collect())
            .collect::<Vec<_>>(),
    )
}

/// A star-shaped ring of n corners, lobes and all.
pub fn star(seeded: &mut Seeded, n: usize, least: f64, greatest: f64) -> Vec<[f64; 2]> {
    (0..n)
        .map(|i| {
            let angle = (i as f64 + seeded.between(0.0, 0.8)) / n as f64 * std::f64::consts::TAU;
            let radius = seeded.between(least, greatest);
            [radius * angle.cos(), radius * angle.sin()]
        })
        .collect()
}

/// A convex ring: corners of an ellipse at sorted angles.
pub fn convex(seeded: &mut Seeded, n: usize) -> Vec<[f64; 2]> {
    let (a, b) = (seeded.between(20.0, 80.0), seeded.between(20.0, 80.0));
    (0..n)
        .map(|i| {
            let angle = (i as f64 + seeded.between(0.05, 0.9)) / n as f64 * std::f64::consts::TAU;
            [a * angle.cos(), b * angle.sin()]
        })
        .collect()
}

/// A random site: a star-shaped lot, setbacks, and keep-clear points, discs, lines and areas.
pub fn site(seeded: &mut Seeded) -> Site {
    let n = 4 + seeded.below(9);
    let area = area(&[star(seeded, n, 25.0, 90.0)]);
    let setbacks: Vec<f64> = (0..n)
        .map(|_| [0.0, 2.0, 4.0, 9.0][seeded.below(4)])
        .collect();
    let mut site = Site::of_lot(lot_with_setbacks(area, &setbacks));
    for _ in 0..seeded.below(4) {
        let c = Point::new(seeded.between(-50.0, 50.0), seeded.between(-50.0, 50.0));
        let size = seeded.between(1.0, 8.0);
        let shape = match seeded.below(4) {
            0 => Shape::Point(c),
            1 => Shape::Disc(c, size),
            2 => Shape::Line(vec![
                c,
                c + Vec2::new(size, 2.0 * size),
                c + Vec2::new(3.0 * size, size),
            ]),
            _ => {
                let at = |[x, y]: [f64; 2]| [c.x + x, c.y + y];
                Shape::Area(self::area(&[star(seeded, 6, 0.3 * size, 2.0 * size)
                    .into_iter()
                    .map(at)
                    .collect()]))
            }
        };
        site.keep_clear
            .push(keep_clear(shape, seeded.between(0.0, 8.0)));
    }
    site
}
