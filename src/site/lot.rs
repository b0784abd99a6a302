//! The lot: its area, and its boundary gathered into numbered lot lines.
//!
//! A lot line is a run of neighbouring segments of one ring that share role and setback and turn by less than
//! [`SMOOTH_TURN_DEG`] at each corner, so that a street curve sampled in thirty segments is one line. Lines are numbered from
//! 1 in the order of the rings, the first line of a ring starting at its first corner that is not smooth.

use super::{SiteError, checked_distance};
use crate::geom::{Area, Ring, Segment};

/// Corners that turn by less than this belong to one lot line. 15 degrees: curves on plats are sampled finer, while the
/// corners of a surveyed lot turn by more; common practice, no source.
pub const SMOOTH_TURN_DEG: f64 = 15.0;
/// cos² of [`SMOOTH_TURN_DEG`], so that the test needs neither root nor arc tangent.
const SMOOTH_COS2: f64 = 0.933_012_701_892_219_3;

/// What a lot line is to the lot.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Role {
    Front,
    Side,
    Rear,
    StreetSide,
    #[default]
    Other,
}

impl Role {
    pub const ALL: [Role; 5] = [
        Role::Front,
        Role::Side,
        Role::Rear,
        Role::StreetSide,
        Role::Other,
    ];

    /// The name in files and on screen.
    pub fn name(self) -> &'static str {
        match self {
            Role::Front => "front",
            Role::Side => "side",
            Role::Rear => "rear",
            Role::StreetSide => "street-side",
            Role::Other => "other",
        }
    }

    pub fn from_name(name: &str) -> Option<Role> {
        Role::ALL.into_iter().find(|r| r.name() == name)
    }
}

/// Role and setback of one boundary segment.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Boundary {
    pub role: Role,
    pub setback_m: f64,
}

/// A run of boundary segments with one number, one role and one setback.
#[derive(Clone, Debug, PartialEq)]
pub struct LotLine {
    /// From 1, over the whole lot.
    pub number: u32,
    pub role: Role,
    pub setback_m: f64,
    /// Index of the ring in the order of [`Area::rings`].
    pub ring: usize,
    /// First segment of the run within the ring.
    pub first: usize,
    /// How many segments, wrapping at the ring's end.
    pub len: usize,
}

/// A validated area with its boundary in lot lines.
#[derive(Clone, Debug, PartialEq)]
pub struct Lot {
    area: Area,
    /// The lot line of each segment, as an index into `lines`.
    line_of: Vec<u32>,
    lines: Vec<LotLine>,
}

impl Lot {
    /// A lot with no setbacks.
    pub fn plain(area: Area) -> Lot {
        Lot::gathered(area, |_| Boundary::default())
    }

    /// A lot with one role and setback per segment, in the order of [`Area::segments`].
    ///
    /// # Errors
    /// When the count does not fit or a setback is not a distance.
    pub fn new(area: Area, boundary: Vec<Boundary>) -> Result<Lot, SiteError> {
        if boundary.len() != area.n_segments() {
            return Err(SiteError::SetbackCount {
                given: boundary.len(),
                wanted: area.n_segments(),
            });
        }
        for (i, b) in boundary.iter().enumerate() {
            checked_distance(
                format_args!("the setback of segment {}", i + 1).to_string(),
                b.setback_m,
            )?;
        }
        Ok(Lot::gathered(area, |i| boundary[i]))
    }

    fn gathered(area: Area, boundary: impl Fn(usize) -> Boundary) -> Lot {
        let mut lot = Lot {
            line_of: vec![0; area.n_segments()],
            lines: Vec::new(),
            area,
        };
        let mut base = 0;
        for (ring_idx, ring) in lot.area.rings().enumerate() {
            let line_of = &mut lot.line_of[base..base + ring.len()];
            gather_ring(
                (ring_idx, ring),
                |i| boundary(base + i),
                &mut lot.lines,
                line_of,
            );
            base += ring.len();
        }
        lot
    }

    pub fn area(&self) -> &Area {
        &self.area
    }

    pub fn lines(&self) -> &[LotLine] {
        &self.lines
    }

    /// Role and setback of segment `i` in the order of [`Area::segments`].
    pub fn boundary(&self, i: usize) -> Boundary {
        let LotLine {
            role, setback_m, ..
        } = self.lines[self.line_of[i] as usize];
        Boundary { role, setback_m }
    }

    /// Whether no lot line has a setback.
    pub fn is_plain(&self) -> bool {
        self.lines.iter().all(|line| line.setback_m == 0.0)
    }

    /// For each segment, in the order of [`Area::segments`], the index of its line in [`Lot::lines`].
    pub fn line_of_segments(&self) -> &[u32] {
        &self.line_of
    }

    /// The segments of a lot line, in order.
    pub fn segments_of(&self, line: &LotLine) -> impl Iterator<Item = Segment> + '_ {
        let ring = self
            .area
            .rings()
            .nth(line.ring)
            .expect("a lot line names a ring of its own lot");
        let (first, len) = (line.first, line.len);
        (0..len).map(move |k| ring.segment((first + k) % ring.len()))
    }
}

/// Splits one ring into lot lines; `boundary` and `line_of` are by the ring's own segments.
fn gather_ring(
    (ring_idx, ring): (usize, &Ring),
    boundary: impl Fn(usize) -> Boundary,
    lines: &mut Vec<LotLine>,
    line_of: &mut [u32],
) {
    // 1. Whether each segment goes on from the one before it.
    let n = ring.len();
    let last = ring.segment(n - 1).vector();
    let mut before = (last, last.length2(), boundary(n - 1));
    for (i, (s, goes_on)) in ring.segments().zip(line_of.iter_mut()).enumerate() {
        let d = s.vector();
        let here = (d, d.length2(), boundary(i));
        *goes_on = u32::from(here.2 == before.2 && is_smooth(before.0.dot(d), before.1 * here.1));
        before = here;
    }
    // 2. A line from each segment that does not; one all round where all do.
    let start = line_of
        .iter()
        .position(|&goes_on| goes_on == 0)
        .unwrap_or(0);
    line_of[start] = 0;
    let first_line = lines.len();
    for i in (start..n).chain(0..start) {
        if line_of[i] == 0 {
            let number = lines.len() as u32 + 1;
            let Boundary { role, setback_m } = boundary(i);
            lines.push(LotLine {
                number,
                role,
                setback_m,
                ring: ring_idx,
                first: i,
                len: 0,
            });
        }
        line_of[i] = lines.len() as u32 - 1;
    }
    // 3. Each ends where the next one starts.
    for k in first_line..lines.len() {
        let next = lines.get(k + 1).map_or(start, |line| line.first);
        lines[k].len = if next > lines[k].first {
            next - lines[k].first
        } else {
            next + n - lines[k].first
        };
    }
}

/// Whether the boundary turns by less than [`SMOOTH_TURN_DEG`]: u · v and |u|² |v|² of the two directions.
fn is_smooth(dot: f64, lengths2: f64) -> bool {
    dot > 0.0 && dot * dot > SMOOTH_COS2 * lengths2
}
