//! How many requests a second the service answers, as a ratio to a bare actix-web route in the same run.
//!
//! Both servers run in this process with two workers each and are asked in turn over connections that are kept open:
//! the bare route, one cell (`give=p`), and the whole report as JSON, each for 104 readings. Run with
//! `cargo bench --bench service`; with `-- --listen` the servers only listen, for a load generator from outside.

use std::io::{Read, Write};
use std::net::{SocketAddr, TcpListener, TcpStream};
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

use actix_web::{App, HttpServer, rt, web};
use risefall::service::{Application, Settings};

const CONNECTIONS: usize = 16;
const ROUNDS: usize = 3;
const ROUND: Duration = Duration::from_secs(2);

fn main() {
    let hello = start_hello();
    let service = start_service();
    let readings = readings();
    let targets = [
        ("bare hello", hello, "/".to_owned()),
        ("one cell", service, format!("/trend/cox-stuart?readings={readings}&give=p&reply=text&fault=text")),
        ("whole report", service, format!("/trend/cox-stuart?readings={readings}")),
    ];
    if std::env::args().any(|argument| argument == "--listen") {
        targets.iter().for_each(|(name, address, path)| println!("{name}: http://{address}{path}"));
        loop {
            std::thread::park();
        }
    }
    println!("{:<14}{:>14}{:>9}{:>12}{:>12}", "", "requests/s", "ratio", "median", "99 in 100");
    let mut best: Vec<Load> = targets.iter().map(|_| Load::default()).collect();
    for _ in 0..ROUNDS {
        for ((_, address, path), best) in targets.iter().zip(&mut best) {
            let load = Load::measure(*address, path);
            if load.rate > best.rate {
                *best = load;
            }
        }
    }
    let bare = best[0].rate;
    for ((name, ..), load) in targets.iter().zip(&best) {
        let ratio = load.rate / bare;
        println!("{name:<14}{:>14.0}{ratio:>9.2}{:>9.0} us{:>9.0} us", load.rate, micros(load.median), micros(load.late));
    }
}

fn micros(time: Duration) -> f64 {
    time.as_secs_f64() * 1e6
}

/// Two years of weekly readings with two decimals, made by arithmetic alone.
fn readings() -> String {
    let reading = |week: u32| format!("{:.2}", 12.0 + 0.01 * f64::from(week) + f64::from(week * 7919 % 101) / 25.0);
    (0..104).map(reading).collect::<Vec<_>>().join(";")
}

fn start_hello() -> SocketAddr {
    let listener = TcpListener::bind("127.0.0.1:0").unwrap();
    let address = listener.local_addr().unwrap();
    std::thread::spawn(move || {
        let application = || App::new().route("/", web::get().to(|| async { "hello" }));
        rt::System::new().block_on(HttpServer::new(application).workers(2).listen(listener).unwrap().run()).unwrap();
    });
    address
}

fn start_service() -> SocketAddr {
    let application = Application::build(Settings { port: 0, ..Settings::default() }).unwrap();
    let address = SocketAddr::from(([127, 0, 0, 1], application.port()));
    std::thread::spawn(move || application.run().unwrap());
    address
}

/// What a round of asking came to.
#[derive(Default)]
struct Load {
    rate: f64,
    median: Duration,
    late: Duration,
}

impl Load {
    /// Asks from a few threads, each with connections of its own that are asked in turn and answered in turn.
    fn measure(address: SocketAddr, path: &str) -> Load {
        let request = format!("GET {path} HTTP/1.1\r\nHost: {address}\r\n\r\n");
        let done = AtomicBool::new(false);
        let start = Instant::now();
        let mut times: Vec<Duration> = std::thread::scope(|scope| {
            let askers: Vec<_> = (0..2).map(|_| scope.spawn(|| ask(address, &request, &done))).collect();
            std::thread::sleep(ROUND);
            done.store(true, Ordering::Relaxed);
            askers.into_iter().flat_map(|asker| asker.join().unwrap()).collect()
        });
        let rate = times.len() as f64 / start.elapsed().as_secs_f64();
        times.sort_unstable();
        Load { rate, median: times[times.len() / 2], late: times[times.len() * 99 / 100] }
    }
}

/// Keeps a request under way on each of this thread's connections.
fn ask(address: SocketAddr, request: &str, done: &AtomicBool) -> Vec<Duration> {
    let mut connections: Vec<(TcpStream, Instant)> = (0..CONNECTIONS / 2)
        .map(|_| {
            let mut stream = TcpStream::connect(address).unwrap();
            stream.set_nodelay(true).unwrap();
            stream.write_all(request.as_bytes()).unwrap();
            (stream, Instant::now())
        })
        .collect();
    let mut buffer = vec![0; 64 << 10];
    let mut times = Vec::new();
    while !done.load(Ordering::Relaxed) {
        for (stream, sent) in &mut connections {
            read_answer(stream, &mut buffer);
            times.push(sent.elapsed());
            *sent = Instant::now();
            stream.write_all(request.as_bytes()).unwrap();
        }
    }
    times
}

/// Reads one answer to its end, and insists that it is a good one.
fn read_answer(stream: &mut TcpStream, buffer: &mut [u8]) {
    let mut have = 0;
    loop {
        have += match stream.read(&mut buffer[have..]).unwrap() {
            0 => panic!("the connection was closed"),
            read => read,
        };
        let Some(end) = buffer[..have].windows(4).position(|window| window == b"\r\n\r\n") else { continue };
        let head = std::str::from_utf8(&buffer[..end]).unwrap();
        assert!(head.starts_with("HTTP/1.1 200"), "{head}");
        let length =
            head.lines().find_map(|line| line.to_ascii_lowercase().strip_prefix("content-length: ")?.parse::<usize>().ok());
        if have >= end + 4 + length.expect("a length") {
            return;
        }
    }
}
