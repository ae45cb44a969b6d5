//! Lip materials and finishes, and how liquids wet them.
