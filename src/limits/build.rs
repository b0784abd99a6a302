//! Builds the rows of a site's limits.

use super::limit::things_of;
use super::{Feature, Limit, Limits, LotRows, Measure, Origin, Otherwise, Region, Row, Thing};
use crate::geom::{Area, Point, Ring, Segment, pieces::convex_pieces, yard};
use crate::site::{Shape, Site, SiteError, YardReading};

/// Half-planes where they say the same as the yards: a convex lot whose setback lines meet at every corner, or, in the
/// rounded reading, one setback all round (a circle that clears every segment of a convex lot by s clears every line by s).
pub(super) fn suitable_lot_rows(site: &Site) -> LotRows {
    let lot = &site.lot;
    let otherwise = if lot.is_plain() {
        LotRows::Plain
    } else {
        LotRows::Features
    };
    let [part] = lot.area().parts.as_slice() else {
        return otherwise;
    };
    let is_linear = || match site.reading {
        YardReading::Rounded => lot
            .lines()
            .iter()
            .all(|line| line.setback_m == lot.lines()[0].setback_m),
        YardReading::Parallel => {
            lot.is_plain() || yard::yards_meet(&part.outer, |i| lot.boundary(i).setback_m)
        }
    };
    if part.holes.is_empty() && part.outer.is_convex() && is_linear() {
        LotRows::HalfPlanes
    } else {
        otherwise
    }
}

pub(super) fn limits(site: &Site, lot_rows: LotRows) -> Result<Limits, SiteError> {
    for (i, rule) in site.rules.iter().enumerate() {
        rule.check(&format!("rule {}", i + 1), &site.structure)?;
    }
    let region = Region::new(site.lot.area(), &site.building_lines)?;
    let mut builder = Builder {
        site,
        limits: Vec::new(),
        rows: Vec::new(),
    };
    builder.lot_lines(lot_rows);
    builder.building_lines(&region);
    for i in 0..site.keep_clear.len() {
        let measure = Measure::from_shell(site.keep_clear[i].required_m);
        builder.limit(Limit {
            thing: Thing::KeepClear(i),
            origin: Origin::RequiredDistance,
            measure,
        })?;
    }
    for (i, rule) in site.rules.iter().enumerate() {
        let measure = Measure::of_rule(rule, &site.structure);
        for thing in things_of(
            &rule.to,
            &site.lot,
            &site.keep_clear,
            site.building_lines.len(),
        ) {
            builder.limit(Limit {
                thing,
                origin: Origin::Rule(i),
                measure,
            })?;
        }
    }
    let plain = lot_rows == LotRows::Plain;
    let plain_limits = if plain {
        site.lot.line_of_segments().to_vec()
    } else {
        Vec::new()
    };
    let n_plain = plain_limits.len();
    Ok(Limits {
        limits: builder.limits,
        listed: builder.rows,
        n_plain,
        plain_limits,
        region,
        lot_rows,
    })
}

/// A lot with no setbacks and nothing beside it.
pub(super) fn bare_lot(lot: &Area) -> Result<Limits, SiteError> {
    let region = Region::new(lot, &[])?;
    let n = region.n_lot_segments();
    let half_planes = || {
        region
            .boundary()
            .iter()
            .map(|&s| half_plane_row(s, 0.0, 0))
            .collect()
    };
    let (lot_rows, listed, n_plain) = match lot.is_convex() {
        true => (LotRows::HalfPlanes, half_planes(), 0),
        false => (LotRows::Plain, Vec::new(), n),
    };
    Ok(Limits {
        limits: Vec::new(),
        listed,
        n_plain,
        plain_limits: Vec::new(),
        region,
        lot_rows,
    })
}

struct Builder<'a> {
    site: &'a Site,
    limits: Vec<Limit>,
    rows: Vec<Row>,
}

