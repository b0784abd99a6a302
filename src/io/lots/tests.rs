//! Tests of reading lots: every kind of file, and bad ones in the middle.

use super::*;
use crate::geom::Point;
use proptest::prelude::*;
use std::io::BufReader;

fn read(text: &[u8]) -> Vec<Result<LotRecord, LotProblem>> {
    let reader = BufReader::with_capacity(16, text);
    Lots::open(reader, "lots")
        .expect("a file of lots")
        .records(Options::default())
        .collect()
}

/// What came out in short: id and corner counts, or `!` and the problem.
fn brief(lots: &[Result<LotRecord, LotProblem>]) -> Vec<String> {
    let corners = |lot: &LotRecord| {
        let ring = |p: &RawPolygon| p.rings.iter().map(Vec::len).collect::<Vec<_>>();
        lot.polygons.iter().map(ring).collect::<Vec<_>>()
    };
    lots.iter()
        .map(|lot| match lot {
            Ok(lot) => format!("{} {:?}", lot.id, corners(lot)),
            Err(problem) => format!("! {} {problem}", problem.id),
        })
        .collect()
}

#[track_caller]
fn check(text: &[u8], expected: &[&str]) {
    let got = brief(&read(text));
    assert_eq!(got.len(), expected.len(), "{got:#?}");
    for (got, expected) in got.iter().zip(expected) {
        assert!(
            got.starts_with(expected) || got.contains(expected),
            "{got}\nis not\n{expected}"
        );
    }
}

const SQUARE: &str = "[[[0,0],[10,0],[10,10.5],[0,10],[0,0]]]";

fn feature(members: &str, coordinates: &str) -> String {
    format!(
        r#"{{"type":"Feature",{members}"geometry":{{"type":"Polygon","coordinates":{coordinates}}}}}"#
    )
}

