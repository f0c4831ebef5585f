//! The rule book: limits and settings, raw → validated.
