//! The program itself, serving on a free port.

use std::io::{BufRead, BufReader};
use std::process::{Child, Command, Stdio};

/// A running `risefall serve`; it is stopped when dropped.
pub struct Serving {
    child: Child,
    /// The address that it printed, such as `http://127.0.0.1:40123`.
    pub address: String,
    /// All lines that it printed at the start.
    pub printed: Vec<String>,
}

impl Serving {
    pub fn start() -> Self {
        let mut child = Command::new(env!("CARGO_BIN_EXE_risefall"))
            .args(["serve", "--port", "0"])
            .stdout(Stdio::piped())
            .spawn()
            .expect("the program starts");
        let output = BufReader::new(child.stdout.take().expect("its output"));
        let printed: Vec<String> = output.lines().take(3).map(|line| line.expect("a line")).collect();
        let address = printed[0].split(' ').find(|word| word.starts_with("http://")).expect("an address").to_owned();
        Serving { child, address, printed }
    }
}

impl Drop for Serving {
    fn drop(&mut self) {
        let _ = self.child.kill();
        let _ = self.child.wait();
    }
}
