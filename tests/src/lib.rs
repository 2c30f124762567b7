//! Tests of the whole program live in `tests/`.
