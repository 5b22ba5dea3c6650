//! The command line: `sigmadot serve | check | demo | health | openapi | rules`.

use std::ffi::OsString;
use std::fs::File;
use std::io::{self, Read, Write};
use std::net::{Ipv4Addr, SocketAddr};
use std::num::NonZero;
use std::process::ExitCode;
use std::sync::Arc;
use std::thread;
use std::time::Duration;

use axum::body::Body;
use axum::http::Request;
use clap::{Parser, Subcommand, ValueEnum};
use tokio::runtime::Runtime;

use sigmadot::api::engine::Core;
use sigmadot::api::limits::PublishedLimits;
use sigmadot::api::log::Log;
use sigmadot::api::serve::{Settings, bind};
use sigmadot::api::{catalogue, check, client, examples, limits, openapi, route};
use sigmadot::pipeline::{Cancel, Failure, check_bytes};
use sigmadot::process::ReadLimits;
use sigmadot::quantity::UnitSystem;
use sigmadot::report::Report;

#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

/// Where the service listens unless told otherwise.
const ADDRESS: SocketAddr = SocketAddr::new(std::net::IpAddr::V4(Ipv4Addr::LOCALHOST), 8298);
/// One thread of the network keeps about this many cores of workers busy.
const CORES_A_NETWORK_THREAD: usize = 8;
/// How long the demonstration waits for its answer.
const DEMO_TIME: Duration = Duration::from_secs(30);
/// How long a health check waits for its answer.
const HEALTH_TIME: Duration = Duration::from_secs(3);

/// Checks processes against the second law of thermodynamics.
#[derive(Parser)]
#[command(version, arg_required_else_help = true)]
struct Flags {
    #[command(subcommand)]
    command: Command,
}

#[derive(Subcommand)]
enum Command {
    /// Serve over HTTP until SIGTERM or SIGINT.
    Serve(Box<Serve>),
    /// Check descriptions in files and print their reports.
    ///
    /// Exit code 0: every law test that applies was made and holds, and the data agree. 1: a
    /// violation. 2: a description cannot be checked. 3: anything else. Of several files the code
    /// that comes first in the order 1, 2, 3, 0 stands.
    Check(Check),
    /// Start the service on a free port, post an example to it, print the report, and stop.
    Demo(Demo),
    /// Ask a running service whether it takes work; exit code 0 if so.
    Health {
        /// The address of the service.
        #[arg(long, default_value_t = ADDRESS)]
        address: SocketAddr,
    },
    /// Print the OpenAPI document.
    Openapi,
    /// Print the rules that processes are tested against.
    Rules {
        /// How to print them.
        #[arg(long, value_enum, default_value_t = Listing::Text)]
        format: Listing,
    },
}

#[derive(clap::Args)]
struct Serve {
    /// The address to listen on.
    #[arg(long, default_value_t = ADDRESS)]
    address: SocketAddr,
    /// Allow an address that other machines can reach. The service has no authentication or
    /// encryption of its own: put it behind something that has.
    #[arg(long)]
    allow_remote: bool,
    #[command(flatten, next_help_heading = "Limits of the service")]
    service: limits::ServiceLimits,
    #[command(flatten, next_help_heading = "Limits of a description")]
    description: limits::DescriptionLimits,
}

#[derive(clap::Args)]
struct Check {
    /// Descriptions; `-` reads standard input.
    #[arg(required = true)]
    files: Vec<OsString>,
    /// What to print.
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// The units of the report.
    #[arg(long, default_value = UnitSystem::Metric.text(), value_parser = unit_system)]
    units: UnitSystem,
}

#[derive(clap::Args)]
struct Demo {
    /// The name of an example; `GET /v1/examples` lists them. The first of the list where none is named.
    example: Option<String>,
}

#[derive(Clone, Copy, ValueEnum)]
enum Format {
    Json,
    Text,
    Html,
    Csv,
}

#[derive(Clone, Copy, ValueEnum)]
enum Listing {
    Text,
    Json,
}

impl Format {
    fn media(self) -> &'static str {
        match self {
            Format::Json => route::JSON,
            Format::Text => route::TEXT,
            Format::Html => route::HTML,
            Format::Csv => route::CSV,
        }
    }
}

fn unit_system(text: &str) -> Result<UnitSystem, String> {
    UnitSystem::read(text).ok_or_else(|| {
        let known: Vec<&str> = UnitSystem::ALL.iter().map(|system| system.text()).collect();
        format!("one of {}", known.join(", "))
    })
}

