//! From pour rate to the stream at the lip.
