//! A program in a pseudo-terminal: a keyboard for what it reads, a screen for what it writes.
//!
//! Nothing waits for a fixed time: [`Session::wait_for`] looks at the screen after everything that comes, up to a limit that
//! only a machine that has stopped can miss.

#![allow(dead_code, reason = "the benchmark of the interface uses a part")]

use std::fs;
use std::io::{Read, Write};
use std::num::NonZeroU16;
use std::sync::{Arc, Condvar, Mutex};
use std::thread::{self, JoinHandle};
use std::time::{Duration, Instant};

use portable_pty::{Child, CommandBuilder, MasterPty, PtySize, native_pty_system};
use rustix::process::{Pid, Signal, kill_process};
use tempfile::TempDir;
use vt100::Screen;

/// How long anything may take.
pub const LIMIT: Duration = Duration::from_secs(40);

/// What a program is started with.
pub struct Setup {
    pub program: String,
    pub arguments: Vec<String>,
    /// Columns and rows.
    pub size: (u16, u16),
    /// Over the environment of a terminal of 256 colours with UTF-8.
    pub environment: Vec<(String, String)>,
    /// Whether the terminal tells its process when it is gone.
    pub controls: bool,
    /// Whether what the program writes is read from the beginning.
    pub reads: bool,
}

impl Setup {
    /// The program, on some arguments.
    pub fn new(arguments: &[&str]) -> Self {
        Self {
            program: env!("CARGO_BIN_EXE_restpoint").to_owned(),
            arguments: arguments.iter().map(|&word| word.to_owned()).collect(),
            size: (80, 24),
            environment: Vec::new(),
            controls: true,
            reads: true,
        }
    }

    pub fn size(self, columns: u16, rows: u16) -> Self {
        Self { size: (columns, rows), ..self }
    }

    pub fn environment(mut self, variables: &[(&str, &str)]) -> Self {
        self.environment.extend(variables.iter().map(|&(name, value)| (name.to_owned(), value.to_owned())));
        self
    }

    /// With what is kept between runs in a folder of its own.
    fn command(&self, state: &TempDir) -> CommandBuilder {
        let mut command = CommandBuilder::new(&self.program);
        command.args(&self.arguments);
        command.cwd(env!("CARGO_MANIFEST_DIR"));
        for name in ["NO_COLOR", "LC_ALL", "LC_CTYPE", "COLORTERM"] {
            command.env_remove(name);
        }
        command.env("TERM", "xterm-256color");
        command.env("LANG", "C.UTF-8");
        command.env("XDG_STATE_HOME", state.path());
        for (name, value) in &self.environment {
            command.env(name, value);
        }
        command.set_controlling_tty(self.controls);
        command
    }
}

/// What has arrived.
struct Arrived {
    screen: vt100::Parser,
    bytes: Vec<u8>,
    /// When the last of them came.
    last: Instant,
    /// When bytes came, and how many there were by then.
    parts: Vec<(Instant, usize)>,
    is_closing: bool,
}

type Shared = Arc<(Mutex<Arrived>, Condvar)>;

/// A program that runs.
pub struct Session {
    child: Box<dyn Child + Send + Sync>,
    master: Option<Box<dyn MasterPty + Send>>,
    keyboard: Option<Box<dyn Write + Send>>,
    arrived: Shared,
    reader: Option<JoinHandle<()>>,
    state: TempDir,
}

fn lengths(columns: u16, rows: u16) -> PtySize {
    PtySize { rows, cols: columns, pixel_width: 0, pixel_height: 0 }
}

fn count(n: u16) -> NonZeroU16 {
    NonZeroU16::new(n).unwrap()
}

impl Session {
    pub fn start(setup: &Setup) -> Self {
        let (columns, rows) = setup.size;
        let pair = native_pty_system().openpty(lengths(columns, rows)).unwrap();
        let state = tempfile::tempdir().unwrap();
        let child = pair.slave.spawn_command(setup.command(&state)).unwrap();
        drop(pair.slave);
        let arrived = Arrived {
            screen: vt100::Parser::new(count(rows), count(columns), 0),
            bytes: Vec::new(),
            last: Instant::now(),
            parts: Vec::new(),
            is_closing: false,
        };
        let keyboard = pair.master.take_writer().unwrap();
        let mut session = Self {
            child,
            master: Some(pair.master),
            keyboard: Some(keyboard),
            arrived: Arc::new((Mutex::new(arrived), Condvar::new())),
            reader: None,
            state,
        };
        if setup.reads {
            session.read();
        }
        session
    }

