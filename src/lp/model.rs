//! The model layer: linear programs of any size, over good_lp with microlp.
//!
//! For what runs once a placement rather than once a piece: the convex-lot program, relief over tied multipliers, and later
//! programs with many variables. The kernel of [`super::game`] is checked against it.

use good_lp::{
    Expression, ProblemVariables, ResolutionError, Solution, SolverModel, constraint, microlp,
    variable,
};

/// How a row compares its two sides.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Compare {
    AtMost,
    AtLeast,
    Equal,
}

/// One row: coefficients · x compared with a right side. Coefficients beyond the row's length are 0.
#[derive(Clone, Debug)]
pub struct ModelRow {
    pub coefficients: Vec<f64>,
    pub compare: Compare,
    pub right: f64,
}

/// Maximise objective · x over x with lower bounds and rows.
#[derive(Clone, Debug, Default)]
pub struct Model {
    pub objective: Vec<f64>,
    /// Lower bound of each variable; minus infinity for none.
    pub lower: Vec<f64>,
    pub rows: Vec<ModelRow>,
}

/// Why a program has no optimum.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum ModelError {
    #[error("the linear program has no solution")]
    Infeasible,
    #[error("the linear program is unbounded")]
    Unbounded,
    #[error("the linear program could not be solved")]
    Failed,
}

/// A greatest value and a point where it is reached.
#[derive(Clone, Debug, PartialEq)]
pub struct Optimum {
    pub value: f64,
    pub x: Vec<f64>,
}

impl Model {
    /// The optimum of the program.
    ///
    /// # Errors
    /// When there is none.
    pub fn maximise(&self) -> Result<Optimum, ModelError> {
        let mut variables = ProblemVariables::new();
        let x: Vec<_> = self
            .lower
            .iter()
            .map(|&lower| variables.add(variable().min(lower)))
            .collect();
        let dot = |coefficients: &[f64]| -> Expression {
            coefficients.iter().zip(&x).map(|(&c, &v)| c * v).sum()
        };
        let mut model = variables.maximise(dot(&self.objective)).using(microlp);
        for row in &self.rows {
            let left = dot(&row.coefficients);
            model = model.with(match row.compare {
                Compare::AtMost => constraint!(left <= row.right),
                Compare::AtLeast => constraint!(left >= row.right),
                Compare::Equal => constraint!(left == row.right),
            });
        }
        let solution = model.solve().map_err(|error| match error {
            ResolutionError::Infeasible => ModelError::Infeasible,
            ResolutionError::Unbounded => ModelError::Unbounded,
            _ => ModelError::Failed,
        })?;
        let x: Vec<f64> = x.iter().map(|&v| solution.value(v)).collect();
        let value = self.objective.iter().zip(&x).map(|(c, v)| c * v).sum();
        Ok(Optimum { value, x })
    }
}

/// The point farthest inside a set of half-planes, and how far: maximise r subject to n_i · (x, y) - w_i r >= b_i.
///
/// What comes back: x, y, r. With unit normals and w_i = 1 this is the Chebyshev centre (Boyd & Vandenberghe, Convex
/// Optimization, 2004, sections 4.3.1 and 8.5.1).
/// Units: metres. Cost: one linear program in three variables.
///
/// # Errors
/// When the half-planes have no common point or do not bound r.
///
/// ```
/// use roundstead::lp::model::{HalfPlane, chebyshev};
/// let side = |nx, ny, b| HalfPlane { nx, ny, w: 1.0, b };
/// let square = [side(1.0, 0.0, 0.0), side(-1.0, 0.0, -4.0), side(0.0, 1.0, 0.0), side(0.0, -1.0, -4.0)];
/// let [x, y, r] = chebyshev(&square).unwrap();
/// assert!((x - 2.0).abs() < 1e-9 && (y - 2.0).abs() < 1e-9 && (r - 2.0).abs() < 1e-9);
/// ```
pub fn chebyshev(half_planes: &[HalfPlane]) -> Result<[f64; 3], ModelError> {
    let row = |h: &HalfPlane| ModelRow {
        coefficients: vec![h.nx, h.ny, -h.w],
        compare: Compare::AtLeast,
        right: h.b,
    };
    let free = f64::NEG_INFINITY;
    let model = Model {
        objective: vec![0.0, 0.0, 1.0],
        lower: vec![free; 3],
        rows: half_planes.iter().map(row).collect(),
    };
    let x = model.maximise()?.x;
    Ok([x[0], x[1], x[2]])
}

/// A row of the convex-lot program: nx x + ny y - w r >= b.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct HalfPlane {
    pub nx: f64,
    pub ny: f64,
    pub w: f64,
    pub b: f64,
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn infeasible_and_unbounded_programs_say_so() {
        let row = |c: f64, compare, right| ModelRow {
            coefficients: vec![c],
            compare,
            right,
        };
        let mut model = Model {
            objective: vec![1.0],
            lower: vec![0.0],
            rows: vec![],
        };
        assert_eq!(model.maximise(), Err(ModelError::Unbounded));
        model.rows = vec![
            row(1.0, Compare::AtMost, 1.0),
            row(1.0, Compare::AtLeast, 2.0),
        ];
        assert_eq!(model.maximise(), Err(ModelError::Infeasible));
        model.rows = vec![row(2.0, Compare::Equal, 3.0)];
        assert_eq!(
            model.maximise(),
            Ok(Optimum {
                value: 1.5,
                x: vec![1.5]
            })
        );
    }
}
