//! Distance rules: required = fixed + share of diameter + share of height, with a floor and a cap.

use super::{Class, Role, SiteError, Structure, checked_distance, checked_share};

/// Where a rule's distance is measured from.
#[derive(Clone, Debug, Default, PartialEq)]
pub enum From {
    #[default]
    Shell,
    /// The far edge of the structure's ring with this index.
    Ring(usize),
    Centre,
}

/// What a rule's distance is measured to.
#[derive(Clone, Debug, PartialEq)]
pub enum To {
    LotLines,
    Role(Role),
    /// The lot line with this number, from 1.
    Line(u32),
    KeepClear,
    Class(Class),
    BuildingLines,
}

/// One distance rule, applied to everything its `to` names.
#[derive(Clone, Debug, PartialEq)]
pub struct Rule {
    pub from: From,
    pub to: To,
    pub fixed_m: f64,
    pub share_of_diameter: f64,
    pub share_of_height: f64,
    pub at_least_m: Option<f64>,
    pub need_not_exceed_m: Option<f64>,
    /// Code and section as the user typed them.
    pub citation: Option<String>,
}

impl Rule {
    /// A rule with a fixed distance from the shell.
    pub fn fixed(to: To, fixed_m: f64) -> Rule {
        Rule {
            from: From::Shell,
            to,
            fixed_m,
            share_of_diameter: 0.0,
            share_of_height: 0.0,
            at_least_m: None,
            need_not_exceed_m: None,
            citation: None,
        }
    }

    /// Checks the rule's figures, and that the structure has what the rule speaks of.
    ///
    /// # Errors
    /// A figure that is negative or not finite, a cap below the floor, a ring or height the structure lacks.
    pub fn check(&self, what: &str, structure: &Structure) -> Result<(), SiteError> {
        checked_distance(format!("fixed_m of {what}"), self.fixed_m)?;
        checked_share(
            format!("share_of_diameter of {what}"),
            self.share_of_diameter,
        )?;
        checked_share(format!("share_of_height of {what}"), self.share_of_height)?;
        for (name, value) in [
            ("at_least_m", self.at_least_m),
            ("need_not_exceed_m", self.need_not_exceed_m),
        ] {
            if let Some(value) = value {
                checked_distance(format!("{name} of {what}"), value)?;
            }
        }
        if let (Some(floor), Some(cap)) = (self.at_least_m, self.need_not_exceed_m)
            && cap < floor
        {
            return Err(SiteError::CapBelowFloor {
                what: what.into(),
                floor,
                cap,
            });
        }
        if let From::Ring(i) = self.from
            && i >= structure.rings.len()
        {
            return Err(SiteError::UnknownRing {
                what: what.into(),
                ring: format!("number {}", i + 1),
            });
        }
        if self.share_of_height > 0.0 && structure.height_m.is_none() {
            return Err(SiteError::NoHeight { what: what.into() });
        }
        Ok(())
    }
}
