//! A spatial index over items in a given order: a tree of bounding boxes over runs of neighbours.
//!
//! The items of a lot come in ring order, so neighbours in the list are neighbours on the ground and runs of them have
//! small boxes without any sorting. Levels are flat arrays: a node covers [`FAN`] nodes of the level below, a node of the
//! lowest level a run of [`RUN`] items. Building is one pass, O(n); a query visits what its bound lets through.

use std::ops::Range;

use super::{Bounds, Point};

/// Children of a node above the lowest level. Of 4, 6, 8 and 16 the fewest instructions on lots of 40 to 200 segments, and
/// few more than the fewest on 10,000.
const FAN: usize = 4;

/// Items of a node of the lowest level: a run short enough to be looked through without a branch.
const RUN: usize = 4;

/// What a node knows of its items beside their box.
pub trait Summary: Copy {
    /// The summary of no item.
    const NONE: Self;
    fn join(self, other: Self) -> Self;
}

/// Nothing beside the box.
impl Summary for () {
    const NONE: () = ();
    fn join(self, (): ()) {}
}

/// A box and a summary of everything below.
#[derive(Clone, Copy, Debug)]
pub struct Node<S> {
    pub bounds: Bounds,
    pub summary: S,
}

/// The tree. The items themselves stay with the caller.
#[derive(Clone, Debug)]
pub struct RunTree<S> {
    n_items: usize,
    /// Nodes of all levels, the lowest level first.
    nodes: Vec<Node<S>>,
    /// Where each level starts in `nodes`; one more entry at the end.
    starts: Vec<usize>,
}

impl<S: Summary> RunTree<S> {
    /// A tree over `n_items` items, whose boxes and summaries come from `item`. O(n).
    pub fn build(n_items: usize, mut item: impl FnMut(usize) -> Node<S>) -> RunTree<S> {
        let n_runs = n_items.div_ceil(RUN);
        let mut nodes = Vec::with_capacity(n_runs + n_runs / (FAN - 1) + 4);
        let mut starts = vec![0];
        for first in (0..n_items).step_by(RUN) {
            nodes.push(join((first..n_items.min(first + RUN)).map(&mut item)));
        }
        starts.push(nodes.len());
        while nodes.len() - starts[starts.len() - 2] > FAN {
            let (from, to) = (starts[starts.len() - 2], nodes.len());
            for first in (from..to).step_by(FAN) {
                let node = join(nodes[first..to.min(first + FAN)].iter().copied());
                nodes.push(node);
            }
            starts.push(nodes.len());
        }
        RunTree {
            n_items,
            nodes,
            starts,
        }
    }

    /// Visits runs of items that may be nearest: a node is entered only while `lower` of it is below `best`, and `visit` looks
    /// at a run and may lower `best`. The sooner `best` is good, the fewer are visited.
    pub fn nearest(
        &self,
        best: &mut f64,
        lower: impl Fn(&Node<S>) -> f64,
        mut visit: impl FnMut(Range<usize>, &mut f64),
    ) {
        let top = self.starts.len() - 2;
        self.nearest_below(
            top,
            self.starts[top]..self.starts[top + 1],
            best,
            &lower,
            &mut visit,
        );
    }

    /// Takes the nodes of `range` nearest first: the sooner `best` is good, the fewer are entered.
    fn nearest_below(
        &self,
        level: usize,
        range: Range<usize>,
        best: &mut f64,
        lower: &impl Fn(&Node<S>) -> f64,
        visit: &mut impl FnMut(Range<usize>, &mut f64),
    ) {
        let mut lowers = [f64::INFINITY; FAN];
        for (slot, node) in lowers.iter_mut().zip(&self.nodes[range.clone()]) {
            *slot = lower(node);
        }
        loop {
            let (mut first, mut least) = (0, lowers[0]);
            for (k, &lower) in lowers.iter().enumerate().skip(1) {
                let is_less = lower < least;
                first = if is_less { k } else { first };
                least = if is_less { lower } else { least };
            }
            if least >= *best || least == f64::INFINITY {
                return;
            }
            lowers[first] = f64::INFINITY;
            let children = self.children(level, range.start + first);
            if level == 0 {
                visit(children, best);
            } else {
                self.nearest_below(level - 1, children, best, lower, visit);
            }
        }
    }

