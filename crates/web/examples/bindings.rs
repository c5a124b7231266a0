//! Writes the TypeScript types of everything that crosses to the page into the folder given.

use ts_rs::{Config, TS};
use widthwise_core::error::Refusal;
use widthwise_sheet::doc::Sheet;
use widthwise_sheet::requests::{Body, Request};

fn main() -> Result<(), Box<dyn std::error::Error>> {
    let folder = std::env::args().nth(1).ok_or("usage: bindings FOLDER")?;
    let config = Config::new().with_out_dir(folder).with_large_int("number");
    Request::export_all(&config)?;
    Body::export_all(&config)?;
    Sheet::export_all(&config)?;
    Refusal::export_all(&config)?;
    Ok(())
}
