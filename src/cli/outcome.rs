//! A site read and placed on: everything that a report or a JSON object is made of.

use std::cell::RefCell;
use std::path::Path;
use std::time::Instant;

use super::Exit;
use super::failure::Failure;
use crate::geom::Point;
use crate::io::plane::{Plane, Snapped};
use crate::io::site_json::Imported;
use crate::limits::Limits;
use crate::placement::{
    Effort, PlaceError, Placement, Proof, Report, Status, largest, prove, report,
};

/// A site with its placement.
pub struct Outcome {
    pub imported: Imported,
    pub limits: Limits,
    pub placement: Placement,
    pub report: Report,
    /// When it was asked for.
    pub proof: Option<Proof>,
    /// From the site in memory to the verified placement, microseconds.
    pub solve_us: f64,
    /// Every centre that was verified, with the input coordinates that name it to the bit.
    snapped: Vec<Snapped>,
}

impl Outcome {
    /// Places on a site; `file` is for messages.
    ///
    /// # Errors
    /// A site whose limits contradict it, or a placement that did not pass verification.
    pub fn of(
        imported: Imported,
        file: &Path,
        effort: Effort,
        with_proof: bool,
    ) -> Result<Outcome, Failure> {
        let plane = imported.plane;
        let snapped = RefCell::new(Vec::new());
        let snap = |p: Point| {
            let s = plane.snap(p);
            snapped.borrow_mut().push(s);
            s.site
        };
        let site = &imported.site;
        let place_failure = |e| place_failure(file, e);
        let begun = Instant::now();
        let limits = Limits::new(site).map_err(|e| place_failure(e.into()))?;
        let (placement, proof) = if with_proof {
            let (placement, proof) = prove(&limits, site, effort, &snap).map_err(place_failure)?;
            (placement, Some(proof))
        } else {
            let placement = largest(&limits, site, effort, &snap).map_err(place_failure)?;
            (placement, None)
        };
        let solve_us = begun.elapsed().as_nanos() as f64 / 1000.0;
        let report = report(&limits, site, &placement, effort, &snap).map_err(place_failure)?;
        Ok(Outcome {
            limits,
            placement,
            report,
            proof,
            solve_us,
            snapped: snapped.into_inner(),
            imported,
        })
    }

    pub fn plane(&self) -> &Plane {
        &self.imported.plane
    }

    /// A site point in input coordinates; to the bit where it is a centre that was verified.
    pub fn input_of(&self, site: Point) -> Point {
        let known = self.snapped.iter().rev().find(|s| s.site == site);
        known.map_or_else(|| self.plane().from_site(site), |s| s.input)
    }

    pub fn exit(&self) -> Exit {
        match self.placement.status {
            Status::Fits => Exit::Done,
            Status::NoRoom => Exit::NoRoom,
            Status::CapHit => Exit::CapHit,
            Status::Cancelled => Exit::Other,
        }
    }
}

/// A site that its own limits contradict is bad input; a placement that is withheld is the program's failure.
pub fn place_failure(file: &Path, e: PlaceError) -> Failure {
    match e {
        PlaceError::Site(e) => Failure::input(file, vec![e.to_string()]),
        e => Failure::other(&anyhow::Error::new(e).context(file.display().to_string())),
    }
}
