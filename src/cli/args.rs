//! Options of the commands, as clap reads them.

use std::path::PathBuf;

use clap::builder::{PossibleValuesParser, TypedValueParser};
use clap::{Args, Parser, Subcommand};

use super::failure::Failure;
use super::help;
use crate::io::plane::Coordinates;
use crate::io::site_json;
use crate::site::YardReading;
use crate::units::{LengthUnit, parse_length};

/// More threads than this are a slip of the hand.
const MAX_THREADS: i64 = 1024;

#[derive(Debug, Parser)]
#[command(name = "roundstead", version, about, long_about = help::ABOUT, after_help = help::AFTER)]
pub struct Arguments {
    #[command(subcommand)]
    pub command: Option<Command>,
}

#[derive(Debug, Subcommand)]
pub enum Command {
    /// Place the largest circle on a site and report it
    #[command(after_long_help = help::PLACE)]
    Place(Place),
    /// Check a proof against its site, by a checker that shares nothing with the search
    #[command(after_long_help = help::CHECK)]
    Check(Check),
    /// Place a circle on every lot of a file
    #[command(after_long_help = help::SWEEP)]
    Sweep(Sweep),
}

#[derive(Debug, Args)]
pub struct Place {
    /// Site in GeoJSON: a lot, or a FeatureCollection with a lot and what must be kept clear
    pub site: PathBuf,
    #[command(flatten)]
    pub reading: Reading,
    /// Write the proof to this file, for `roundstead check`
    #[arg(long, value_name = "FILE")]
    pub proof: Option<PathBuf>,
    /// Print one JSON object instead of the report
    #[arg(long)]
    pub json: bool,
    /// Most pieces looked at before the search ends with the best found and its bound
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u64).range(1..))]
    pub max_pieces: Option<u64>,
}

#[derive(Debug, Args)]
pub struct Check {
    /// Proof that `roundstead place --proof` wrote
    pub proof: PathBuf,
    /// The site it speaks of; options that changed its setbacks must be given again
    pub site: PathBuf,
    #[command(flatten)]
    pub reading: Reading,
}

#[derive(Debug, Args)]
pub struct Sweep {
    /// Lots: a GeoJSON FeatureCollection, a GeoJSON text sequence (RFC 8142), or CSV with a column wkt
    pub lots: PathBuf,
    #[command(flatten)]
    pub reading: Reading,
    /// Write one JSON object a line to this file (the default, to the standard output)
    #[arg(long, value_name = "FILE")]
    pub json_lines: Option<PathBuf>,
    /// Write a table to this file
    #[arg(long, value_name = "FILE")]
    pub csv: Option<PathBuf>,
    /// Cores to use [default: all]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u64).range(1..=MAX_THREADS as u64))]
    pub threads: Option<u64>,
    /// Most pieces looked at for one lot [default: 200000]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u64).range(1..))]
    pub max_pieces: Option<u64>,
}

/// How coordinates and setbacks are read; the same for every command.
#[derive(Debug, Default, Args)]
pub struct Reading {
    /// Setback from every lot line, instead of the file's
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    pub setback: Option<String>,
    /// Setback from front lot lines
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    pub front: Option<String>,
    /// Setback from side lot lines
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    pub side: Option<String>,
    /// Setback from rear lot lines
    #[arg(long, value_name = "LENGTH", allow_hyphen_values = true)]
    pub rear: Option<String>,
    /// Reading of a yard: setback lines drawn parallel to the lot lines, or rounded (the distance to the nearest point)
    #[arg(long, value_parser = PossibleValuesParser::new(["parallel", "rounded"]).map(reading_named))]
    pub yards: Option<YardReading>,
    /// Unit of the lengths typed and printed
    #[arg(long, default_value = "m", value_parser = PossibleValuesParser::new(LengthUnit::ALL.map(LengthUnit::name)).map(unit_named))]
    pub unit: LengthUnit,
    /// The coordinates are plane, x east and y north, in the unit; otherwise longitude and latitude
    #[arg(long)]
    pub plane: bool,
}

fn reading_named(name: String) -> YardReading {
    match name.as_str() {
        "rounded" => YardReading::Rounded,
        _ => YardReading::Parallel,
    }
}

fn unit_named(name: String) -> LengthUnit {
    LengthUnit::from_name(&name).unwrap_or_default()
}

/// The word for a reading in options, files and reports.
pub fn reading_name(reading: YardReading) -> &'static str {
    match reading {
        YardReading::Parallel => "parallel",
        YardReading::Rounded => "rounded",
    }
}

impl Reading {
    pub fn coordinates(&self) -> Coordinates {
        if self.plane {
            Coordinates::Plane(self.unit)
        } else {
            Coordinates::LonLat
        }
    }

    /// What overrides a site file.
    ///
    /// # Errors
    /// A length that cannot be read, as a failure of usage.
    pub fn site_options(&self) -> Result<site_json::Options, Failure> {
        Ok(site_json::Options {
            coordinates: self.coordinates(),
            reading: self.yards,
            setback_m: self.length_m("--setback", self.setback.as_deref())?,
            front_m: self.length_m("--front", self.front.as_deref())?,
            side_m: self.length_m("--side", self.side.as_deref())?,
            rear_m: self.length_m("--rear", self.rear.as_deref())?,
        })
    }

    fn length_m(&self, option: &str, typed: Option<&str>) -> Result<Option<f64>, Failure> {
        let length_m = typed.map(|text| parse_length(text, self.unit)).transpose();
        length_m.map_err(|e| Failure::usage(format!("{option}: {e}")))
    }
}
