//! The real server on port 0, and a client of a few lines that shows what really goes over the wire.

use std::io::{BufRead, BufReader, Write};
use std::net::{SocketAddr, TcpStream};
use std::time::Duration;

use risefall::service::{Application, Settings};
use serde_json::Value;

/// A service of its own for one test; it ends with the test program.
pub struct TestService {
    pub address: SocketAddr,
}

impl TestService {
    pub fn start() -> Self {
        TestService::start_with(|_| {})
    }

    /// Starts a service whose settings differ from the usual ones.
    pub fn start_with(change: impl FnOnce(&mut Settings)) -> Self {
        let mut settings = Settings { port: 0, ..Settings::default() };
        change(&mut settings);
        let application = Application::build(settings).expect("a free port");
        let address = SocketAddr::from(([127, 0, 0, 1], application.port()));
        std::thread::spawn(move || application.run().expect("the service runs"));
        TestService { address }
    }

    pub fn get(&self, path: &str) -> Answer {
        self.ask("GET", path, "", b"")
    }

    pub fn post(&self, path: &str, media_type: &str, body: impl AsRef<[u8]>) -> Answer {
        let headers = format!("Content-Type: {media_type}\r\nContent-Length: {}\r\n", body.as_ref().len());
        self.ask("POST", path, &headers, body.as_ref())
    }

    /// One request with further headers, each ended by a line end.
    pub fn ask(&self, verb: &str, path: &str, headers: &str, body: &[u8]) -> Answer {
        let head = format!("{verb} {path} HTTP/1.1\r\nHost: {}\r\n{headers}\r\n", self.address);
        self.send(&[head.as_bytes(), body].concat(), verb == "HEAD")
    }

    /// Sends bytes as they are and reads one answer.
    pub fn send(&self, request: &[u8], without_body: bool) -> Answer {
        let mut stream = self.connect();
        // The server may answer and close before all was sent; what it said counts.
        let _ = stream.write_all(request);
        Answer::read(&mut BufReader::new(stream), without_body)
    }

    pub fn connect(&self) -> TcpStream {
        let stream = TcpStream::connect(self.address).expect("a connection");
        stream.set_read_timeout(Some(Duration::from_secs(20))).expect("a time limit");
        stream
    }
}

/// An HTTP answer taken apart.
#[derive(Debug)]
pub struct Answer {
    pub status: u16,
    pub headers: Vec<(String, String)>,
    pub body: Vec<u8>,
}

impl Answer {
    pub fn read(stream: &mut impl BufRead, without_body: bool) -> Answer {
        let mut line = || {
            let mut line = String::new();
            stream.read_line(&mut line).expect("a line of the head");
            line.trim_end().to_owned()
        };
        let status = line().split(' ').nth(1).and_then(|status| status.parse().ok()).expect("a status");
        let mut headers = Vec::new();
        loop {
            let header = line();
            let Some((name, value)) = header.split_once(':') else { break };
            headers.push((name.to_ascii_lowercase(), value.trim().to_owned()));
        }
        let mut answer = Answer { status, headers, body: Vec::new() };
        if !without_body {
            answer.body = answer.read_body(stream);
        }
        answer
    }

    fn read_body(&self, stream: &mut impl BufRead) -> Vec<u8> {
        let mut body = Vec::new();
        if let Some(length) = self.header("content-length") {
            body.resize(length.parse().expect("a length"), 0);
            stream.read_exact(&mut body).expect("the whole body");
        } else if self.header("transfer-encoding") == Some("chunked") {
            loop {
                let mut size = String::new();
                stream.read_line(&mut size).expect("the size of a chunk");
                let size = usize::from_str_radix(size.trim(), 16).expect("a size");
                let mut chunk = vec![0; size + 2];
                stream.read_exact(&mut chunk).expect("a chunk");
                body.extend_from_slice(&chunk[..size]);
                if size == 0 {
                    break;
                }
            }
        }
        body
    }

    pub fn header(&self, name: &str) -> Option<&str> {
        self.headers.iter().find(|(key, _)| key == name).map(|(_, value)| value.as_str())
    }

    pub fn text(&self) -> &str {
        std::str::from_utf8(&self.body).expect("text")
    }

    pub fn json(&self) -> Value {
        serde_json::from_slice(&self.body).unwrap_or_else(|error| panic!("not JSON ({error}): {}", self.text()))
    }

    /// Status, type and whole body, one below the other, for comparing with what is expected.
    pub fn shown(&self) -> String {
        format!("{} {}\n{}", self.status, self.header("content-type").unwrap_or("-"), self.text())
    }

    #[track_caller]
    pub fn good(self) -> Self {
        assert_eq!(self.status, 200, "{}", self.text());
        self
    }

    /// Checks status and code of problem details, and that the body agrees with the head.
    #[track_caller]
    pub fn problem(self, status: u16, code: &str) -> Value {
        let details = self.json();
        assert_eq!((self.status, details["code"].as_str()), (status, Some(code)), "{details}");
        assert_eq!(self.header("content-type"), Some("application/problem+json"));
        assert_eq!(details["status"], status);
        assert_eq!(details["type"], format!("/problems/{code}"));
        details
    }
}

/// The value of a fact by its key.
pub fn fact(report: &Value, key: &str) -> Value {
    let facts = report["facts"].as_array().expect("facts");
    facts.iter().find(|fact| fact["key"] == key).unwrap_or_else(|| panic!("no fact {key}"))["value"].clone()
}