impl Builder<'_> {
    /// One limit for each lot line, one row for each segment.
    fn lot_lines(&mut self, lot_rows: LotRows) {
        let lot = &self.site.lot;
        let of = |(i, line): (usize, &crate::site::LotLine)| Limit {
            thing: Thing::LotLine(i),
            origin: Origin::Setback,
            measure: Measure::from_shell(line.setback_m),
        };
        self.limits.extend(lot.lines().iter().enumerate().map(of));
        if lot_rows == LotRows::Plain {
            return;
        }
        self.rows.reserve(lot.area().n_segments());
        let mut base = 0;
        for ring in lot.area().rings() {
            for (i, segment) in ring.segments().enumerate() {
                let limit = lot.line_of_segments()[base + i];
                let row = match lot_rows {
                    LotRows::HalfPlanes => {
                        half_plane_row(segment, lot.boundary(base + i).setback_m, limit)
                    }
                    LotRows::Plain | LotRows::Features => self.yard_row(ring, base, i, limit),
                };
                self.rows.push(row);
            }
            base += ring.len();
        }
    }

    fn yard_row(&self, ring: &Ring, base: usize, i: usize, limit: u32) -> Row {
        let setback_m = |k: usize| self.site.lot.boundary(base + k).setback_m;
        if self.site.reading == YardReading::Parallel
            && let Some(yard) = yard::yard(ring, setback_m, i)
        {
            return Row::new(Feature::Convex(yard.corners()[..].into()), 1.0, 0.0, limit);
        }
        Row::new(Feature::Segment(ring.segment(i)), 1.0, setback_m(i), limit)
    }

    /// A limit for each building line; its rows are the pieces inside the lot, in the order of the region's boundary.
    fn building_lines(&mut self, region: &Region) {
        let base = self.limits.len();
        for i in 0..self.site.building_lines.len() {
            let measure = Measure::from_shell(0.0);
            self.limits.push(Limit {
                thing: Thing::BuildingLine(i),
                origin: Origin::BuildingLine,
                measure,
            });
        }
        for (line, piece) in region.building_line_pieces() {
            self.rows.push(Row::new(
                Feature::Segment(piece),
                1.0,
                0.0,
                (base + line) as u32,
            ));
        }
    }

    /// A limit measured to the thing itself.
    fn limit(&mut self, limit: Limit) -> Result<(), SiteError> {
        let index = self.limits.len() as u32;
        self.limits.push(limit);
        let form = Form::of(&limit.measure);
        for feature in self.features_of(limit.thing)? {
            form.rows(feature, index, &mut self.rows);
        }
        Ok(())
    }

    fn features_of(&self, thing: Thing) -> Result<Vec<Feature>, SiteError> {
        Ok(match thing {
            Thing::LotLine(i) => self
                .site
                .lot
                .segments_of(&self.site.lot.lines()[i])
                .map(Feature::Segment)
                .collect(),
            Thing::BuildingLine(i) => line_features(&self.site.building_lines[i].corners),
            Thing::KeepClear(i) => match &self.site.keep_clear[i].shape {
                Shape::Point(p) => vec![Feature::Point(*p)],
                Shape::Disc(centre, radius) => vec![Feature::Disc {
                    centre: *centre,
                    radius: *radius,
                }],
                Shape::Line(corners) => line_features(corners),
                Shape::Area(area) => {
                    let pieces = convex_pieces(area).ok_or_else(|| SiteError::NoPieces {
                        what: self.site.keep_clear[i].title(),
                    })?;
                    pieces
                        .into_iter()
                        .map(|p| Feature::Convex(p.into()))
                        .collect()
                }
            },
        })
    }
}

fn half_plane_row(segment: Segment, setback_m: f64, limit: u32) -> Row {
    let feature = Feature::right_of(segment).unwrap_or(Feature::Point(segment.a));
    Row::new(feature, 1.0, setback_m, limit)
}

fn line_features(corners: &[Point]) -> Vec<Feature> {
    corners
        .windows(2)
        .map(|w| Feature::Segment(Segment::new(w[0], w[1])))
        .collect()
}

/// A measure as conditions on the distance from the centre: dist >= w r + s.
struct Form {
    main: (f64, f64),
    floor: Option<(f64, f64)>,
    cap: Option<(f64, f64)>,
    /// Up to this radius an inner ring has no radius of its own and its rule is void.
    free_radius: f64,
}

impl Form {
    fn of(m: &Measure) -> Form {
        let at = |required_m: f64| (m.start_share, m.start_m + required_m);
        let is_capped = m.share > 0.0 || m.cap_m.is_some_and(|cap| cap < m.fixed_m);
        Form {
            main: (m.start_share + 2.0 * m.share, m.start_m + m.fixed_m),
            floor: m
                .floor_m
                .filter(|&floor| m.share > 0.0 || floor > m.fixed_m)
                .map(at),
            cap: m.cap_m.filter(|_| is_capped).map(at),
            free_radius: if m.start_m < 0.0 {
                -m.start_m / m.start_share
            } else {
                f64::NEG_INFINITY
            },
        }
    }

    fn rows(&self, feature: Feature, limit: u32, rows: &mut Vec<Row>) {
        let void = Otherwise {
            w: self.main.0,
            s: self.main.1,
            free_radius: self.free_radius,
        };
        let or_void = (self.free_radius > 0.0).then_some(void);
        if let Some((w, s)) = self.floor {
            let otherwise = or_void.map(|o| Box::new(Otherwise { w, s, ..o }));
            rows.push(Row {
                otherwise,
                ..Row::new(feature.clone(), w, s, limit)
            });
        }
        let capped = self.cap.map(|(w, s)| Otherwise {
            w,
            s,
            free_radius: self.free_radius,
        });
        let otherwise = capped.or(or_void).map(Box::new);
        rows.push(Row {
            otherwise,
            ..Row::new(feature, self.main.0, self.main.1, limit)
        });
    }
}