    /// Reads what the program writes, from now on.
    pub fn read(&mut self) {
        let reader = self.master.as_ref().unwrap().try_clone_reader().unwrap();
        let arrived = Arc::clone(&self.arrived);
        self.reader = Some(thread::spawn(move || follow(reader, &arrived)));
    }

    /// Types.
    pub fn keys(&mut self, keys: &str) {
        // A program that is at its end may hear nothing any more.
        let _ = self.keyboard.as_mut().unwrap().write_all(keys.as_bytes());
    }

    /// Waits until the screen is as it should be.
    pub fn wait_for(&self, what: &str, is_so: impl Fn(&Screen) -> bool) {
        let (arrived, changed) = &*self.arrived;
        let guard = arrived.lock().unwrap();
        let (guard, waited) =
            changed.wait_timeout_while(guard, LIMIT, |arrived| !is_so(arrived.screen.screen())).unwrap();
        assert!(!waited.timed_out(), "waited in vain for {what}:\n{}", guard.screen.screen().contents());
    }

    /// Waits for a text on the screen.
    pub fn wait_for_text(&self, text: &str) {
        self.wait_for(text, |screen| screen.contents().contains(text));
    }

    /// Waits until everything is found and drawn.
    pub fn wait_until_done(&self) {
        self.wait_for("the end of the search", is_done);
    }

    /// Waits until more has been written than so many bytes.
    pub fn wait_for_more_than(&self, bytes: usize) {
        let (arrived, changed) = &*self.arrived;
        let guard = arrived.lock().unwrap();
        let (_guard, waited) =
            changed.wait_timeout_while(guard, LIMIT, |arrived| arrived.bytes.len() <= bytes).unwrap();
        assert!(!waited.timed_out(), "nothing came after {bytes} bytes");
    }

    /// Types, and waits for all that comes of it: when the last of it came and how many bytes it was; `None` where nothing
    /// came. It is over when nothing has come for as long as `quiet`; what only tells of a search, in its own line, is none of
    /// it.
    pub fn answer(&mut self, keys: &str, quiet: Duration) -> Option<(Duration, usize)> {
        let before = self.look(Screen::clone);
        let count = self.last().1;
        let start = Instant::now();
        self.keys(keys);
        let (arrived, changed) = &*self.arrived;
        let mut guard = arrived.lock().unwrap();
        loop {
            let now = guard.bytes.len();
            // A machine that is busy with other things may be late with the first byte.
            let patience = if now == count { 5 * quiet } else { quiet };
            let (later, _) = changed.wait_timeout_while(guard, patience, |later| later.bytes.len() == now).unwrap();
            guard = later;
            if guard.bytes.len() == now {
                let last = last_change(&before, &guard, count)?;
                return Some((last.0 - start, last.1 - count));
            }
        }
    }

    /// Looks at the screen.
    pub fn look<T>(&self, at: impl FnOnce(&Screen) -> T) -> T {
        at(self.arrived.0.lock().unwrap().screen.screen())
    }

    /// All that was written.
    pub fn bytes(&self) -> Vec<u8> {
        self.arrived.0.lock().unwrap().bytes.clone()
    }

    /// When the last byte came, and how many there are.
    pub fn last(&self) -> (Instant, usize) {
        let arrived = self.arrived.0.lock().unwrap();
        (arrived.last, arrived.bytes.len())
    }

    pub fn resize(&self, columns: u16, rows: u16) {
        // The screen first: what comes next is for the new size.
        let emulated = (columns.min(500), rows.min(500));
        self.arrived.0.lock().unwrap().screen.set_size(count(emulated.1), count(emulated.0));
        self.master.as_ref().unwrap().resize(lengths(columns, rows)).unwrap();
    }

    /// The terminal's modes, to be compared.
    pub fn modes(&self) -> String {
        format!("{:?}", self.master.as_ref().unwrap().get_termios().unwrap())
    }

    pub fn id(&self) -> u32 {
        self.child.process_id().unwrap()
    }

    pub fn signal(&self, signal: Signal) {
        signal_to(self.id(), signal);
    }

