//! Meanings.
