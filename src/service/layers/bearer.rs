//! Bearer tokens: who may call `/v1`.

use std::path::PathBuf;
use std::sync::{PoisonError, RwLock};

use http::{HeaderMap, header};
use sha2::{Digest, Sha256};
use subtle::{Choice, ConstantTimeEq};

use crate::service::problem::{Problem, ProblemKind};

/// Why the tokens could not be read.
#[derive(Debug, thiserror::Error)]
pub enum TokenFileError {
    /// The file cannot be read.
    #[error("the bearer token file {} cannot be read: {source}", path.display())]
    Unreadable {
        /// The file.
        path: PathBuf,
        /// Why.
        source: std::io::Error,
    },
    /// The file holds no token.
    #[error("the bearer token file {} holds no token", path.display())]
    Empty {
        /// The file.
        path: PathBuf,
    },
    /// A token that no Authorization header can carry.
    #[error("line {line} of the bearer token file {} is not a bearer token (RFC 6750, 2.1)", path.display())]
    Malformed {
        /// The file.
        path: PathBuf,
        /// The line, from 1.
        line: usize,
    },
}

/// The tokens in force. Only their digests are kept, all of one length, so that comparing takes the same time
/// whatever was sent.
#[derive(Debug)]
pub(in crate::service) struct Tokens {
    path: PathBuf,
    digests: RwLock<Vec<[u8; 32]>>,
}

impl Tokens {
    /// Reads the file: one token a line; empty lines are skipped.
    pub(in crate::service) fn read(path: PathBuf) -> Result<Self, TokenFileError> {
        let digests = RwLock::new(digests(&path)?);
        Ok(Self { path, digests })
    }

    /// Reads the file again; the old tokens stay in force when that fails.
    pub(in crate::service) fn reload(&self) -> Result<(), TokenFileError> {
        let fresh = digests(&self.path)?;
        *self.digests.write().unwrap_or_else(PoisonError::into_inner) = fresh;
        Ok(())
    }

    /// Lets a request through that carries a token in force.
    pub(super) fn check(&self, headers: &HeaderMap) -> Result<(), Problem> {
        let Some(sent) = headers.get(header::AUTHORIZATION) else {
            return Err(Problem::new(ProblemKind::Unauthorized, "No bearer token was sent."));
        };
        let sent = sent.as_bytes();
        let token = match sent.split_at_checked(7) {
            Some((scheme, token)) if scheme.eq_ignore_ascii_case(b"bearer ") => token.trim_ascii(),
            _ => {
                return Err(Problem::new(
                    ProblemKind::Unauthorized,
                    "The Authorization header does not carry a bearer token.",
                ));
            }
        };
        let digest = Sha256::digest(token);
        let known = self.digests.read().unwrap_or_else(PoisonError::into_inner);
        // Every digest is compared, so that the time tells nothing of which one matched.
        let found = known.iter().fold(Choice::from(0), |found, one| found | one.ct_eq(digest.as_slice()));
        if bool::from(found) {
            Ok(())
        } else {
            Err(Problem::new(ProblemKind::Unauthorized, "The bearer token is not one this server knows."))
        }
    }
}

fn digests(path: &PathBuf) -> Result<Vec<[u8; 32]>, TokenFileError> {
    let text = std::fs::read_to_string(path)
        .map_err(|source| TokenFileError::Unreadable { path: path.clone(), source })?;
    let mut digests = Vec::new();
    for (index, line) in text.lines().enumerate() {
        let token = line.trim();
        if token.is_empty() {
            continue;
        }
        let sendable = |byte: u8| {
            byte.is_ascii_alphanumeric() || matches!(byte, b'-' | b'.' | b'_' | b'~' | b'+' | b'/' | b'=')
        };
        if !token.bytes().all(sendable) {
            return Err(TokenFileError::Malformed { path: path.clone(), line: index + 1 });
        }
        digests.push(Sha256::digest(token.as_bytes()).into());
    }
    if digests.is_empty() { Err(TokenFileError::Empty { path: path.clone() }) } else { Ok(digests) }
}
