//! The file taken apart: the features by number, and the members beside them.

use geojson::{Feature, Geometry};
use serde::Deserialize;
use serde::de::IgnoredAny;
use serde_json::{Map, Value};

use super::MAX_PROBLEMS;
use super::members::{misspelt, quoted};
use crate::io::collection::Collection;
use crate::io::plane::Coordinates;
use crate::io::visible;

/// A byte-order mark in UTF-8.
const BYTE_ORDER_MARK: &[u8] = b"\xef\xbb\xbf";
/// Members beside the features that are ours.
const OURS: [&str; 4] = ["setbacks", "structure", "rules", "yards"];
/// Properties of ours, which beside `properties` would be passed over unseen.
const PROPERTIES: [&str; 8] = [
    "use",
    "setback_m",
    "setbacks_m",
    "roles",
    "class",
    "required_m",
    "kept",
    "diameter_m",
];
/// How many characters before the place of a fault are shown.
const SHOWN_BEFORE: usize = 24;

/// A feature with its number.
pub struct Numbered {
    /// How it is called in messages: number from 1, and its name or id.
    pub place: String,
    /// What it says it is; `lot` for a feature that stands alone.
    pub kind_of_use: String,
    pub feature: Feature,
}

impl Numbered {
    pub fn properties(&self) -> Option<&Map<String, Value>> {
        self.feature.properties.as_ref()
    }
}

/// The members beside the features.
#[derive(Default, Deserialize)]
pub struct Top {
    pub setbacks: Option<Value>,
    pub structure: Option<Value>,
    pub rules: Option<Value>,
    pub yards: Option<Value>,
    r#type: Option<Value>,
    crs: Option<Value>,
    // Read elsewhere, or of no meaning here.
    #[serde(rename = "name")]
    _name: Option<IgnoredAny>,
    #[serde(rename = "bbox")]
    _bbox: Option<IgnoredAny>,
    #[serde(rename = "id")]
    _id: Option<IgnoredAny>,
    #[serde(rename = "properties")]
    _properties: Option<IgnoredAny>,
    #[serde(rename = "geometry")]
    _geometry: Option<IgnoredAny>,
    #[serde(rename = "coordinates")]
    _coordinates: Option<IgnoredAny>,
    #[serde(flatten)]
    others: Map<String, Value>,
}

/// A file taken apart.
pub struct Draft {
    pub top: Top,
    pub features: Vec<Numbered>,
}

/// Takes a file apart.
///
/// # Errors
/// What is no GeoJSON, with line and column, and features that cannot be told what they are.
pub fn open(bytes: &[u8], coordinates: Coordinates) -> Result<Draft, Vec<String>> {
    let bytes = bytes.strip_prefix(BYTE_ORDER_MARK).unwrap_or(bytes);
    if bytes.iter().all(u8::is_ascii_whitespace) {
        return Err(vec!["the file is empty".to_owned()]);
    }
    serde_json::from_slice::<IgnoredAny>(bytes).map_err(|e| vec![fault(bytes, 0, &e)])?;
    let mut problems = Vec::new();
    let mut collection = Collection::new(bytes);
    let (mut features, mut text) = (Vec::new(), Vec::new());
    loop {
        match collection.next_feature(&mut text) {
            Ok(true) => {}
            Ok(false) => break,
            Err(e) => return Err(vec![e.to_string()]),
        }
        let from = usize::try_from(collection.feature_from()).unwrap_or(usize::MAX);
        let number = features.len() + 1;
        if problems.len() >= MAX_PROBLEMS {
            problems.push("there are more problems after these".to_owned());
            return Err(problems);
        }
        features.push(serde_json::from_slice::<Feature>(&text).map_err(|e| {
            let fault = fault(bytes, from, &e);
            problems.push(format!("feature {number}: {fault}"));
        }));
    }
    let envelope = collection.envelope();
    let top: Top = serde_json::from_slice(envelope).map_err(|e| vec![fault(envelope, 0, &e)])?;
    let alone = !collection.has_features();
    if alone {
        features.push(sole(&top, envelope).map_err(|e| problems.push(e)));
    }
    let only = features.len() == 1;
    let features: Vec<Feature> = features.into_iter().flatten().collect();
    top.check(alone, coordinates, &mut problems);
    let numbered = features
        .into_iter()
        .enumerate()
        .filter_map(|(i, feature)| {
            Numbered::new(i + 1, feature, only)
                .map_err(|e| problems.push(e))
                .ok()
        })
        .collect();
    if problems.is_empty() {
        Ok(Draft {
            top,
            features: numbered,
        })
    } else {
        Err(problems)
    }
}

