//! A report in a browser: no message on the console, and cursors that read what the record says.
//!
//! Runs where a headless Chromium is installed, and says so where none is. The page gets a script of
//! the test's own behind it, which presses keys and writes what the page then shows into an element;
//! the browser prints the page.

#![allow(
    clippy::unwrap_used,
    clippy::print_stderr,
    reason = "a test that cannot go on panics, one that is left out says so"
)]

use std::fs;
use std::process::{Command, Stdio};

const STAGE: &str = r#"title "A bank into a resistor & <more>"
let load = 50 ohm
capacitor bank  from top to ground = 32 uF, charged to 5 kV
switch    fire  from top to pad    : open, closes at 1 ms
resistor  chest from pad to ground = load
span 10 ms
channels voltage across chest, current through chest
cases load = 50 ohm, 100 ohm
reading late = voltage across chest at 6 ms
claim dose: energy into chest is at least 390 J
claim top:  largest current through chest is at most 120 A
"#;

/// Presses keys and reports: the crest under cursor A, the difference to B at the end, and the zoom.
const PROBE: &str = r#"<script>
"use strict";
const screen_ = document.querySelector("figure.plot .screen");
const press = (key) => screen_.dispatchEvent(new KeyboardEvent("keydown", { key, bubbles: true }));
const out = [];
const rows = () => [...document.querySelectorAll("figure.plot .reads tbody tr")].map((r) => r.textContent).join("; ");
press("c"); out.push(rows());
press("b"); press("End"); out.push(rows());
press("+"); out.push(screen_.querySelector("svg").classList.contains("zoomed") ? "zoomed" : "whole");
press("0"); out.push(screen_.querySelector("svg").classList.contains("zoomed") ? "zoomed" : "whole");
out.push(screen_.getAttribute("role") + " " + screen_.getAttribute("aria-valuetext"));
const result = document.createElement("pre");
result.id = "probed"; result.textContent = out.join("\n");
document.body.appendChild(result);
</script>
</body>"#;

fn browser() -> Option<&'static str> {
    ["chromium", "chromium-browser", "google-chrome"]
        .into_iter()
        .find(|name| {
            let asked = Command::new(name)
                .arg("--version")
                .stdout(Stdio::null())
                .stderr(Stdio::null())
                .status();
            asked.is_ok_and(|status| status.success())
        })
}

#[test]
fn the_page_reads_off_what_the_record_says() {
    let Some(browser) = browser() else {
        eprintln!("skipped: no Chromium is installed");
        return;
    };
    let folder = tempfile::tempdir().unwrap();
    let (shot, page) = (folder.path().join("a.shot"), folder.path().join("a.html"));
    fs::write(&shot, STAGE).unwrap();
    let written = Command::new(env!("CARGO_BIN_EXE_pulsewright"))
        .args([
            "report".as_ref(),
            shot.as_os_str(),
            "-o".as_ref(),
            page.as_os_str(),
        ])
        .output()
        .unwrap();
    assert_eq!(written.status.code(), Some(0), "{written:?}");
    let text = fs::read_to_string(&page).unwrap().replace("</body>", PROBE);
    fs::write(&page, text).unwrap();
    let shown = Command::new(browser)
        .args([
            "--headless=new",
            "--no-sandbox",
            "--disable-gpu",
            "--enable-logging=stderr",
            "--log-level=0",
        ])
        .arg(format!(
            "--user-data-dir={}",
            folder.path().join("profile").display()
        ))
        .arg("--dump-dom")
        .arg(format!("file://{}", page.display()))
        .output()
        .unwrap();
    let messages = String::from_utf8_lossy(&shown.stderr);
    let spoken: Vec<&str> = messages.lines().filter(|l| l.contains("CONSOLE")).collect();
    assert!(spoken.is_empty(), "{spoken:?}");
    let dom = String::from_utf8_lossy(&shown.stdout);
    let (_, rest) = dom.split_once("id=\"probed\">").unwrap();
    let probed: Vec<&str> = rest.split_once("</pre>").unwrap().0.lines().collect();
    // 100 A at the closing; at the span's end 5 kV e^(-9 ms / 1.6 ms) = 18.0328 V remain; a cursor shows
    // a hundred-thousandth of the largest value.
    assert_eq!(
        probed,
        [
            "time1 ms; voltage across chest5 kV; current through chest100 A",
            "time10 ms1 ms−9 ms; voltage across chest18 V5 kV4.982 kV; \
             current through chest361 mA100 A99.639 A",
            "zoomed",
            "whole",
            "slider 10 ms, voltage across chest 18 V, current through chest 361 mA",
        ]
    );
}
