//! The longer texts of `--help`: what the files and objects hold.

pub const ABOUT: &str = "\
Places the largest circular structure on an irregular lot, given its setbacks and what must be kept clear, proves that
no larger one fits, and says what holds it back.

Planning aid only. Local zoning, codes and licensed practice decide: have setbacks, easements, ground and structure
confirmed before anything is built.";

pub const AFTER: &str = "\
Without a command a sample site is placed on.

Exit codes: 0 a circle fits, a sweep is done, a proof holds; 1 other failure; 2 usage; 3 bad input; 4 no room;
5 the cap of work was hit.

Lengths are typed as 12, 3.5m, '12 ft' or 40'6\"; without a unit they are in --unit.";

pub const PLACE: &str = r#"SITE: GeoJSON in longitude and latitude (WGS84), or in plane coordinates with --plane.
  A Polygon or MultiPolygon is a lot. In a FeatureCollection each feature has the property `use`:
  lot            Polygon or MultiPolygon, one; `name`; `setback_m`: one figure, or `setbacks_m`: one per segment of
                 the outer ring in file order, or `roles`: one per segment (front, side, rear, street-side, other)
                 with the setbacks by role beside the features or from options
  keep-clear     any geometry; `class` (easement, buried-utility, overhead-line, well, septic-field, wetland,
                 watercourse, floodplain, steep-slope, building, dwelling, tank, road-edge, road-centreline,
                 district-boundary, tree, other), `required_m`, `name`; `diameter_m` on a point
  building-line  LineString; `kept`: left or right, seen along the line; `name`
  context        passed over
  Beside the features:
  "setbacks": {"front": 9, "side": 3, "rear": 6}
  "structure": {"kind": "tank", "height_m": 8, "rings": [{"name": "apron", "width_m": 2.5}]}
               kinds: circle, tank, silo, digester, roundabout, mast
  "rules": [{"from": "shell", "to": "well", "fixed_m": 15, "share_of_diameter": 0, "share_of_height": 0,
             "at_least_m": 10, "need_not_exceed_m": 30, "citation": "Site Rules 4.2"}]
           from: shell, centre or a ring's name; to: lot-lines, building-lines, keep-clear, a role, a class, "line 4"
  "yards": "parallel" or "rounded"
  What ends in _m is in metres whatever the unit of the coordinates.

--front, --side and --rear go before --setback, and both before the file. They need `roles` in the file.

--json prints one object on one line, figures unrounded; null where there is nothing to say:
  status                    fits, no-room, invalid-lot (exit code 3), cap-hit (best found and bound are given)
  yards                     parallel or rounded
  diameter_m                of the largest circle found
  other_reading_diameter_m  what the other reading of yards gives
  upper_m, gap_m            proven: no larger diameter fits; how far that is from diameter_m
  centre                    [x, y] in the coordinates of the file; verified to the last digit
  centre_lonlat             [longitude, latitude], or null with --plane
  area_m2                   of the lot
  limits                    [{name, required_m, clearance_m (from the shell, or the ring or centre the rule names, to the
                            thing itself), spare_m (for a yard by parallels: from the shell to the yard), binding,
                            relief_gain (metres of diameter per metre of reduction, one-sided)}]
  other_spots               [{centre, diameter_m}], found but not proven to be the next best
  slide                     {from, to} where the best centre is not unique, or null
  pieces                    looked at by the search
  solve_us                  from the validated site in memory to the verified placement, microseconds
  problems                  repairs made and notes; of an invalid lot, what is wrong
A file that cannot be read as a site has no object: its problems go to the standard error, exit code 3.

The report rounds so that nothing printed is better than what was found: the centre first, then diameters, clearances
and spares down, required distances and bounds up.

--proof writes the proof as JSON in the site plane, whole or not at all."#;

pub const CHECK: &str = "\
Exit codes: 0 the proof holds, 1 it does not, 3 a file cannot be read. Setbacks and readings that were given to `place` as
options must be given again, since the proof is for the site they made.";

pub const SWEEP: &str = r#"LOTS, told apart by how it begins; each lot is a Polygon or MultiPolygon:
  GeoJSON FeatureCollection   streamed; `id` of the feature or among its properties
  GeoJSON text sequence       RFC 8142
  CSV                         with a heading; columns `wkt` and perhaps `id` and `setback_m`; commas, semicolons or
                              tabs
Setbacks are those of `place`: a feature's properties `setback_m`, `setbacks_m` or `roles`, with "setbacks" by role
beside the features, which must stand before them; a table has `setback_m` only. --front, --side and --rear go before
--setback, and both before the file. A lot that says nothing has 0, and so has a role that nothing gives a setback; how
many lots have such roles, and whether --front, --side or --rear found no roles at all, is noted at the end. Other
properties and members beside the features are passed over, rules and yards too; a feature whose `use` is not lot is a
bad lot. For keep-clear areas and rules, place the lot by itself.

One row per lot, in the order of the file, with the members or columns
  id          the file's own, or the lot's position from 1
  status      fits, no-room, invalid-lot, cap-hit (best found and bound are given), failed (the program's own fault)
  diameter_m  null or empty where there is none
  upper_m     proven: no larger diameter fits
  centre      [x, y] in the coordinates of the file; in CSV centre_x and centre_y
  solve_us    from the validated polygon in memory to the verified placement, microseconds
  problem     of a bad lot
Without --json-lines and --csv the JSON lines go to the standard output. Files are written as rows come, so a sweep that
is stopped leaves those done; an output that is the input is refused. In CSV, text that a spreadsheet would run as a
formula has an apostrophe before it.

A bad lot is a row, and the sweep goes on. Where the file itself breaks off, what was read is written and the exit
code is 3."#;