fn main() -> ExitCode {
    let flags = match Flags::try_parse() {
        Ok(flags) => flags,
        Err(message) => {
            // Help and version come this way too. Code 2 belongs to descriptions.
            let code = if message.use_stderr() { 3 } else { 0 };
            let _ = message.print();
            return ExitCode::from(code);
        }
    };
    let outcome = match flags.command {
        Command::Serve(flags) => serve(*flags),
        Command::Check(flags) => run_check(&flags),
        Command::Demo(flags) => demo(&flags),
        Command::Health { address } => health(address),
        Command::Openapi => print(&openapi::document_text()),
        Command::Rules { format } => rules(format),
    };
    match outcome {
        Ok(code) => code,
        // Whoever reads the output has seen enough.
        Err(error) if error.kind() == io::ErrorKind::BrokenPipe => ExitCode::SUCCESS,
        Err(error) => {
            // Standard error may be closed as well; then there is nobody to tell.
            let _ = writeln!(io::stderr(), "sigmadot: {error}");
            ExitCode::from(3)
        }
    }
}

fn print(text: &str) -> io::Result<ExitCode> {
    print_bytes(text.as_bytes())
}

fn print_bytes(bytes: &[u8]) -> io::Result<ExitCode> {
    let mut out = io::stdout().lock();
    out.write_all(bytes)?;
    out.flush()?;
    Ok(ExitCode::SUCCESS)
}

fn serve(flags: Serve) -> io::Result<ExitCode> {
    let settings = Settings {
        address: flags.address,
        allow_remote: flags.allow_remote,
        limits: PublishedLimits { service: flags.service, description: flags.description },
        log: Log::to(io::stdout())?,
    };
    let log = settings.log.clone();
    let runtime = network()?;
    runtime.block_on(async {
        let bound = bind(settings, Arc::new(Core)).await?;
        bound.serve(stop_signal()?).await;
        io::Result::Ok(())
    })?;
    // Connections that outlived the drain time end here.
    runtime.shutdown_background();
    log.close();
    Ok(ExitCode::SUCCESS)
}

/// The threads that talk to the network. What they do for a call is a small part of what the workers
/// do for it, and a thread more is one more to wake for it.
fn network() -> io::Result<Runtime> {
    let cores = thread::available_parallelism().map_or(1, NonZero::get);
    tokio::runtime::Builder::new_multi_thread()
        .worker_threads(cores.div_ceil(CORES_A_NETWORK_THREAD))
        .enable_all()
        .build()
}

/// Ready at the first SIGTERM or SIGINT.
fn stop_signal() -> io::Result<impl Future<Output = ()>> {
    #[cfg(unix)]
    {
        use tokio::signal::unix::{SignalKind, signal};
        let (mut terminate, mut interrupt) =
            (signal(SignalKind::terminate())?, signal(SignalKind::interrupt())?);
        Ok(async move {
            tokio::select! {
                _ = terminate.recv() => {}
                _ = interrupt.recv() => {}
            }
        })
    }
    #[cfg(not(unix))]
    {
        Ok(async {
            if tokio::signal::ctrl_c().await.is_err() {
                // Without a signal handler the service runs until it is killed.
                std::future::pending::<()>().await;
            }
        })
    }
}

fn read(file: &OsString) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    if file == "-" {
        io::stdin().lock().read_to_end(&mut bytes)?;
    } else {
        File::open(file)?.read_to_end(&mut bytes)?;
    }
    Ok(bytes)
}

/// A description on one's own disk may be as large as it likes; only its depth stays limited, since
/// reading it is recursive.
fn local_limits() -> ReadLimits {
    let mut limits = ReadLimits {
        components: usize::MAX,
        flows: usize::MAX,
        species: usize::MAX,
        groups: usize::MAX,
        ..ReadLimits::default()
    };
    limits.tree.key_bytes = usize::MAX;
    limits.tree.string_bytes = usize::MAX;
    limits.tree.free_key_chars = usize::MAX;
    limits
}

/// The exit code of one report.
fn exit_code(report: &Report) -> u8 {
    match report.verdict {
        "violated" => 1,
        "holds" if report.complete && report.data_verdict != "contradictory" => 0,
        _ => 3,
    }
}

