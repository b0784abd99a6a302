//! Proofs hold, survive being written and read, and are refused once anything in them or in the site is altered.

use crate::support::{Seeded, area, site, star};
use roundstead::limits::Limits;
use roundstead::placement::{CheckError, Effort, Proof, ProofPiece, Status, check, prove};
use roundstead::site::{From, Lot, Rule, Site, To, YardReading};

fn proof_of(site: &Site) -> (Limits, Proof) {
    let limits = Limits::new(site).expect("the site holds");
    let (_, proof) =
        prove(&limits, site, Effort::default(), &|p| p).expect("the placement verifies");
    (limits, proof)
}

#[track_caller]
fn check_refused(what: &str, proof: &Proof, limits: &Limits, site: &Site) {
    if let Ok(checked) = check(proof, limits, site) {
        panic!("{what}: accepted as {checked:?}");
    }
}

#[test]
fn proofs_of_random_sites_hold_after_writing_and_reading() {
    let mut seeded = Seeded::new(21);
    let mut n_cuts = 0;
    for i in 0..200 {
        let mut site = if i % 3 == 0 {
            let n = 4 + seeded.below(60);
            Site::of_lot(Lot::plain(area(&[star(&mut seeded, n, 15.0, 90.0)])))
        } else {
            site(&mut seeded)
        };
        site.reading = [YardReading::Parallel, YardReading::Rounded][seeded.below(2)];
        let (limits, proof) = proof_of(&site);
        let text = serde_json::to_string(&proof).expect("a proof can be written");
        let read: Proof = serde_json::from_str(&text).expect("and read");
        assert_eq!(read, proof, "to the last digit");
        let checked = check(&read, &limits, &site).unwrap_or_else(|why| panic!("site {i}: {why}"));
        assert_eq!(checked.upper_m, proof.upper_m);
        n_cuts += proof
            .pieces
            .iter()
            .filter(|p| **p == ProofPiece::Cut)
            .count();
    }
    assert!(n_cuts > 500, "{n_cuts} pieces were cut");
}

/// A site whose proof has rows, discs, and cuts.
fn rich() -> (Site, Limits, Proof) {
    let mut seeded = Seeded::new(22);
    for _ in 0..100 {
        let n = 14 + seeded.below(20);
        let site = Site::of_lot(Lot::plain(area(&[star(&mut seeded, n, 20.0, 90.0)])));
        let (limits, proof) = proof_of(&site);
        let has = |wanted: &dyn Fn(&ProofPiece) -> bool| proof.pieces.iter().any(wanted);
        let discs = has(&|p| matches!(p, ProofPiece::Disc(_)));
        let cuts = has(&|p| *p == ProofPiece::Cut);
        let sums = has(&|p| matches!(p, ProofPiece::Rows(rows) if rows.len() == 3));
        if discs && cuts && sums && !proof.discs.is_empty() {
            return (site, limits, proof);
        }
    }
    panic!("one of a hundred sites has all kinds of leaves");
}

#[test]
fn an_altered_proof_is_refused() {
    let (site, limits, proof) = rich();
    check(&proof, &limits, &site).expect("unaltered it holds");
    let altered = |what: &str, alter: &dyn Fn(&mut Proof)| {
        let mut other = proof.clone();
        alter(&mut other);
        assert_ne!(other, proof, "{what} alters the proof");
        check_refused(what, &other, &limits, &site);
    };
    let place_of = |wanted: &dyn Fn(&ProofPiece) -> bool| {
        proof.pieces.iter().position(wanted).expect("it has one")
    };
    let rows = place_of(&|p| matches!(p, ProofPiece::Rows(rows) if rows.len() == 3));
    let cut = place_of(&|p| *p == ProofPiece::Cut);
    let disc = place_of(&|p| matches!(p, ProofPiece::Disc(_)));
    altered("a lower bound", &|p| {
        p.upper_m = p.circle.expect("it fits").diameter_m - 1e-6
    });
    altered("a larger circle", &|p| {
        p.circle.as_mut().expect("it fits").diameter_m += 1e-6
    });
    altered("a moved centre", &|p| {
        p.circle.as_mut().expect("it fits").centre[0] += 1e-3
    });
    altered("a cut left out", &|p| drop(p.pieces.remove(cut)));
    altered("a leaf left out", &|p| drop(p.pieces.pop()));
    altered("a leaf too many", &|p| p.pieces.push(ProofPiece::Outside));
    altered("a leaf called outside", &|p| {
        p.pieces[rows] = ProofPiece::Outside
    });
    altered("a leaf called near its corners", &|p| {
        p.pieces[disc] = ProofPiece::NearCorners
    });
    altered("a disc moved", &|p| {
        p.discs.iter_mut().for_each(|d| d.centre[1] += 1.0)
    });
    altered("a disc of other rows", &|p| {
        p.discs.iter_mut().for_each(|d| d.rows[0] = d.rows[1])
    });
    altered("a row that does not exist", &|p| {
        p.pieces[rows] = ProofPiece::Rows(vec![(1_000_000, 1.0)])
    });
    altered("another version", &|p| p.roundstead_proof += 1);
    altered("a triangle left out", &|p| {
        let roundstead::placement::ProofCover::Triangles(parts) = &mut p.cover else {
            p.cover = other_cover();
            return;
        };
        parts[0].pop();
    });
}

