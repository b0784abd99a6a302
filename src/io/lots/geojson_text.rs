//! One lot from the text of a GeoJSON Feature, Polygon or MultiPolygon.

use std::fmt;

use geojson::Geometry;
use serde::de::{Error, IgnoredAny, MapAccess, Visitor};
use serde::{Deserialize, Deserializer};
use serde_json::{Map, Value};

use super::{Content, briefly};
use crate::geom::validate::RawPolygon;
use crate::io::site_json::setbacks::{ByRole, is_near};
use crate::io::{geometry, visible};

#[derive(Deserialize)]
struct Feature {
    r#type: Option<String>,
    id: Option<Value>,
    geometry: Option<Geometry>,
    properties: Option<Properties>,
    setbacks: Option<Value>,
    // Where they stand wrongly and would be passed over unseen.
    r#use: Option<IgnoredAny>,
    setback_m: Option<IgnoredAny>,
    setbacks_m: Option<IgnoredAny>,
    roles: Option<IgnoredAny>,
}

impl Feature {
    fn misplaced(&self) -> Option<String> {
        let beside = [
            ("use", &self.r#use),
            ("setback_m", &self.setback_m),
            ("setbacks_m", &self.setbacks_m),
            ("roles", &self.roles),
        ];
        let (name, _) = beside.iter().find(|(_, value)| value.is_some())?;
        Some(format!(
            "{name} stands beside properties: move it into them"
        ))
    }
}

/// The properties that are read; others are passed over without making anything of them.
#[derive(Default)]
struct Properties {
    id: Option<Value>,
    r#use: Option<Value>,
    /// Those about setbacks, and what may be meant for one.
    own: Map<String, Value>,
}

impl<'de> Deserialize<'de> for Properties {
    fn deserialize<D: Deserializer<'de>>(source: D) -> Result<Properties, D::Error> {
        source.deserialize_map(PropertiesVisitor)
    }
}

struct PropertiesVisitor;

impl<'de> Visitor<'de> for PropertiesVisitor {
    type Value = Properties;

    fn expecting(&self, f: &mut fmt::Formatter) -> fmt::Result {
        f.write_str("an object of properties")
    }

    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Properties, A::Error> {
        let mut properties = Properties::default();
        while let Some(name) = map.next_key::<Name>()? {
            match name {
                Name::Id => properties.id = map.next_value()?,
                Name::Use => properties.r#use = map.next_value()?,
                Name::Own(name) => {
                    properties.own.insert(name, map.next_value()?);
                }
                Name::Foreign => {
                    map.next_value::<IgnoredAny>()?;
                }
            }
        }
        Ok(properties)
    }
}

/// The name of a property, kept only where it may be ours.
enum Name {
    Id,
    Use,
    Own(String),
    Foreign,
}

impl<'de> Deserialize<'de> for Name {
    fn deserialize<D: Deserializer<'de>>(source: D) -> Result<Name, D::Error> {
        source.deserialize_str(NameVisitor)
    }
}

struct NameVisitor;

impl Visitor<'_> for NameVisitor {
    type Value = Name;

    fn expecting(&self, f: &mut fmt::Formatter) -> fmt::Result {
        f.write_str("a name")
    }

    fn visit_str<E: Error>(self, name: &str) -> Result<Name, E> {
        Ok(match name {
            "id" => Name::Id,
            "use" => Name::Use,
            _ if is_near(name) => Name::Own(name.to_owned()),
            _ => Name::Foreign,
        })
    }
}

/// What can still be said of a feature that cannot be read as one.
#[derive(Deserialize)]
struct Label {
    id: Option<Value>,
    properties: Option<Value>,
}

/// The lot's own id, if it has one, and what it holds or what is wrong with it.
pub fn parse(text: &[u8]) -> (Option<Value>, Result<Content, String>) {
    let mut feature: Feature = match serde_json::from_slice(text) {
        Ok(feature) => feature,
        Err(e) => return (label(text), Err(sentence(text, &e))),
    };
    let properties = feature.properties.take().unwrap_or_default();
    let id = usable_id(feature.id.take()).or(usable_id(properties.id));
    let polygons = match (feature.r#type.as_deref(), properties.r#use) {
        (Some("Feature"), Some(other)) if other != "lot" => {
            Err(format!("not a lot: its use is {other}"))
        }
        (Some("Feature"), _) => match &feature.geometry {
            None => Err("the feature has no geometry".to_owned()),
            Some(geometry) => geometry::polygons(&geometry.value),
        },
        (Some("Polygon" | "MultiPolygon"), _) => bare(text),
        (Some(other), _) => Err(format!(
            "the type is \"{}\", not Feature, Polygon or MultiPolygon",
            visible(other)
        )),
        (None, _) => Err("the member type is missing: this is no GeoJSON".to_owned()),
    };
    let own = properties.own;
    let content = polygons.and_then(|polygons| {
        let by_role = by_role(&feature)?;
        Ok(Content {
            polygons,
            own,
            by_role,
        })
    });
    (id, content)
}

/// The setbacks by role of a feature that stands alone.
fn by_role(feature: &Feature) -> Result<Option<ByRole>, String> {
    if let Some(problem) = feature.misplaced() {
        return Err(problem);
    }
    let mut problems = Vec::new();
    let by_role = feature.setbacks.as_ref();
    let by_role = by_role.map(|value| ByRole::read(Some(value), &mut problems));
    match problems.as_slice() {
        [] => Ok(by_role),
        problems => Err(briefly(problems)),
    }
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
