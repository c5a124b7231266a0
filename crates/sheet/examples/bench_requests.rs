//! Times requests natively, the very ones that the page's worker is timed with.
//! Usage: bench_requests REQUESTS.json (a list of `{ name, request }`); prints "name TAB milliseconds".

use std::time::{Duration, Instant};
use widthwise_sheet::requests::{Request, answer};

/// One request with the name it has in the table.
#[derive(serde::Deserialize)]
struct Named {
    name: String,
    request: Request,
}

fn main() -> Result<(), Box<dyn std::error::Error>> {
    let path = std::env::args()
        .nth(1)
        .ok_or("usage: bench_requests REQUESTS.json")?;
    let requests: Vec<Named> = serde_json::from_str(&std::fs::read_to_string(path)?)?;
    for Named { name, request } in requests {
        let mut times = Vec::new();
        let begin = Instant::now();
        // As in the page's timing: at least 7, then for 3 s at most 200.
        while times.len() < 7 || (begin.elapsed() < Duration::from_secs(3) && times.len() < 200) {
            let start = Instant::now();
            std::hint::black_box(answer(&request, &mut |_, _| {})?);
            times.push(start.elapsed().as_secs_f64() * 1e3);
        }
        times.sort_by(f64::total_cmp);
        let median = times.get(times.len() / 2).copied().unwrap_or(f64::NAN);
        println!("{name}\t{median}");
    }
    Ok(())
}
