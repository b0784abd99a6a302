//! The corners that may spoil an ear, in a uniform grid: those whose inside angle is 180 degrees or more.
//!
//! Corners leave the grid as cutting makes them convex; none ever enters. Few corners share one cell.

use super::bridges::Boundary;
use crate::geom::{Bounds, Point};

/// Up to this many corners lie in one cell: looking through them costs less than laying out a grid.
const ONE_CELL: usize = 48;
/// From this many columns on it pays to ask which of them a triangle meets, row by row.
const WIDE: usize = 6;
/// Says that a node is not in the grid.
const ABSENT: u32 = u32::MAX;

#[derive(Clone, Copy)]
struct Entry {
    at: Point,
    node: u32,
}

/// Reflex and straight corners by place.
pub(super) struct ReflexGrid {
    origin: Point,
    cells_per_m: f64,
    columns: usize,
    rows: usize,
    /// Cell k holds `entries[starts[k]..][..lens[k]]`.
    starts: Vec<u32>,
    lens: Vec<u32>,
    entries: Vec<Entry>,
    /// Where each node's entry is.
    slots: Vec<u32>,
}

impl ReflexGrid {
    pub(super) fn of(boundary: &Boundary) -> ReflexGrid {
        let mut found = Vec::with_capacity(boundary.len());
        let mut bounds = Bounds::EMPTY;
        for node in 0..boundary.len() as u32 {
            if boundary.turn(node) <= 0.0 {
                let at = boundary.at(node);
                bounds = bounds.with(at);
                found.push(Entry { at, node });
            }
        }
        let mut grid = ReflexGrid::laid_out(bounds, found.len());
        grid.slots = vec![ABSENT; boundary.len()];
        grid.fill(found);
        grid
    }

    /// An empty grid with about one square cell per corner.
    fn laid_out(bounds: Bounds, n: usize) -> ReflexGrid {
        let (mut cells_per_m, mut columns, mut rows) = (0.0, 1, 1);
        if n > ONE_CELL {
            let (width, height) = (bounds.width(), bounds.height());
            let side = (width * height / n as f64)
                .sqrt()
                .max(bounds.extent() / n as f64);
            cells_per_m = 1.0 / side;
            columns = (width * cells_per_m) as usize + 1;
            rows = (height * cells_per_m) as usize + 1;
        }
        ReflexGrid {
            origin: bounds.min,
            cells_per_m,
            columns,
            rows,
            starts: vec![0; columns * rows],
            lens: vec![0; columns * rows],
            entries: Vec::new(),
            slots: Vec::new(),
        }
    }

    /// Sorts the corners into cells by counting.
    fn fill(&mut self, found: Vec<Entry>) {
        if self.starts.len() == 1 {
            for (slot, entry) in found.iter().enumerate() {
                self.slots[entry.node as usize] = slot as u32;
            }
            self.lens[0] = found.len() as u32;
            self.entries = found;
            return;
        }
        for entry in &found {
            let cell = self.cell(entry.at);
            self.lens[cell] += 1;
        }
        let mut start = 0;
        for (first, len) in self.starts.iter_mut().zip(&mut self.lens) {
            *first = start;
            start += std::mem::take(len);
        }
        self.entries = found.clone();
        for entry in found {
            let cell = self.cell(entry.at);
            let slot = self.starts[cell] + self.lens[cell];
            self.lens[cell] += 1;
            self.entries[slot as usize] = entry;
            self.slots[entry.node as usize] = slot;
        }
    }

    fn column(&self, x: f64) -> usize {
        (((x - self.origin.x) * self.cells_per_m) as usize).min(self.columns - 1)
    }

    fn row(&self, y: f64) -> usize {
        (((y - self.origin.y) * self.cells_per_m) as usize).min(self.rows - 1)
    }

    fn cell(&self, p: Point) -> usize {
        self.row(p.y) * self.columns + self.column(p.x)
    }

    pub(super) fn holds(&self, node: u32) -> bool {
        self.slots[node as usize] != ABSENT
    }

    /// The place of a node that is in the grid; any number may be asked for.
    pub(super) fn get(&self, node: u32) -> Option<Point> {
        let slot = *self.slots.get(node as usize)?;
        (slot != ABSENT).then(|| self.entries[slot as usize].at)
    }

    pub(super) fn remove(&mut self, node: u32, at: Point) {
        let cell = self.cell(at);
        self.lens[cell] -= 1;
        let last = (self.starts[cell] + self.lens[cell]) as usize;
        let slot = std::mem::replace(&mut self.slots[node as usize], ABSENT);
        let moved = self.entries[last];
        self.entries[slot as usize] = moved;
        if moved.node != node {
            self.slots[moved.node as usize] = slot;
        }
    }

    /// A node in the triangle's bounding box that `wanted`, which is false for points outside the triangle, says yes to.
    pub(super) fn find(&self, triangle: [Point; 3], wanted: impl Fn(Point) -> bool) -> Option<u32> {
        let bounds = Bounds::of(triangle);
        let columns = (self.column(bounds.min.x), self.column(bounds.max.x));
        let rows = (self.row(bounds.min.y), self.row(bounds.max.y));
        let is_wide = columns.1 - columns.0 > WIDE && rows.1 > rows.0;
        for row in rows.0..=rows.1 {
            let (first, last) = if is_wide {
                self.columns_in_row(triangle, row)
            } else {
                columns
            };
            for column in first.max(columns.0)..=last.min(columns.1) {
                let cell = row * self.columns + column;
                let start = self.starts[cell] as usize;
                let entries = &self.entries[start..start + self.lens[cell] as usize];
                let hit = entries
                    .iter()
                    .find(|e| bounds.contains(e.at) && wanted(e.at));
                if let Some(entry) = hit {
                    return Some(entry.node);
                }
            }
        }
        None
    }

    /// The columns that a triangle meets in one row, and one more on either side against rounding.
    fn columns_in_row(&self, triangle: [Point; 3], row: usize) -> (usize, usize) {
        let bottom = self.origin.y + row as f64 / self.cells_per_m;
        let top = bottom + 1.0 / self.cells_per_m;
        let (mut min_x, mut max_x) = (f64::INFINITY, f64::NEG_INFINITY);
        for k in 0..3 {
            let (a, b) = (triangle[k], triangle[(k + 1) % 3]);
            if a.y.max(b.y) < bottom || a.y.min(b.y) > top {
                continue;
            }
            let per_y = if a.y == b.y {
                0.0
            } else {
                (b.x - a.x) / (b.y - a.y)
            };
            for (end, other) in [(a, b), (b, a)] {
                let x = end.x + (end.y.clamp(bottom, top) - end.y) * per_y;
                let x = x.clamp(end.x.min(other.x), end.x.max(other.x));
                (min_x, max_x) = (min_x.min(x), max_x.max(x));
            }
        }
        if min_x > max_x {
            return (0, self.columns - 1);
        }
        let first = self.column(min_x).saturating_sub(1);
        (first, (self.column(max_x) + 1).min(self.columns - 1))
    }
}
