//! Serves the page on localhost, with the three small files that let a browser keep it; nothing else.

use crate::build;
use crate::shell::{self, Outcome, say};
use std::io::{BufRead, BufReader, IsTerminal, Write};
use std::net::{Ipv4Addr, TcpListener, TcpStream};
use std::path::Path;
use std::time::Duration;

/// First port tried; the next free one is taken.
const PORT: u16 = 8720;

/// Builds, then serves until interrupted.
pub fn serve(words: &[&str]) -> Outcome {
    let (mut port, mut open, mut rest) = (None, true, words);
    while let Some((&word, after)) = rest.split_first() {
        rest = after;
        match word {
            "--no-open" => open = false,
            "--port" => {
                let (&number, after) = rest.split_first().ok_or("--port wants a number")?;
                port = Some(
                    number
                        .parse()
                        .map_err(|_| format!("--port wants a number below 65536, not {number}"))?,
                );
                rest = after;
            }
            _ => return Err(format!("serve knows --port N and --no-open, not {word}")),
        }
    }
    let page = build::dist()?;
    let listener = bind(port)?;
    let address = listener.local_addr().map_err(|error| error.to_string())?;
    let url = format!("http://localhost:{}/", address.port());
    say(format!(
        "Widthwise is at {url} (and needs no server: open {} as well). Ctrl-C ends.",
        page.display()
    ));
    let has_screen = ["DISPLAY", "WAYLAND_DISPLAY"]
        .iter()
        .any(|name| std::env::var_os(name).is_some());
    if open && has_screen && std::io::stdout().is_terminal() && shell::on_path("xdg-open").is_some()
    {
        // A browser that does not open is no reason not to serve.
        let _ = shell::program("xdg-open").arg(&url).spawn();
    }
    for stream in listener.incoming().flatten() {
        let folder = page.with_file_name("served");
        std::thread::spawn(move || {
            // The other side may hang up whenever it likes.
            let _ = answer(stream, &folder);
        });
    }
    Ok(())
}

fn bind(wanted: Option<u16>) -> Outcome<TcpListener> {
    let tried: Vec<u16> = wanted.map_or_else(|| (PORT..PORT + 20).collect(), |port| vec![port]);
    let free = tried
        .iter()
        .find_map(|&port| TcpListener::bind((Ipv4Addr::LOCALHOST, port)).ok());
    free.ok_or_else(|| format!("no free port among {tried:?}: name one with --port N"))
}

fn answer(mut stream: TcpStream, folder: &Path) -> std::io::Result<()> {
    stream.set_read_timeout(Some(Duration::from_secs(10)))?;
    let mut reader = BufReader::new(stream.try_clone()?);
    let mut line = String::new();
    reader.read_line(&mut line)?;
    let mut header = String::new();
    while reader.read_line(&mut header)? > 2 {
        header.clear();
    }
    let mut words = line.split_whitespace();
    let (method, path) = (
        words.next().unwrap_or_default(),
        words.next().unwrap_or_default(),
    );
    let file = match path.split(['?', '#']).next() {
        Some("/") => Some(("index.html", "text/html")),
        Some("/sw.js") => Some(("sw.js", "text/javascript")),
        Some("/manifest.webmanifest") => {
            Some(("manifest.webmanifest", "application/manifest+json"))
        }
        Some("/icon.svg") => Some(("icon.svg", "image/svg+xml")),
        _ => None,
    };
    let (status, body) = match (method, file) {
        ("GET" | "HEAD", Some((name, _))) => ("200 OK", std::fs::read(folder.join(name))?),
        ("GET" | "HEAD", None) => (
            "404 Not Found",
            b"Only the page itself is here: /\n".to_vec(),
        ),
        _ => ("405 Method Not Allowed", Vec::new()),
    };
    let kind = file.map_or("text/plain", |(_, kind)| kind);
    write!(
        stream,
        "HTTP/1.1 {status}\r\nContent-Type: {kind}; charset=utf-8\r\nContent-Length: {}\r\nCache-Control: no-cache\r\nX-Content-Type-Options: nosniff\r\nConnection: close\r\n\r\n",
        body.len()
    )?;
    if method == "GET" {
        stream.write_all(&body)?;
    }
    stream.flush()
}
