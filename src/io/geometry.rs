//! GeoJSON geometries as points of the plane; a third coordinate is left out.

use geojson::{GeometryValue, Position};

use crate::geom::Point;
use crate::geom::validate::RawPolygon;

/// The polygons of a Polygon or MultiPolygon.
///
/// # Errors
/// Another kind of geometry, a position of fewer than two numbers, or none at all: a sentence with the place.
pub fn polygons(geometry: &GeometryValue) -> Result<Vec<RawPolygon>, String> {
    let parts = match geometry {
        GeometryValue::Polygon { coordinates } => vec![polygon(coordinates, "")?],
        GeometryValue::MultiPolygon { coordinates } => {
            let part =
                |(i, rings): (usize, &Vec<_>)| polygon(rings, &format!("polygon {}, ", i + 1));
            coordinates
                .iter()
                .enumerate()
                .map(part)
                .collect::<Result<_, _>>()?
        }
        other => {
            return Err(format!(
                "the geometry is a {}, not a Polygon or MultiPolygon",
                other.type_name()
            ));
        }
    };
    if parts.iter().all(|p| p.rings.is_empty()) {
        return Err(format!("the {} is empty", geometry.type_name()));
    }
    Ok(parts)
}

fn polygon(rings: &[Vec<Position>], place: &str) -> Result<RawPolygon, String> {
    let ring = |(i, ring): (usize, &Vec<Position>)| {
        points(ring).map_err(|corner| format!("{place}ring {}, {corner}", i + 1))
    };
    let rings = rings
        .iter()
        .enumerate()
        .map(ring)
        .collect::<Result<_, _>>()?;
    Ok(RawPolygon { rings })
}

/// The points of a run of positions.
///
/// # Errors
/// A position of fewer than two numbers.
pub fn points(positions: &[Position]) -> Result<Vec<Point>, String> {
    let corner = |(i, p): (usize, &Position)| {
        point(p).ok_or_else(|| format!("corner {} has fewer than two coordinates", i + 1))
    };
    positions.iter().enumerate().map(corner).collect()
}

/// The point of a position, if it has two coordinates.
pub fn point(position: &Position) -> Option<Point> {
    match *position.as_slice() {
        [x, y, ..] => Some(Point::new(x, y)),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn refuses_what_is_no_area() {
        #[track_caller]
        fn check(text: &str, words: &str) {
            let geometry: geojson::Geometry = text.parse().expect("GeoJSON");
            let error = polygons(&geometry.value).expect_err("a refusal");
            assert!(error.contains(words), "{error}");
        }
        check(r#"{"type":"Point","coordinates":[1,2]}"#, "is a Point");
        check(
            r#"{"type":"Polygon","coordinates":[]}"#,
            "the Polygon is empty",
        );
        check(
            r#"{"type":"MultiPolygon","coordinates":[]}"#,
            "the MultiPolygon is empty",
        );
        check(
            r#"{"type":"MultiPolygon","coordinates":[[[[1,2],[1,3],[4]]]]}"#,
            "polygon 1, ring 1, corner 3 has fewer",
        );
    }
}