#[test]
fn reads_a_collection_and_goes_on_after_a_bad_feature() {
    let features = [
        feature("", SQUARE),
        feature(r#""id":"a-7","#, SQUARE),
        feature(r#""properties":{"id":9,"name":"x"},"#, SQUARE),
        feature(r#""id":{},"#, "[[[0,0,5],[1,0,5],[1,1,5]]]"),
        feature(r#""id":"nan","#, "[[[0,0],[NaN,0],[1,1]]]"),
        feature(r#""id":"huge","#, "[[[0,0],[1e400,0],[1,1]]]"),
        feature(r#""id":"text","#, r#"[[[0,0],["1",0],[1,1]]]"#),
        feature(r#""id":"mixed","#, "[[[0,0],3,[1,1]]]"),
        feature(r#""id":"short","#, "[[[0,0],[1],[1,1]]]"),
        feature(r#""properties":{"use":"keep-clear"},"#, SQUARE),
        r#"{"type":"Feature","geometry":null}"#.to_owned(),
        r#"{"type":"Feature","geometry":{"type":"Point","coordinates":[1,2]}}"#.to_owned(),
        "null".to_owned(),
        format!(r#"{{"type":"MultiPolygon","coordinates":[{SQUARE},{SQUARE}]}}"#),
        format!("{}1{}", "[".repeat(3000), "]".repeat(3000)),
        feature("", SQUARE),
    ];
    let text = format!(
        "\u{feff}{{\"type\":\"FeatureCollection\",\"name\":\"x\",\"features\":[{}],\"more\":1}}",
        features.join(",\n")
    );
    let expected = [
        "1 [[5]]",
        "\"a-7\" [[5]]",
        "9 [[5]]",
        "4 [[3]]",
        "! 5 feature 5: expected value",
        "! \"huge\" feature 6: number out of range",
        "! \"text\" feature 7: ",
        "! \"mixed\" feature 8: ",
        "! \"short\" feature 9: ring 1, corner 2 has fewer than two",
        "! 10 feature 10: not a lot: its use is \"keep-clear\"",
        "! 11 feature 11: the feature has no geometry",
        "! 12 feature 12: the geometry is a Point",
        "! 13 feature 13: ",
        "14 [[5], [5]]",
        "! 15 feature 15: ",
        "16 [[5]]",
    ];
    check(text.as_bytes(), &expected);
}

#[test]
fn keeps_coordinates_to_the_bit() {
    let text = feature("", "[[[457550.789,5549991.418],[-1e-3,0.1],[3,4]]]");
    let lots = read(text.as_bytes());
    let lot = lots.first().and_then(|l| l.as_ref().ok()).expect("a lot");
    let expected = [(457_550.789, 5_549_991.418), (-0.001, 0.1), (3.0, 4.0)];
    let expected = expected.map(|(x, y)| Point::new(x, y)).to_vec();
    assert_eq!(
        lot.polygons,
        [RawPolygon {
            rings: vec![expected]
        }]
    );
}

#[test]
fn a_cut_off_collection_ends_with_its_place() {
    let text = format!(r#"{{"features":[{},{{"type":"Fea"#, feature("", SQUARE));
    check(
        text.as_bytes(),
        &["1 [[5]]", "! 2 feature 2: the file ends at byte"],
    );
    let lots = read(text.as_bytes());
    assert!(matches!(lots.last(), Some(Err(p)) if p.ends_file));
    let text = format!(r#"{{"features":[{} oops]}}"#, feature("", SQUARE));
    check(
        text.as_bytes(),
        &["1 [[5]]", "a comma or ] after a feature is expected"],
    );
    check(b"[1,2]", &["an object { is expected"]);
    check(br#"{"a":1}"#, &["the member type is missing"]);
    check(br#"{"type":"FeatureCollection","features":[]}"#, &[]);
}

#[test]
fn reads_a_text_sequence_and_goes_on_after_a_bad_text() {
    let lot = feature(r#""id":1.5,"#, SQUARE);
    let bare = format!(r#"{{"type":"Polygon","coordinates":{SQUARE}}}"#);
    let text = format!(
        "\x1e{lot}\n\x1e\x1e{{\"type\":\n\x1e{bare}\n\x1e{{\"type\":\"FeatureCollection\"}}\n"
    );
    let expected = [
        "1.5 [[5]]",
        "! 2 feature 2: EOF while parsing",
        "3 [[5]]",
        "! 4 feature 4: the type is \"FeatureCollection\"",
    ];
    check(text.as_bytes(), &expected);
}

#[test]
fn reads_a_table_and_goes_on_after_a_bad_row() {
    let text = "\u{feff}id,family,WKT\r\n\
        7,rect,\"POLYGON ((0 0, 10 0, 10 10, 0 0))\"\r\n\
        ,x,\"multipolygon(((0 0,1 0,1 1)),((5 5,6 5,6 6,5 5),(5.5 5.2,5.6 5.2,5.6 5.3)))\"\n\
        =1+1,x,\"POLYGON Z ((0 0 5, 10 0 5, 10 10 5, 0 0 5))\"\n\
        d,x,\"SRID=4326;POLYGON((0 0 5,10 0 5,10 10 5,0 0 5))\"\n\
        e,x,\"POLYGON ((0 0, 10 NaN, 10 10))\"\n\
        f,x,POLYGON EMPTY\n\
        g,x,POINT (1 2)\n\
        h,x,\"POLYGON ((0 0, 10 0, 10 10\"\n\
        i,x,\"POLYGON ((0 0, 10 0, 10 10)) POLYGON ((0 0, 1 1, 2 2))\"\n\
        j\n\
        k,x,\n\
        l,x,\"GEOMETRYCOLLECTION(POLYGON ((0 0, 10 0, 10 10)))\"\n\
        m,x,\"POLYGON ((0 0, 1e400 0, 10 10))\"\n\
        n,x,\"POLYGON ((0 0, 10 0, 10 10, 0 0))\"";
    let expected = [
        "\"7\" [[4]]",
        "2 [[3], [4, 3]]",
        "\"=1+1\" [[4]]",
        "\"d\" [[4]]",
        "! \"e\" row 5: the POLYGON cannot be read",
        "! \"f\" row 6: the POLYGON is empty",
        "! \"g\" row 7: the geometry is a POINT",
        "! \"h\" row 8: a bracket is left open",
        "! \"i\" row 9: \" POLYGON ((0 0, 1 1,\" follows",
        "! \"j\" row 10: the row has no cell",
        "! \"k\" row 11: the cell holds no well-known text",
        "! \"l\" row 12: the geometry is a GEOMETRYCOLLECTION",
        "! \"m\" row 13: the corner inf, 0 is not finite",
        "\"n\" [[4]]",
    ];
    check(text.as_bytes(), &expected);
    check(b"wkt;id\nPOLYGON((0 0,1 0,1 1));z\n", &["\"z\" [[3]]"]);
}

#[test]
fn refuses_files_that_hold_no_lots() {
    #[track_caller]
    fn check(text: &[u8], words: &str) {
        let error = Lots::open(text, "parcels.csv")
            .err()
            .expect("a refusal")
            .to_string();
        assert!(error.contains(words), "{error}");
    }
    check(b"", "parcels.csv is empty");
    check(b"\xef\xbb\xbf \n", "parcels.csv is empty");
    check(b"id,geometry\n1,2\n", "neither GeoJSON nor a table");
    check(b"%PDF-1.7\n", "neither GeoJSON nor a table");
}

proptest! {
    #![proptest_config(crate::seeded::config())]

    /// Damaged files of every kind: every lot is read or refused, and the reading ends.
    #[test]
    fn damaged_files_end(
        kind in 0..3usize,
        changes in proptest::collection::vec((any::<prop::sample::Index>(), any::<u8>()), 1..6),
    ) {
        let lot = feature("", SQUARE);
        let mut bytes = match kind {
            0 => format!("{{\"type\":\"FeatureCollection\",\"features\":[{lot},{lot},{lot}]}}"),
            1 => format!("\x1e{lot}\n\x1e{lot}\n\x1e{lot}\n"),
            _ => "id,wkt\n1,\"POLYGON ((0 0, 9 0, 9 9, 0 0))\"\n2,\"POLYGON ((0 0, 9 0, 9 9))\"\n".to_owned(),
        }
        .into_bytes();
        for (at, byte) in changes {
            let at = at.index(bytes.len());
            bytes[at] = byte;
        }
        if let Ok(lots) = Lots::open(bytes.as_slice(), "lots") {
            prop_assert!(lots.records(Options::default()).count() <= bytes.len());
        }
    }
}
