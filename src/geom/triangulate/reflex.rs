//! The corners that may spoil an ear, in a uniform grid: those whose inside angle is 180 degrees or more.
//!
//! Corners leave the grid as cutting makes them convex; none ever enters. Few corners share one cell.

use super::bridges::Boundary;
use crate::geom::{Bounds, Point};

/// Up to this many corners lie in one cell: looking through them costs less than laying out a grid.
const ONE_CELL: usize = 48;
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

    /// A node in the triangle's bounding box that `wanted` says yes to.
    pub(super) fn find(&self, triangle: [Point; 3], wanted: impl Fn(Point) -> bool) -> Option<u32> {
        let bounds = Bounds::of(triangle);
        let columns = self.column(bounds.min.x)..=self.column(bounds.max.x);
        for row in self.row(bounds.min.y)..=self.row(bounds.max.y) {
            for column in columns.clone() {
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
}
