//! `roundstead place`: one site, its report or JSON object, and its proof.

use std::path::Path;

use super::args::Place;
use super::failure::Failure;
use super::json::Object;
use super::outcome::Outcome;
use super::{Exit, files, print, report};
use crate::io::site_json::{self, SiteJsonError};
use crate::placement::Effort;
use crate::units::LengthUnit;

/// The site that is placed on when nothing is asked.
const SAMPLE: &[u8] = include_bytes!("../../sample-sites/01-l-lot-well.geojson");
const SAMPLE_NAME: &str = "sample-sites/01-l-lot-well.geojson";

/// Places on the first sample site, so that a first start shows what the program does.
pub fn run_sample() -> Result<Exit, Failure> {
    let file = Path::new(SAMPLE_NAME);
    let imported = site_json::read(SAMPLE, &site_json::Options::default());
    let imported = imported.map_err(|e| Failure::input(file, vec![e.to_string()]))?;
    let outcome = Outcome::of(imported, file, Effort::default(), false)?;
    let text = report::text(&outcome, file, LengthUnit::default());
    print(&format!(
        "This is a sample site. For your own: roundstead place SITE; for what SITE holds: roundstead place --help\n\n{text}"
    ))?;
    Ok(outcome.exit())
}

/// Reads the site, places, writes the proof, prints.
pub fn run(options: &Place) -> Result<Exit, Failure> {
    let site_options = options.reading.site_options()?;
    if let Some(proof) = &options.proof {
        files::refuse_input(&options.site, proof)?;
    }
    let bytes = files::read(&options.site)?;
    let imported = match site_json::read(&bytes, &site_options) {
        Ok(imported) => imported,
        Err(SiteJsonError::BadInput(problems)) => {
            return Err(Failure::input(&options.site, problems));
        }
        Err(SiteJsonError::InvalidLot(problems)) => {
            if options.json {
                let reading = site_options.reading.unwrap_or_default();
                print_object(&Object::of_invalid_lot(reading, problems.clone()))?;
            }
            return Err(Failure::input(&options.site, problems));
        }
    };
    drop(bytes);
    let mut effort = Effort::default();
    if let Some(max_pieces) = options.max_pieces {
        effort.max_pieces = usize::try_from(max_pieces).unwrap_or(usize::MAX);
    }
    let outcome = Outcome::of(imported, &options.site, effort, options.proof.is_some())?;
    if let (Some(path), Some(proof)) = (&options.proof, &outcome.proof) {
        files::write_whole(path, |out| Ok(serde_json::to_writer(out, proof)?))?;
    }
    if options.json {
        print_object(&Object::of(&outcome))?;
    } else {
        print(&report::text(&outcome, &options.site, options.reading.unit))?;
    }
    Ok(outcome.exit())
}

fn print_object(object: &Object) -> Result<(), Failure> {
    let line = object.line().map_err(|e| Failure::other(&e.into()))?;
    print(&line)
}
