//! Families of irregular lots, one generator each, the same lots on every machine.
//!
//! Sizes are those of real parcels and awkward ones: some tens of metres across, five to two hundred corners, and one of
//! ten thousand. Every lot is turned and moved, so that nothing is parallel to an axis or near the origin. A shape that
//! comes out invalid is drawn again.

use std::f64::consts::TAU;

use geo::{BooleanOps, Coord, LineString, Polygon};
use roundstead::geom::validate::{RawPolygon, validate};
use roundstead::geom::{Area, Point};

#[path = "../it/seeded.rs"]
mod seeded;
use seeded::Seeded;

/// Corners of the lot with many.
const DENSE_CORNERS: usize = 10_000;
/// Overlay leaves crumbs where outlines nearly meet; the lot is the largest part, and no part under a square metre is one.
const LEAST_M2: f64 = 1.0;

type Rings = Vec<Vec<[f64; 2]>>;
type Family = (&'static str, fn(&mut Seeded) -> Rings);

const FAMILIES: [Family; 11] = [
    ("convex", convex),
    ("blob", |s| {
        let n = 8 + s.below(192);
        vec![blob(s, n, 0.5)]
    }),
    ("rectilinear", rectilinear),
    ("strip", strip),
    ("ribbon", ribbon),
    ("flag", flag),
    ("culdesac", culdesac),
    ("holes", holes),
    ("sliver", sliver),
    ("dense", |s| vec![blob(s, DENSE_CORNERS, 0.5)]),
    ("rect", |s| {
        vec![rectangle(
            0.0,
            0.0,
            s.between(10.0, 200.0),
            s.between(10.0, 200.0),
        )]
    }),
];

/// One lot of every family, with its name.
pub fn one_of_each(seed: u64) -> Vec<(&'static str, Area)> {
    let lot = |&(name, make): &Family| (name, valid(&mut Seeded::new(seed), make));
    FAMILIES.iter().map(lot).collect()
}

fn valid(seeded: &mut Seeded, make: fn(&mut Seeded) -> Rings) -> Area {
    loop {
        let rings = make(seeded);
        let raw = RawPolygon {
            rings: moved(seeded, rings)
                .iter()
                .map(|ring| ring.iter().map(|&[x, y]| Point::new(x, y)).collect())
                .collect(),
        };
        if let Ok(valid) = validate(&[raw], &|_, _| true)
            && valid.area.area_m2() > LEAST_M2
        {
            return valid.area;
        }
    }
}

fn moved(seeded: &mut Seeded, rings: Rings) -> Rings {
    let (sin, cos) = seeded.between(0.0, TAU).sin_cos();
    let (x0, y0) = (seeded.between(-5e3, 5e3), seeded.between(-5e3, 5e3));
    let point = |[x, y]: [f64; 2]| [x0 + x * cos - y * sin, y0 + x * sin + y * cos];
    let ring = |ring: Vec<[f64; 2]>| ring.into_iter().map(point).collect();
    rings.into_iter().map(ring).collect()
}

fn rectangle(x: f64, y: f64, width: f64, depth: f64) -> Vec<[f64; 2]> {
    vec![
        [x, y],
        [x + width, y],
        [x + width, y + depth],
        [x, y + depth],
    ]
}

fn disc(centre: [f64; 2], radius: f64, n: usize) -> Vec<[f64; 2]> {
    let corner = |i: usize| {
        let (sin, cos) = (i as f64 / n as f64 * TAU).sin_cos();
        [centre[0] + radius * cos, centre[1] + radius * sin]
    };
    (0..n).map(corner).collect()
}

/// Approximately normal: the sum of twelve uniform figures.
fn normal(seeded: &mut Seeded) -> f64 {
    (0..12).map(|_| seeded.between(0.0, 1.0)).sum::<f64>() - 6.0
}

/// Corners on an ellipse.
fn convex(seeded: &mut Seeded) -> Rings {
    let n = 5 + seeded.below(9);
    let radius = 60.0 * seeded.between(0.6, 1.6);
    let mut angles: Vec<f64> = (0..n).map(|_| seeded.between(0.0, TAU)).collect();
    angles.sort_by(f64::total_cmp);
    let corner = |t: &f64| [radius * t.cos(), 60.0 * t.sin()];
    vec![angles.iter().map(corner).collect()]
}

/// A closed curve of twelve harmonics about a centre it always sees.
fn blob(seeded: &mut Seeded, n: usize, rough: f64) -> Vec<[f64; 2]> {
    let waves: Vec<[f64; 2]> = (1..13)
        .map(|j| [normal(seeded), normal(seeded)].map(|a| a * rough / f64::from(j)))
        .collect();
    let corner = |i: usize| {
        let t = i as f64 / n as f64 * TAU;
        let wave = |(j, [a, b]): (usize, &[f64; 2])| {
            let (sin, cos) = ((j + 1) as f64 * t).sin_cos();
            a * cos + b * sin
        };
        let reach = 1.0 + waves.iter().enumerate().map(wave).sum::<f64>();
        let radius = 100.0 * reach.abs().max(0.15);
        [radius * t.cos(), radius * t.sin()]
    };
    (0..n).map(corner).collect()
}

fn rectilinear(seeded: &mut Seeded) -> Rings {
    let mut block = || {
        let [x, y] = [0; 2].map(|_| seeded.between(0.0, 80.0));
        let [width, depth] = [0; 2].map(|_| seeded.between(15.0, 70.0));
        geo_polygon(&[rectangle(x, y, width, depth)])
    };
    let blocks: Vec<Polygon> = (0..5).map(|_| block()).collect();
    let mut rings = largest_part(geo::algorithm::bool_ops::unary_union(&blocks));
    rings.truncate(1);
    rings
}

/// A corridor of constant width with mitred bends: near ties along it, a little more room at the elbows.
fn strip(seeded: &mut Seeded) -> Rings {
    let (mut angle, mut line) = (0.0, vec![[0.0, 0.0]]);
    for _ in 0..2 + seeded.below(4) {
        angle += seeded.between(-0.6, 0.6);
        step(&mut line, angle, seeded.between(80.0, 600.0));
    }
    vec![corridor(&line, seeded.between(5.0, 15.0))]
}

/// A curved corridor of very nearly constant width, arcs sampled: many near ties.
fn ribbon(seeded: &mut Seeded) -> Rings {
    let (mut angle, mut line) = (0.0, vec![[0.0, 0.0]]);
    for _ in 0..2 + seeded.below(3) {
        let side = if seeded.below(2) == 0 { -1.0 } else { 1.0 };
        let (turn, radius) = (seeded.between(0.3, 1.2), seeded.between(40.0, 200.0));
        let n = 6 + seeded.below(19);
        for _ in 0..n {
            angle += side * turn / n as f64;
            step(&mut line, angle, radius * turn / n as f64);
        }
    }
    vec![corridor(&line, seeded.between(5.0, 15.0))]
}

fn step(line: &mut Vec<[f64; 2]>, angle: f64, length: f64) {
    let [x, y] = line[line.len() - 1];
    line.push([x + length * angle.cos(), y + length * angle.sin()]);
}

/// What lies within half a width of a line, ends flat, bends mitred.
fn corridor(line: &[[f64; 2]], half_width: f64) -> Vec<[f64; 2]> {
    let along = |i: usize| {
        let [a, b] = [line[i], line[i + 1]];
        (b[1] - a[1]).atan2(b[0] - a[0])
    };
    let last = line.len() - 1;
    let beside = |i: usize, side: f64| {
        let (before, after) = (along(i.max(1) - 1), along(i.min(last - 1)));
        let reach = side * half_width / ((after - before) / 2.0).cos();
        let (sin, cos) = ((before + after) / 2.0).sin_cos();
        [line[i][0] - reach * sin, line[i][1] + reach * cos]
    };
    let right = (0..=last).map(|i| beside(i, -1.0));
    right
        .chain((0..=last).rev().map(|i| beside(i, 1.0)))
        .collect()
}

fn flag(seeded: &mut Seeded) -> Rings {
    let [width, depth] = [0; 2].map(|_| seeded.between(30.0, 80.0));
    let (pole, length) = (seeded.between(5.0, 9.0), seeded.between(30.0, 90.0));
    vec![vec![
        [0.0, 0.0],
        [width, 0.0],
        [width, depth],
        [pole, depth],
        [pole, depth + length],
        [0.0, depth + length],
    ]]
}

/// A rectangle bitten into by a turning circle.
fn culdesac(seeded: &mut Seeded) -> Rings {
    let (width, depth) = (seeded.between(25.0, 60.0), seeded.between(30.0, 70.0));
    let radius = seeded.between(12.0, 18.0);
    let centre = [width / 2.0 + seeded.between(-5.0, 5.0), -0.4 * radius];
    let lot = geo_polygon(&[rectangle(0.0, 0.0, width, depth)]);
    largest_part(lot.difference(&geo_polygon(&[disc(centre, radius, 96)])))
}

fn holes(seeded: &mut Seeded) -> Rings {
    let mut rings = vec![blob(seeded, 40, 0.3)];
    for _ in 0..1 + seeded.below(4) {
        let centre = [0; 2].map(|_| seeded.between(-60.0, 60.0));
        let bite = disc(centre, seeded.between(3.0, 20.0), 4 * (1 + seeded.below(7)));
        rings = largest_part(geo_polygon(&rings).difference(&geo_polygon(&[bite])));
    }
    rings
}

/// Nearly collinear corners, tiny segments and very sharp corners.
fn sliver(seeded: &mut Seeded) -> Rings {
    let n = 4 + seeded.below(8);
    let mut along: Vec<f64> = (0..n).map(|_| seeded.between(0.0, 100.0)).collect();
    along.sort_by(f64::total_cmp);
    let mut off = || normal(seeded) * 0.1_f64.powi(1 + seeded.below(8) as i32);
    let low: Vec<[f64; 2]> = along.iter().map(|&x| [x, off()]).collect();
    let top = along.iter().rev().map(|&x| [x, 20.0 + off()]);
    vec![low.iter().copied().chain(top).collect()]
}

fn geo_polygon(rings: &[Vec<[f64; 2]>]) -> Polygon {
    let line = |ring: &Vec<[f64; 2]>| {
        let coord = |&[x, y]: &[f64; 2]| Coord { x, y };
        LineString::from_iter(ring.iter().map(coord))
    };
    Polygon::new(line(&rings[0]), rings[1..].iter().map(line).collect())
}

fn largest_part(parts: geo::MultiPolygon) -> Rings {
    use geo::Area as _;
    let by_area = |a: &Polygon, b: &Polygon| a.unsigned_area().total_cmp(&b.unsigned_area());
    let part = parts.into_iter().max_by(by_area);
    let (outer, holes) = part.expect("something is left of the lot").into_inner();
    let ring = |line: LineString| line.into_iter().skip(1).map(|c| [c.x, c.y]).collect();
    std::iter::once(outer).chain(holes).map(ring).collect()
}