    /// Whether the program has not ended yet.
    pub fn is_running(&mut self) -> bool {
        self.child.try_wait().unwrap().is_none()
    }

    /// Waits until the program has ended; how it did.
    pub fn code(&mut self) -> u32 {
        let start = Instant::now();
        loop {
            if let Some(status) = self.child.try_wait().unwrap() {
                return status.exit_code();
            }
            assert!(start.elapsed() < LIMIT, "it does not end:\n{}", self.look(Screen::contents));
            thread::sleep(Duration::from_millis(5));
        }
    }

    /// Takes the terminal away. `stir` is a key that the program answers, so that the reader wakes and lets go of it.
    pub fn close(&mut self, stir: &str) {
        self.arrived.0.lock().unwrap().is_closing = true;
        self.keys(stir);
        if let Some(reader) = self.reader.take() {
            reader.join().unwrap();
        }
        self.keyboard = None;
        self.master = None;
    }
}

impl Drop for Session {
    fn drop(&mut self) {
        // A test that has failed leaves no program behind.
        let _ = self.child.kill();
        let _ = self.child.wait();
    }
}

/// When something last changed outside the line that tells of a search, since there were so many bytes, and how many there
/// were then.
fn last_change(before: &Screen, arrived: &Arrived, count: usize) -> Option<(Instant, usize)> {
    let (rows, columns) = before.size();
    let mut replay = vt100::Parser::new(rows, columns, 0);
    replay.process(before.state_formatted().as_bytes());
    let mut shown = but_the_status(replay.screen());
    let mut from = count;
    let mut last = None;
    for &(time, until) in arrived.parts.iter().filter(|(_, until)| *until > count) {
        replay.process(&arrived.bytes[from..until]);
        from = until;
        let now = but_the_status(replay.screen());
        if now != shown {
            (shown, last) = (now, Some((time, until)));
        }
    }
    last
}

fn but_the_status(screen: &Screen) -> Vec<String> {
    let (rows, columns) = screen.size();
    let status = usize::from(rows.get()).saturating_sub(2);
    let rows = screen.rows_formatted(0, columns.get()).enumerate();
    rows.filter(|(row, _)| *row != status).map(|(_, row)| row).collect()
}

fn follow(mut from: Box<dyn Read + Send>, arrived: &Shared) {
    let mut bytes = vec![0; 65536];
    while let Ok(count @ 1..) = from.read(&mut bytes) {
        let now = Instant::now();
        let mut state = arrived.0.lock().unwrap();
        state.last = now;
        state.bytes.extend_from_slice(&bytes[..count]);
        let all = state.bytes.len();
        state.parts.push((now, all));
        state.screen.process(&bytes[..count]);
        arrived.1.notify_all();
        if state.is_closing {
            return;
        }
    }
}

pub fn signal_to(process: u32, signal: Signal) {
    kill_process(Pid::from_raw(process.cast_signed()).unwrap(), signal).unwrap();
}

/// Whether equilibria are shown, and nothing is under way: then the caution stands in the last line but one.
pub fn is_done(screen: &Screen) -> bool {
    let rows: Vec<String> = screen.rows(0, screen.size().1.get()).collect();
    let text = rows.join("\n");
    let status = rows.iter().rev().nth(1).is_some_and(|row| row.contains("local result"));
    status && text.contains("E1") && !text.contains("drawing")
}

/// The row that is selected, from above.
pub fn selected(screen: &Screen) -> Option<u16> {
    let (rows, columns) = screen.size();
    let is_reversed = |row: u16| (0..columns.get()).any(|x| screen.cell(row, x).is_some_and(vt100::Cell::inverse));
    (0..rows.get()).find(|&row| is_reversed(row))
}

/// One field of what the system says of a process, counted as its manual does; `None` where there is no such process.
pub fn field(process: u32, number: usize) -> Option<String> {
    let text = fs::read_to_string(format!("/proc/{process}/stat")).ok()?;
    // The second is a name in parentheses, which may hold anything.
    let (_, rest) = text.rsplit_once(") ")?;
    rest.split_whitespace().nth(number - 3).map(str::to_owned)
}

/// Hundredths of a second that a process has computed.
pub fn computed(process: u32) -> Option<u64> {
    let ticks = |number| field(process, number)?.parse::<u64>().ok();
    Some(ticks(14)? + ticks(15)?)
}