fn run_check(flags: &Check) -> io::Result<ExitCode> {
    let limits = local_limits();
    let mut codes = Vec::new();
    for file in &flags.files {
        let name = file.to_string_lossy();
        let bytes = match read(file) {
            Ok(bytes) => bytes,
            Err(error) => {
                writeln!(io::stderr(), "{name}: {error}")?;
                codes.push(2);
                continue;
            }
        };
        match check_bytes(&bytes, &limits, flags.units, &Cancel::new()) {
            Ok(report) => {
                let mut text = check::render(&report, flags.format.media());
                if text.last() != Some(&b'\n') {
                    text.push(b'\n');
                }
                print_bytes(&text)?;
                codes.push(exit_code(&report));
            }
            Err(Failure::Rejected(faults)) => {
                for fault in faults {
                    writeln!(io::stderr(), "{name}: {fault}")?;
                }
                codes.push(2);
            }
            Err(Failure::Cancelled) => codes.push(3),
        }
    }
    let code = [1, 2, 3].into_iter().find(|code| codes.contains(code)).unwrap_or(0);
    Ok(ExitCode::from(code))
}

fn demo(flags: &Demo) -> io::Result<ExitCode> {
    let wanted = flags.example.as_deref();
    let found = wanted.map_or(examples::EXAMPLES.first(), examples::find);
    let example = found.ok_or_else(|| {
        let names: Vec<&str> = examples::EXAMPLES.iter().map(|e| e.name).collect();
        let message = format!("there is no such example; there are {}", names.join(", "));
        io::Error::new(io::ErrorKind::NotFound, message)
    })?;
    let runtime = Runtime::new()?;
    let (status, report) = runtime.block_on(async {
        let settings = Settings {
            address: SocketAddr::from((Ipv4Addr::LOCALHOST, 0)),
            allow_remote: false,
            limits: PublishedLimits::default(),
            log: Log::silent(),
        };
        let bound = bind(settings, Arc::new(Core)).await?;
        let address = bound.address;
        let (stop, stopped) = tokio::sync::oneshot::channel::<()>();
        let serving = tokio::spawn(bound.serve(async {
            // A sender that is gone also means stop.
            let _ = stopped.await;
        }));
        let request = Request::post("/v1/checks?deadline=30")
            .header("host", address.to_string())
            .header("content-type", route::JSON)
            .header("accept", route::TEXT)
            .body(Body::from(example.text))
            .map_err(io::Error::other)?;
        let answer = client::call(address, request, DEMO_TIME).await;
        drop(stop);
        serving.await.map_err(io::Error::other)?;
        answer
    })?;
    let mut text = String::from_utf8_lossy(&report).into_owned();
    if !text.ends_with('\n') {
        text.push('\n');
    }
    text += &format!(
        "\nTo repeat it, start `sigmadot serve` and run\n\n  \
         curl -s http://{ADDRESS}/v1/examples/{name} |\n    \
         curl -s -H 'content-type: {json}' -H 'accept: {text}' --data-binary @- http://{ADDRESS}/v1/checks\n",
        name = example.name,
        json = route::JSON,
        text = route::TEXT,
    );
    print(&text)?;
    Ok(if status.is_success() { ExitCode::SUCCESS } else { ExitCode::from(3) })
}

fn health(address: SocketAddr) -> io::Result<ExitCode> {
    let runtime = tokio::runtime::Builder::new_current_thread().enable_all().build()?;
    let (status, body) = runtime.block_on(async {
        let request = Request::get("/readyz")
            .header("host", address.to_string())
            .body(Body::empty())
            .map_err(io::Error::other)?;
        client::call(address, request, HEALTH_TIME).await
    })?;
    print_bytes(&body)?;
    print("\n")?;
    Ok(if status.is_success() { ExitCode::SUCCESS } else { ExitCode::FAILURE })
}

/// The catalogue of rules; as text, one paragraph a rule.
fn rules(format: Listing) -> io::Result<ExitCode> {
    let catalogue = catalogue::rules();
    if let Listing::Json = format {
        return print(&format!("{:#}\n", serde_json::json!(catalogue)));
    }
    let mut text = String::new();
    for rule in &catalogue.rules {
        text += &format!(
            "{} [{}, {}]\n    {}. {}\n    Applies to: {}\n    Usual cause: {}\n    Source: {}\n\n",
            rule.name,
            rule.authority,
            rule.severity,
            rule.title,
            rule.inequality,
            rule.applies_to,
            rule.typical_cause,
            rule.source,
        );
    }
    print(&text)
}
