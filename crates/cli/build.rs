//! Puts the page named by `BANDLEAF_PAGE` into the binary, so that a released command presses leaves by itself.
//! Without it the command builds all the same and takes its page from a file.

use std::path::Path;
use std::{env, fs};

fn main() {
    println!("cargo:rerun-if-changed=build.rs");
    println!("cargo:rerun-if-env-changed=BANDLEAF_PAGE");
    let out = env::var_os("OUT_DIR").expect("cargo names the directory");
    let out = Path::new(&out);
    let carried = match env::var_os("BANDLEAF_PAGE") {
        None => "None",
        Some(page) => {
            println!("cargo:rerun-if-changed={}", Path::new(&page).display());
            fs::copy(&page, out.join("page.html")).expect("the page named by BANDLEAF_PAGE can be read");
            "Some(include_bytes!(concat!(env!(\"OUT_DIR\"), \"/page.html\")))"
        }
    };
    let source = format!("/// The page inside this binary.\npub const CARRIED: Option<&[u8]> = {carried};\n");
    fs::write(out.join("page.rs"), source).expect("the source can be written");
}
