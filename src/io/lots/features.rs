//! The texts of the features of a GeoJSON object, and the setbacks by role that stand before them.
//!
//! Reading is a feature ahead at the start, so that wrong setbacks by role refuse the file before any lot is placed. Those
//! that stand after the features come too late for the lots already handed out: that is an error, never passed over.

use std::io::BufRead;
use std::sync::Arc;

use serde::Deserialize;
use serde_json::Value;

use crate::io::collection::{Collection, SplitError};
use crate::io::site_json::setbacks::ByRole;

/// Why there is no further feature.
#[derive(Debug, thiserror::Error)]
pub enum FeaturesError {
    #[error(transparent)]
    Split(#[from] SplitError),
    #[error(
        "setbacks stands after the features, so the lots were placed without it: move it before them"
    )]
    LateSetbacks,
    #[error("the members beside the features cannot be read: {0}")]
    Members(#[from] serde_json::Error),
}

/// The members beside the features that count here.
#[derive(Default, Deserialize)]
struct Top {
    setbacks: Option<Value>,
}

/// Features while they stream by.
pub struct Features<R> {
    collection: Collection<R>,
    /// What was read ahead: whether there is a feature, and its text.
    first: Option<(Result<bool, SplitError>, Vec<u8>)>,
    by_role: Option<Arc<ByRole>>,
    n_given: u64,
    is_done: bool,
}

impl<R: BufRead> Features<R> {
    /// # Errors
    /// Everything that is wrong with the setbacks by role.
    pub fn open(reader: R) -> Result<Features<R>, Vec<String>> {
        let mut collection = Collection::new(reader);
        let mut text = Vec::new();
        let next = collection.next_feature(&mut text);
        let mut by_role = None;
        if let (Ok(there_is_one), true) = (&next, collection.has_features()) {
            let mut members = collection.envelope().to_vec();
            if *there_is_one {
                // Between features the envelope lacks its last bracket.
                members.push(b'}');
            }
            by_role = read_setbacks(&members)?;
        }
        Ok(Features {
            collection,
            first: Some((next, text)),
            by_role: by_role.map(Arc::new),
            n_given: 0,
            is_done: false,
        })
    }

    /// The setbacks by role for every lot of the file.
    pub fn by_role(&self) -> Option<Arc<ByRole>> {
        self.by_role.clone()
    }

    /// The text of the next feature, or of the whole object where it is one itself; `None` at the end.
    ///
    /// # Errors
    /// Where the object cannot be taken apart any further; nothing comes after.
    pub fn next_text(&mut self) -> Result<Option<Vec<u8>>, FeaturesError> {
        if self.is_done {
            return Ok(None);
        }
        let (next, mut text) = self.first.take().unwrap_or_else(|| {
            let mut text = Vec::new();
            (self.collection.next_feature(&mut text), text)
        });
        self.is_done = !matches!(next, Ok(true));
        if !next? {
            if self.collection.has_features() {
                return self.end();
            }
            text.extend_from_slice(self.collection.envelope());
        }
        self.n_given += 1;
        Ok(Some(text))
    }

    fn end(&self) -> Result<Option<Vec<u8>>, FeaturesError> {
        let top: Top = serde_json::from_slice(self.collection.envelope())?;
        if top.setbacks.is_some() && self.by_role.is_none() && self.n_given > 0 {
            return Err(FeaturesError::LateSetbacks);
        }
        Ok(None)
    }
}

fn read_setbacks(members: &[u8]) -> Result<Option<ByRole>, Vec<String>> {
    let top: Result<Top, _> = serde_json::from_slice(members);
    let top = top.map_err(|e| vec![FeaturesError::from(e).to_string()])?;
    let mut problems = Vec::new();
    let by_role = top
        .setbacks
        .map(|value| ByRole::read(Some(&value), &mut problems));
    if problems.is_empty() {
        Ok(by_role)
    } else {
        Err(problems)
    }
}