/// The feature of a file that is not a collection.
fn sole(top: &Top, text: &[u8]) -> Result<Feature, String> {
    let kind = top.r#type.as_ref().and_then(Value::as_str);
    let feature = match kind {
        Some("Feature") => serde_json::from_slice(text),
        Some("Polygon" | "MultiPolygon") => {
            serde_json::from_slice::<Geometry>(text).map(|geometry| Feature {
                geometry: Some(geometry),
                ..Feature::default()
            })
        }
        Some("FeatureCollection") => {
            return Err("the collection has no array of features".to_owned());
        }
        Some(other) => {
            return Err(format!(
                "the type is {}: a site is a Polygon, a MultiPolygon, a Feature or a FeatureCollection",
                quoted(other)
            ));
        }
        None => return Err("the member type is missing: this is no GeoJSON".to_owned()),
    };
    feature.map_err(|e| fault(text, 0, &e))
}

impl Top {
    fn check(&self, alone: bool, coordinates: Coordinates, problems: &mut Vec<String>) {
        let kind = self.r#type.as_ref().and_then(Value::as_str);
        if !alone && kind != Some("FeatureCollection") {
            problems.push("a file with features has the type \"FeatureCollection\"".to_owned());
        }
        for member in self.others.keys() {
            if let Some(ours) = misspelt(member, &OURS) {
                problems.push(format!(
                    "the member {} beside the features is unknown: is {ours} meant?",
                    quoted(member)
                ));
            }
        }
        let crs = self.crs.as_ref();
        let crs = crs.and_then(|crs| crs.pointer("/properties/name")?.as_str());
        if let (Coordinates::LonLat, Some(crs)) = (coordinates, crs)
            && !["CRS84", "4326", "4979"].iter().any(|c| crs.ends_with(c))
        {
            problems.push(format!(
                "crs says that the coordinates are {}, not longitude and latitude: for plane coordinates use --plane",
                quoted(crs)
            ));
        }
    }
}

impl Numbered {
    fn new(number: usize, feature: Feature, only: bool) -> Result<Numbered, String> {
        let name = feature.property("name").and_then(Value::as_str);
        let id = match (&feature.id, name) {
            (_, Some(name)) => format!(" ({})", quoted(name)),
            (Some(geojson::feature::Id::String(id)), _) => format!(" ({})", quoted(id)),
            (Some(geojson::feature::Id::Number(id)), _) => format!(" (id {id})"),
            (None, None) => String::new(),
        };
        let place = format!("feature {number}{id}");
        let beside = feature.foreign_members.iter().flat_map(|m| m.keys());
        if let Some(name) = beside
            .into_iter()
            .find(|n| PROPERTIES.contains(&n.as_str()))
        {
            return Err(format!(
                "{place}: {name} stands beside properties: move it into them"
            ));
        }
        let kind_of_use = match feature.property("use") {
            Some(Value::String(kind)) => kind.clone(),
            None | Some(Value::Null) if only => "lot".to_owned(),
            None | Some(Value::Null) => {
                return Err(format!(
                    "{place}: use is missing: say lot, keep-clear, building-line or context"
                ));
            }
            Some(other) => return Err(format!("{place}: use is {other}, not a text")),
        };
        if !["lot", "keep-clear", "building-line", "context"].contains(&kind_of_use.as_str()) {
            return Err(format!(
                "{place}: use is {}: say lot, keep-clear, building-line or context",
                quoted(&kind_of_use)
            ));
        }
        Ok(Numbered {
            place,
            kind_of_use,
            feature,
        })
    }
}

/// The reader's message with its line and column in the whole file and a little of the text before it; `from` is where
/// the text it was given begins in `bytes`.
fn fault(bytes: &[u8], from: usize, e: &serde_json::Error) -> String {
    let start = bytes.get(..from).unwrap_or(bytes);
    let lines_before = start.iter().filter(|b| **b == b'\n').count();
    let first_line = start.iter().rposition(|b| *b == b'\n').map_or(0, |i| i + 1);
    let line = lines_before + e.line();
    let column = match e.line() {
        0 | 1 => e.column() + from - first_line.min(from),
        _ => e.column(),
    };
    let text = bytes.split(|b| *b == b'\n').nth(line.saturating_sub(1));
    let text = text.unwrap_or_default();
    let end = column.min(text.len());
    let near = text.get(end.saturating_sub(SHOWN_BEFORE)..end);
    let near = String::from_utf8_lossy(near.unwrap_or_default()).into_owned();
    let full = e.to_string();
    let message = full.split(" at line ").next().unwrap_or(&full);
    format!(
        "line {line}, column {column}: {}, after {}",
        visible(message),
        quoted(&near)
    )
}