    /// Calls `visit` for every item in nodes whose box `wanted` lets through.
    pub fn each(&self, wanted: impl Fn(&Bounds) -> bool, mut visit: impl FnMut(usize)) {
        let top = self.starts.len() - 2;
        self.each_below(
            top,
            self.starts[top]..self.starts[top + 1],
            &wanted,
            &mut visit,
        );
    }

    fn each_below(
        &self,
        level: usize,
        range: Range<usize>,
        wanted: &impl Fn(&Bounds) -> bool,
        visit: &mut impl FnMut(usize),
    ) {
        for i in range {
            if !wanted(&self.nodes[i].bounds) {
                continue;
            }
            let children = self.children(level, i);
            if level == 0 {
                children.for_each(&mut *visit)
            } else {
                self.each_below(level - 1, children, wanted, visit)
            }
        }
    }

    /// The items (at level 0) or the nodes of the level below that node `i` of `level` covers.
    fn children(&self, level: usize, i: usize) -> Range<usize> {
        let i = i - self.starts[level];
        if level == 0 {
            i * RUN..self.n_items.min((i + 1) * RUN)
        } else {
            let base = self.starts[level - 1];
            base + i * FAN..self.starts[level].min(base + (i + 1) * FAN)
        }
    }
}

fn join<S: Summary>(nodes: impl Iterator<Item = Node<S>>) -> Node<S> {
    nodes.fold(
        Node {
            bounds: Bounds::EMPTY,
            summary: S::NONE,
        },
        |a, b| Node {
            bounds: a.bounds.union(b.bounds),
            summary: a.summary.join(b.summary),
        },
    )
}

/// Whether the horizontal ray from p towards +x can meet the box.
pub fn ray_meets(bounds: &Bounds, p: Point) -> bool {
    bounds.min.y <= p.y && p.y <= bounds.max.y && p.x <= bounds.max.x
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::geom::Segment;

    /// A closed zigzag ring of n segments.
    fn zigzag(n: usize) -> Vec<Segment> {
        let corner = |i: usize| {
            let (t, r) = (
                i as f64 / n as f64 * std::f64::consts::TAU,
                if i.is_multiple_of(2) { 10.0 } else { 7.0 },
            );
            Point::new(r * t.cos(), r * t.sin())
        };
        (0..n)
            .map(|i| Segment::new(corner(i), corner((i + 1) % n)))
            .collect()
    }

    #[track_caller]
    fn check(n: usize, p: Point) {
        let segments = zigzag(n);
        let tree = RunTree::build(n, |i| Node {
            bounds: Bounds::of([segments[i].a, segments[i].b]),
            summary: (),
        });
        let mut best = f64::INFINITY;
        tree.nearest(
            &mut best,
            |node| node.bounds.distance2(p).sqrt(),
            |run, best| run.for_each(|i| *best = best.min(segments[i].distance(p))),
        );
        let plain = segments
            .iter()
            .map(|s| s.distance(p))
            .fold(f64::INFINITY, f64::min);
        assert_eq!(best, plain, "nearest of {n} segments at {p:?}");
        let crosses = |s: &Segment| super::super::predicates::ray_crosses(s.a, s.b, p);
        let mut crossings = 0;
        tree.each(
            |b| ray_meets(b, p),
            |i| crossings += usize::from(crosses(&segments[i])),
        );
        assert_eq!(
            crossings,
            segments.iter().filter(|s| crosses(s)).count(),
            "ray from {p:?} over {n} segments"
        );
    }

    #[test]
    fn a_query_of_the_tree_equals_a_plain_scan() {
        for n in [3, 8, 9, 64, 65, 511, 513, 4097] {
            for p in [
                (0.0, 0.0),
                (6.9, 0.1),
                (-8.3, 4.4),
                (30.0, -2.0),
                (0.0, 9.99),
            ] {
                check(n, Point::new(p.0, p.1));
            }
        }
    }
}
