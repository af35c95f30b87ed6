//! Settings in, a running service out; the only place that wires things together.

use std::net::{IpAddr, Ipv4Addr, SocketAddr, TcpListener};
use std::sync::OnceLock;

use actix_web::middleware::from_fn;
use actix_web::web::Data;
use actix_web::{App, HttpServer, rt};

use super::admission::Admission;
use super::annotation::Annotation;
use super::document::Document;
use super::limit::Limits;
use super::{door, route};
use crate::problem::{Problem, ProblemKind};

/// The port where the service listens if no other is asked for.
pub const PORT: u16 = 7373;

/// How the service is to run.
#[derive(Clone)]
pub struct Settings {
    /// The address to listen on; this machine only, unless said otherwise.
    pub host: IpAddr,
    /// The port to listen on; 0 takes any free one.
    pub port: u16,
    /// Threads that answer. Two suffice: long work runs on threads of its own.
    pub workers: usize,
    /// What the service keeps to.
    pub limits: Limits,
    /// Who annotates workbooks; without one there is no `/annotate`.
    pub annotation: Option<Annotation>,
}

impl Default for Settings {
    fn default() -> Self {
        Settings { host: IpAddr::V4(Ipv4Addr::LOCALHOST), port: PORT, workers: 2, limits: Limits::default(), annotation: None }
    }
}

/// What all requests share.
pub(super) struct State {
    /// The address that the service listens on.
    pub host: IpAddr,
    pub limits: Limits,
    /// Places for computing.
    pub computing: Admission,
    /// Places for receiving workbooks.
    pub uploads: Admission,
    pub annotation: Option<Annotation>,
    /// Documents that are written when they are first asked for.
    pub documents: Documents,
}

#[derive(Default)]
pub(super) struct Documents {
    pub openapi: OnceLock<Document>,
    pub methods: OnceLock<[Document; 2]>,
}

/// A service that listens already and answers once it runs.
pub struct Application {
    listener: TcpListener,
    address: SocketAddr,
    settings: Settings,
}

impl Application {
    /// Takes the address, so that a second service on the same port is noticed at once.
    ///
    /// # Errors
    /// The address is taken or not this machine's.
    pub fn build(settings: Settings) -> Result<Self, Problem> {
        let wanted = SocketAddr::new(settings.host, settings.port);
        let listener = TcpListener::bind(wanted).map_err(|error| not_bound(wanted, &error))?;
        let address = listener.local_addr().map_err(|error| not_bound(wanted, &error))?;
        Ok(Application { listener, address, settings })
    }

    /// The port that was taken.
    pub fn port(&self) -> u16 {
        self.address.port()
    }

    /// Answers requests until the process is told to stop; those under way are finished first.
    ///
    /// # Errors
    /// The machine does not give the threads or the events that are needed.
    pub fn run(self) -> Result<(), Problem> {
        let Settings { host, workers, limits, annotation, .. } = self.settings;
        let kept = limits.clone();
        let state = Data::new(State {
            host,
            computing: Admission::new(limits.computing, limits.waiting, limits.patience),
            uploads: Admission::new(2 * limits.computing, limits.waiting, limits.patience),
            limits,
            annotation,
            documents: Documents::default(),
        });
        let application = move || {
            App::new().app_data(state.clone()).wrap(from_fn(door::guard)).configure(|routes| route::configure(routes, &state))
        };
        rt::System::new()
            .block_on(async move {
                HttpServer::new(application)
                    .workers(workers)
                    .worker_max_blocking_threads(2 * kept.computing + 2)
                    .max_connections(kept.connections)
                    .keep_alive(kept.keep_alive)
                    .client_request_timeout(kept.head_time)
                    .shutdown_timeout(kept.shutdown.as_secs())
                    .listen(self.listener)?
                    .run()
                    .await
            })
            .map_err(|error| {
                Problem::new(ProblemKind::Broken, "service", format!("the service on {} cannot run: {error}", self.address))
            })
    }
}

fn not_bound(address: SocketAddr, error: &std::io::Error) -> Problem {
    Problem::new(ProblemKind::Busy, "port", format!("{address} cannot be listened on: {error}"))
        .help("Stop the program that holds the port, or choose another port; port 0 takes any free one.")
        .at("port")
        .value(address.port().to_string())
}
