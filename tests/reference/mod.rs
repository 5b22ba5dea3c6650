//! Checks against published values, one file a topic.

mod steam;
