//! Every limit of the service, declared once: the flag that sets it, its default, and its place in
//! `GET /v1/limits`.

use std::time::Duration;

use serde::Serialize;
use utoipa::ToSchema;

use crate::process::ReadLimits;

/// Limits on bytes, time and concurrency.
#[derive(Clone, Debug, Serialize, ToSchema, clap::Args)]
pub struct ServiceLimits {
    /// Bytes in a body after decompression; above it 413.
    #[arg(long, value_name = "BYTES", default_value_t = 1 << 20)]
    pub body_bytes: usize,
    /// Bytes in one line of a batch after decompression.
    #[arg(long, value_name = "BYTES", default_value_t = 256 << 10)]
    pub line_bytes: usize,
    /// Lines in a batch.
    #[arg(long, value_name = "N", default_value_t = 10_000)]
    pub lines: usize,
    /// Bytes in a request's head; above it 431. At least 8192.
    #[arg(long, value_name = "BYTES", default_value_t = 32 << 10)]
    pub head_bytes: usize,
    /// Milliseconds that a check may take where the call names no deadline.
    #[arg(long, value_name = "MS", default_value_t = 2_000)]
    pub deadline_ms: u64,
    /// Milliseconds that a call may ask for with `?deadline=`.
    #[arg(long, value_name = "MS", default_value_t = 30_000)]
    pub longest_deadline_ms: u64,
    /// Milliseconds from the opening of a connection to its first byte.
    #[arg(long, value_name = "MS", default_value_t = 10_000)]
    pub first_byte_timeout_ms: u64,
    /// Milliseconds in which a request's head must arrive; also how long a connection may idle.
    #[arg(long, value_name = "MS", default_value_t = 15_000)]
    pub head_timeout_ms: u64,
    /// Milliseconds in which a body must arrive; in a batch, the longest pause between two pieces.
    #[arg(long, value_name = "MS", default_value_t = 15_000)]
    pub body_timeout_ms: u64,
    /// Milliseconds that a client may take before it reads the next piece of an answer.
    #[arg(long, value_name = "MS", default_value_t = 30_000)]
    pub write_timeout_ms: u64,
    /// Milliseconds that calls in flight have to finish once the service is told to stop.
    #[arg(long, value_name = "MS", default_value_t = 10_000)]
    pub drain_ms: u64,
    /// Connections open at once.
    #[arg(long, value_name = "N", default_value_t = 1_024)]
    pub connections: usize,
    /// Calls at once on one HTTP/2 connection.
    #[arg(long, value_name = "N", default_value_t = 64)]
    pub streams: u32,
    /// Worker threads; 0 takes one less than there are cores, and at least one.
    #[arg(long, value_name = "N", default_value_t = 0)]
    pub workers: usize,
    /// Calls that may wait for a worker; beyond it 503. Half of the places are for batches.
    #[arg(long, value_name = "N", default_value_t = 256)]
    pub queue: usize,
}

impl Default for ServiceLimits {
    fn default() -> Self {
        #[derive(clap::Parser)]
        struct Flags {
            #[command(flatten)]
            limits: ServiceLimits,
        }
        // Every flag has a default, so that an empty command line is complete.
        <Flags as clap::Parser>::parse_from(["limits"]).limits
    }
}

impl ServiceLimits {
    /// The number of worker threads after resolving 0.
    pub fn resolved_workers(&self) -> usize {
        if self.workers > 0 {
            return self.workers;
        }
        std::thread::available_parallelism().map_or(1, |n| n.get().saturating_sub(1)).max(1)
    }

    /// The default deadline of a check.
    pub fn deadline(&self) -> Duration {
        Duration::from_millis(self.deadline_ms)
    }

    /// The longest pause in, or the whole time of, a body's arrival.
    pub fn body_timeout(&self) -> Duration {
        Duration::from_millis(self.body_timeout_ms)
    }
}

/// Limits on what one description may hold; above one of them 422 `limit-exceeded`.
#[derive(Clone, Debug, Serialize, ToSchema, clap::Args)]
pub struct DescriptionLimits {
    /// Levels of nesting.
    #[arg(long, value_name = "N", default_value_t = ReadLimits::default().tree.depth)]
    pub depth: usize,
    /// Bytes in a member's name.
    #[arg(long, value_name = "BYTES", default_value_t = ReadLimits::default().tree.key_bytes)]
    pub key_bytes: usize,
    /// Bytes in a text.
    #[arg(long, value_name = "BYTES", default_value_t = ReadLimits::default().tree.string_bytes)]
    pub text_bytes: usize,
    /// Components.
    #[arg(long, value_name = "N", default_value_t = ReadLimits::default().components)]
    pub components: usize,
    /// Flows.
    #[arg(long, value_name = "N", default_value_t = ReadLimits::default().flows)]
    pub flows: usize,
    /// Species in a mixture.
    #[arg(long, value_name = "N", default_value_t = ReadLimits::default().species)]
    pub species: usize,
    /// Groups of components.
    #[arg(long, value_name = "N", default_value_t = ReadLimits::default().groups)]
    pub groups: usize,
}

impl Default for DescriptionLimits {
    fn default() -> Self {
        let ReadLimits { tree, components, flows, species, groups } = ReadLimits::default();
        DescriptionLimits {
            depth: tree.depth,
            key_bytes: tree.key_bytes,
            text_bytes: tree.string_bytes,
            components,
            flows,
            species,
            groups,
        }
    }
}

impl From<&DescriptionLimits> for ReadLimits {
    fn from(limits: &DescriptionLimits) -> Self {
        let mut read = ReadLimits {
            components: limits.components,
            flows: limits.flows,
            species: limits.species,
            groups: limits.groups,
            ..ReadLimits::default()
        };
        read.tree.depth = limits.depth;
        read.tree.key_bytes = limits.key_bytes;
        read.tree.string_bytes = limits.text_bytes;
        read
    }
}

/// The answer of `GET /v1/limits`.
#[derive(Clone, Debug, Default, Serialize, ToSchema)]
pub struct PublishedLimits {
    /// Bytes, time and concurrency.
    pub service: ServiceLimits,
    /// What one description may hold.
    pub description: DescriptionLimits,
}
