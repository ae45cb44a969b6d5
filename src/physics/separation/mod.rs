//! Does the stream leave, or does it cling?
