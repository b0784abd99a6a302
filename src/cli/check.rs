//! `roundstead check`: a proof against the site it speaks of.

use super::args::Check;
use super::failure::Failure;
use super::report::CAUTION;
use super::{Exit, files, outcome, print};
use crate::io::site_json;
use crate::limits::Limits;
use crate::placement::{Proof, check};
use crate::units::Rounding;

/// Reads both, checks, says what holds.
pub fn run(options: &Check) -> Result<Exit, Failure> {
    let site_options = options.reading.site_options()?;
    let site_bytes = files::read(&options.site)?;
    let imported = site_json::read(&site_bytes, &site_options);
    let imported = imported.map_err(|e| match e {
        site_json::SiteJsonError::BadInput(problems)
        | site_json::SiteJsonError::InvalidLot(problems) => Failure::input(&options.site, problems),
    })?;
    let proof_bytes = files::read(&options.proof)?;
    let proof: Proof = serde_json::from_slice(&proof_bytes).map_err(|e| {
        let problem = format!("this is no proof that the program can read: {e}");
        Failure::input(&options.proof, vec![problem])
    })?;
    let site = &imported.site;
    let limits = Limits::new(site).map_err(|e| outcome::place_failure(&options.site, e.into()))?;
    let checked = check(&proof, &limits, site).map_err(|e| {
        let what = format!("{}: the proof does not hold", options.proof.display());
        Failure::other(&anyhow::Error::new(e).context(what))
    })?;
    let unit = options.reading.unit;
    let length = |m, rounding| {
        format!(
            "{} {}",
            unit.format(m, CHECKED_DECIMALS, rounding),
            unit.name()
        )
    };
    let upper = length(checked.upper_m, Rounding::Up);
    let circle = match checked.diameter_m {
        Some(diameter_m) => format!(
            "A circle of {} diameter fits, and none over {upper}",
            length(diameter_m, Rounding::Down)
        ),
        None => format!("No circle over {upper} diameter fits"),
    };
    print(&format!(
        "The proof holds for the lines as drawn. {circle}.\n  Pieces that were ruled out: {}\n{CAUTION}\n",
        checked.n_leaves
    ))?;
    Ok(Exit::Done)
}

/// Decimals of the claim: those of the gap that is proven.
const CHECKED_DECIMALS: usize = 9;
