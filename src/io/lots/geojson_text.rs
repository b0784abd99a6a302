//! One lot from the text of a GeoJSON Feature, Polygon or MultiPolygon.

use geojson::Geometry;
use serde::Deserialize;
use serde_json::Value;

use crate::geom::validate::RawPolygon;
use crate::io::{geometry, visible};

#[derive(Deserialize)]
struct Feature {
    r#type: Option<String>,
    id: Option<Value>,
    geometry: Option<Geometry>,
    properties: Option<Properties>,
}

#[derive(Deserialize)]
struct Properties {
    id: Option<Value>,
    r#use: Option<Value>,
}

/// What can still be said of a feature that cannot be read as one.
#[derive(Deserialize)]
struct Label {
    id: Option<Value>,
    properties: Option<Value>,
}

/// The lot's own id, if it has one, and its polygons or what is wrong with them.
pub fn parse(text: &[u8]) -> (Option<Value>, Result<Vec<RawPolygon>, String>) {
    let feature: Feature = match serde_json::from_slice(text) {
        Ok(feature) => feature,
        Err(e) => return (label(text), Err(sentence(text, &e))),
    };
    let (inner_id, kind_of_use) = match feature.properties {
        Some(p) => (p.id, p.r#use),
        None => (None, None),
    };
    let id = usable_id(feature.id).or(usable_id(inner_id));
    let polygons = match (feature.r#type.as_deref(), kind_of_use, &feature.geometry) {
        (Some("Feature"), Some(other), _) if other != "lot" => {
            Err(format!("not a lot: its use is {other}"))
        }
        (Some("Feature"), _, None) => Err("the feature has no geometry".to_owned()),
        (Some("Feature"), _, Some(geometry)) => geometry::polygons(&geometry.value),
        (Some("Polygon" | "MultiPolygon"), ..) => bare(text),
        (Some(other), ..) => Err(format!(
            "the type is \"{}\", not Feature, Polygon or MultiPolygon",
            visible(other)
        )),
        (None, ..) => Err("the member type is missing: this is no GeoJSON".to_owned()),
    };
    (id, polygons)
}

fn bare(text: &[u8]) -> Result<Vec<RawPolygon>, String> {
    let geometry: Geometry = serde_json::from_slice(text).map_err(|e| sentence(text, &e))?;
    geometry::polygons(&geometry.value)
}

/// A string or a number; anything else is no id.
fn usable_id(id: Option<Value>) -> Option<Value> {
    id.filter(|id| id.is_string() || id.is_number())
}

fn label(text: &[u8]) -> Option<Value> {
    let label: Label = serde_json::from_slice(text).ok()?;
    let inner = label.properties.and_then(|p| p.get("id").cloned());
    usable_id(label.id).or(usable_id(inner))
}

/// The reader's message with a little of the text where it stopped.
fn sentence(text: &[u8], e: &serde_json::Error) -> String {
    let line = text.split(|&b| b == b'\n').nth(e.line().saturating_sub(1));
    let line = line.unwrap_or_default();
    let end = e.column().min(line.len());
    let near = line.get(end.saturating_sub(24)..end).unwrap_or_default();
    visible(&format!("{e}, after \"{}\"", String::from_utf8_lossy(near)))
}