fn other_cover() -> roundstead::placement::ProofCover {
    roundstead::placement::ProofCover::Triangles(vec![Vec::new()])
}

/// One weight altered, leaf by leaf: a leaf whose bound has room may stand a small change, but none stands its weights
/// being moved onto the row that bounds it worst.
#[test]
fn a_weight_moved_is_refused_where_it_carried_the_bound() {
    let (site, limits, proof) = rich();
    let mut n_refused = 0;
    for (i, piece) in proof.pieces.iter().enumerate() {
        let ProofPiece::Rows(rows) = piece else {
            continue;
        };
        for k in 0..rows.len() {
            let mut other = proof.clone();
            let mut moved = rows.clone();
            moved[k].1 = -moved[k].1;
            other.pieces[i] = ProofPiece::Rows(moved);
            check_refused("a negative weight", &other, &limits, &site);
            let mut only = proof.clone();
            only.pieces[i] = ProofPiece::Rows(vec![rows[k]]);
            n_refused += usize::from(rows.len() > 1 && check(&only, &limits, &site).is_err());
        }
    }
    assert!(
        n_refused > 3,
        "{n_refused} single rows did not bear a leaf alone"
    );
}

#[test]
fn a_proof_of_another_site_is_refused() {
    let (site, limits, proof) = rich();
    let mut other = site.clone();
    other.rules.push(Rule::fixed(To::LotLines, 1.0));
    let other_limits = Limits::new(&other).expect("the site holds");
    assert_eq!(
        check(&proof, &other_limits, &other),
        Err(CheckError::OtherSite)
    );
    // Even with the hash made to match, the circle no longer clears.
    let forged = Proof {
        site: roundstead::placement::site_hash(&other),
        ..proof.clone()
    };
    check_refused("another rule", &forged, &other_limits, &other);
    // And a rule taken away leaves room above the bound.
    let (strict_limits, strict) = proof_of(&other);
    check(&strict, &strict_limits, &other).expect("its own proof holds");
    let forged = Proof {
        site: roundstead::placement::site_hash(&site),
        ..strict
    };
    check_refused("a rule taken away", &forged, &limits, &site);
}

/// Rules measured from the centre keep or break a place whatever the diameter, or free it from their share beyond a distance;
/// the best centre then lies on an edge. Searches once ran to their cap there.
#[test]
fn rules_from_the_centre_close_the_gap_and_their_proofs_hold() {
    let mut seeded = Seeded::new(23);
    for i in 0..80 {
        let mut site = site(&mut seeded);
        site.reading = [YardReading::Parallel, YardReading::Rounded][seeded.below(2)];
        let centre = |to: To, fixed_m: f64| Rule {
            from: From::Centre,
            ..Rule::fixed(to, fixed_m)
        };
        site.rules
            .push(centre(To::KeepClear, seeded.between(5.0, 25.0)));
        if seeded.below(2) == 0 {
            let share = Rule {
                share_of_diameter: 0.75,
                need_not_exceed_m: Some(12.0),
                ..centre(To::LotLines, 0.0)
            };
            site.rules.push(share);
        }
        let limits = Limits::new(&site).expect("the site holds");
        let effort = Effort {
            max_pieces: 50_000,
            ..Effort::default()
        };
        let (placement, proof) =
            prove(&limits, &site, effort, &|p| p).expect("the placement verifies");
        assert!(
            matches!(placement.status, Status::Fits | Status::NoRoom),
            "site {i}: {placement:?}"
        );
        let found = placement.circle.map_or(0.0, |c| c.diameter_m);
        assert!(
            placement.upper_m - found <= 1e-9,
            "site {i}: gap {:e}",
            placement.upper_m - found
        );
        check(&proof, &limits, &site).unwrap_or_else(|why| panic!("site {i}: {why}"));
    }
}
