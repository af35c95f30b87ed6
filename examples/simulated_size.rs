//! Prints, as a Markdown table, how often each test claims a trend in series that have none.
//!
//! `cargo run --release --example simulated_size -- [SERIES] [TEST]...`; the table is kept in `src/method/size.md`.

#[allow(dead_code)]
#[path = "../tests/law/inputs.rs"]
mod inputs;
#[allow(dead_code)]
#[path = "../tests/law/random.rs"]
mod random;
#[allow(dead_code)]
#[path = "../tests/law/simulation.rs"]
mod simulation;

use inputs::Ties;
use risefall::method::METHODS;

const RISK: f64 = 0.05;
const SIZES: [usize; 3] = [8, 20, 60];

fn main() {
    let mut arguments = std::env::args().skip(1).peekable();
    let series: u32 = arguments.next_if(|argument| argument.parse::<u32>().is_ok()).and_then(|n| n.parse().ok()).unwrap_or(4_000);
    let wanted: Vec<String> = arguments.collect();
    let error = 100.0 * (RISK * (1.0 - RISK) / f64::from(series)).sqrt();
    println!(
        "False claims in per cent at a risk of {} %: of a change in either direction; of a rise, where only a rise is sought.",
        100.0 * RISK
    );
    println!(
        "{series} series without a trend each, so the standard error at 5 % is {error:.2} points. `~`: p is an approximation.\n"
    );
    let headings: Vec<String> = SIZES.iter().flat_map(|n| [format!("n = {n}"), format!("n = {n}, ties")]).collect();
    println!("| Test | {} |", headings.join(" | "));
    println!("| --- |{}", " --- |".repeat(headings.len()));
    for method in METHODS.iter().filter(|method| wanted.is_empty() || wanted.iter().any(|key| key == method.card.key)) {
        let mut row = format!("| `{}` |", method.card.key);
        for n in SIZES {
            for ties in [Ties::None, Ties::Heavy] {
                let size = simulation::simulate(method, n, ties, series, RISK);
                let mark = if size.exact + size.declined == series { "" } else { "~" };
                let rising = size.rising.map_or(String::new(), |rising| format!("; {:.1}", size.percent(rising)));
                row.push_str(&format!(" {:.1}{rising}{mark} |", size.percent(size.either)));
            }
        }
        println!("{row}");
    }
}
