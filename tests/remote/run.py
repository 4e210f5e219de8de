#!/usr/bin/env python3
"""The interface over SSH, from this machine to itself: stepping, saving a table, and lines that break.

    python3 tests/remote/run.py PROGRAM FOLDER

PROGRAM is the built restpoint, FOLDER is for keys, settings and what is saved. sshd runs as the present user on a free
port of the loopback interface, with keys made for the occasion. Only the standard library is used. Ends with 1 on the first
thing that is not as it should be.
"""

import contextlib
import fcntl
import getpass
import os
import pathlib
import pty
import re
import select
import shutil
import signal
import socket
import struct
import subprocess
import sys
import termios
import time

ROOT = pathlib.Path(__file__).resolve().parents[2]
MODEL = ROOT / "scenarios" / "skarnby-bank.yaml"
# Nothing takes that long on a machine that works at all.
LIMIT = 60.0
# How soon nothing may be left behind by a line that broke.
GONE = 5.0

# Seven species that are all limited by the same: its search takes minutes.
LONG = """\
title: Long
time: yr
species: {A: {upper: 99}, B: {upper: 99}, C: {upper: 99}, D: {upper: 99}, F: {upper: 99}, G: {upper: 99}, H: {upper: 99}}
shorthand: {left: 7 - A/(1+A/9) - B/(1+B/9) - C/(1+C/9) - D/(1+D/9) - F/(1+F/9) - G/(1+G/9) - H/(1+H/9)}
change:
  A: A*left*(1 + B)
  B: B*left*(2 + C)
  C: C*left*(3 + D)
  D: D*left*(4 + F)
  F: F*left*(5 + G)
  G: G*left*(6 + H)
  H: H*left*(7 + A)
"""

SERVER = """\
Port {port}
ListenAddress 127.0.0.1
HostKey {folder}/host
PidFile {folder}/sshd.pid
AuthorizedKeysFile {folder}/user.pub
PubkeyAuthentication yes
PasswordAuthentication no
KbdInteractiveAuthentication no
PermitRootLogin prohibit-password
StrictModes no
UsePAM no
"""


def fail(message):
    sys.exit(f"error: {message}")


def make_key(path):
    subprocess.run(["ssh-keygen", "-q", "-t", "ed25519", "-N", "", "-f", str(path)], check=True)


def free_port():
    with socket.socket() as asking:
        asking.bind(("127.0.0.1", 0))
        return asking.getsockname()[1]


@contextlib.contextmanager
def server(folder):
    """sshd, while it is needed; its port."""
    if os.geteuid() == 0:
        # Where it puts aside what it need not be allowed.
        os.makedirs("/run/sshd", mode=0o755, exist_ok=True)
    for name in ("host", "user"):
        make_key(folder / name)
    port = free_port()
    settings = folder / "sshd_config"
    settings.write_text(SERVER.format(port=port, folder=folder))
    sshd = shutil.which("sshd", path="/usr/sbin:/usr/local/sbin:" + os.environ.get("PATH", ""))
    with open(folder / "sshd.log", "wb") as log:
        running = subprocess.Popen([sshd, "-D", "-e", "-f", str(settings)], stderr=log)
    try:
        wait_until("sshd", lambda: can_connect(port))
        yield port
    finally:
        running.terminate()
        running.wait()


def can_connect(port):
    try:
        with socket.create_connection(("127.0.0.1", port), timeout=1):
            return True
    except OSError:
        return False


def wait_until(what, is_so, limit=LIMIT):
    end = time.monotonic() + limit
    while not is_so():
        if time.monotonic() > end:
            fail(f"waited {limit} s in vain for {what}")
        time.sleep(0.02)


class Line:
    """A terminal of 80x24 that runs a program on the far side."""

    def __init__(self, folder, port, command):
        arguments = ["ssh", "-F", "/dev/null", "-tt", "-p", str(port), "-i", str(folder / "user")]
        for option in (
            "StrictHostKeyChecking=no",
            f"UserKnownHostsFile={folder}/known",
            "IdentitiesOnly=yes",
            "IdentityAgent=none",
            "LogLevel=ERROR",
        ):
            arguments += ["-o", option]
        arguments += [f"{getpass.getuser()}@127.0.0.1", command]
        self.bytes = b""
        self.process, self.terminal = pty.fork()
        if self.process == 0:
            os.environ["TERM"] = "xterm-256color"
            os.execvp("ssh", arguments)
        fcntl.ioctl(self.terminal, termios.TIOCSWINSZ, struct.pack("HHHH", 24, 80, 0, 0))

    def read(self, limit=0.05):
        """Takes what is there; whether it goes on."""
        if not select.select([self.terminal], [], [], limit)[0]:
            return True
        try:
            got = os.read(self.terminal, 65536)
        except OSError:
            return False
        self.bytes += got
        return bool(got)

    def wait_for(self, text, start=0):
        """Waits for a text without blanks, which a frame writes in one piece."""
        end = time.monotonic() + LIMIT
        while text.encode() not in self.bytes[start:]:
            goes_on = self.read()
            if not goes_on or time.monotonic() > end:
                fail(f"waited in vain for {text!r}; there was {self.bytes[-3000:]!r}")

    def key(self, keys):
        """Types, and waits for an answer to it."""
        before = len(self.bytes)
        os.write(self.terminal, keys.encode())
        end = time.monotonic() + LIMIT
        while len(self.bytes) == before:
            if not self.read() or time.monotonic() > end:
                fail(f"no answer to {keys!r}; there was {self.bytes[-3000:]!r}")

    def wait_until_done(self):
        """Waits until nothing is searched any more: then the caution stands where the progress stood."""
        end = time.monotonic() + LIMIT
        while True:
            start = len(self.bytes)
            # Everything is drawn anew, so that no text is written in part.
            self.key("\x0c")
            pause = time.monotonic() + 0.1
            while time.monotonic() < pause:
                self.read(0.01)
            if b"authority" in self.bytes[start:] and b"E4" in self.bytes[start:]:
                return
            if time.monotonic() > end:
                fail(f"the search does not end; there was {self.bytes[-3000:]!r}")

    def close(self):
        os.close(self.terminal)
        return os.waitstatus_to_exitcode(os.waitpid(self.process, 0)[1])

    def wait_for_end(self):
        end = time.monotonic() + LIMIT
        while self.read():
            if time.monotonic() > end:
                fail("the line does not end")
        return self.close()

    def break_off(self):
        os.kill(self.process, signal.SIGKILL)
        self.close()


def running(program):
    """Processes of the program, by their ids."""
    found = []
    for process in pathlib.Path("/proc").iterdir():
        if process.name.isdigit():
            with contextlib.suppress(OSError):
                if os.readlink(process / "exe") == str(program):
                    found.append(int(process.name))
    return found


def check_nothing_left(program, after):
    start = time.monotonic()
    wait_until(f"the end of the program after {after}", lambda: not running(program), GONE)
    print(f"{after}: nothing left after {time.monotonic() - start:.2f} s")


def check_session(line, folder):
    """Steps through equilibria and scenarios, and saves the table."""
    line.wait_until_done()
    for key in ("n", "n", "p", "f", "b", "h", "h", "\x1b[B"):
        line.key(key)
    saved = folder / "saved.csv"
    save(line, saved)
    wait_until("the saved table", saved.exists)
    text = saved.read_text()
    if not text.endswith("\n") or "E4" not in text:
        fail(f"the saved table is not whole: {text[-500:]!r}")
    return text


def save(line, path):
    line.key("w")
    # Whatever is offered is taken away first.
    os.write(line.terminal, b"\x7f" * 100)
    os.write(line.terminal, f"{path}\r".encode())


def check_broken_save(folder, port, command, whole, delay):
    """The line breaks about when a table is saved: it is there as a whole, or not at all."""
    line = Line(folder, port, command)
    line.wait_until_done()
    last = folder / f"last-{delay}.csv"
    save(line, last)
    end = time.monotonic() + delay
    while time.monotonic() < end:
        line.read(0.001)
    line.break_off()
    start = time.monotonic()
    # What the program began it ends.
    wait_until("the end of the program", lambda: not running(folder / "restpoint"), GONE)
    if last.exists() and len(last.read_text().splitlines()) != len(whole.splitlines()):
        fail(f"a table was written in part: {last.read_text()[-500:]!r}")
    left = [path.name for path in folder.iterdir() if "last-" in path.name and path != last and path.suffix != ".csv"]
    if left:
        fail(f"parts of a file are left: {left}")
    found = "a whole table" if last.exists() else "no table"
    print(f"a line that breaks {delay} s after saving: {found}, nothing left after {time.monotonic() - start:.2f} s")


def main():
    program = pathlib.Path(sys.argv[1]).resolve()
    folder = pathlib.Path(sys.argv[2]).resolve()
    shutil.rmtree(folder, ignore_errors=True)
    folder.mkdir(parents=True)
    # A copy, so that no other run is taken for ours.
    own = folder / "restpoint"
    shutil.copy2(program, own)
    long = folder / "long.yaml"
    long.write_text(LONG)
    command = f"LANG=C.UTF-8 XDG_STATE_HOME={folder / 'state'} exec {own}"
    with server(folder) as port:
        line = Line(folder, port, f"{command} {MODEL}")
        whole = check_session(line, folder)
        os.write(line.terminal, b"q")
        if (code := line.wait_for_end()) != 0:
            fail(f"q ends with {code}")
        if re.search(rb"\x1b\[\?1049l(?!.*\x1b\[\?1049h)", line.bytes, re.DOTALL) is None:
            fail("the second screen is left on")
        check_nothing_left(own, "q")

        for delay in (0.0, 0.1, 0.2, 0.5):
            check_broken_save(folder, port, f"{command} {MODEL}", whole, delay)

        line = Line(folder, port, f"{command} --budget 600 {long}")
        line.wait_for("searching")
        line.break_off()
        check_nothing_left(own, "a line that breaks during a search")
    own.unlink()


if __name__ == "__main__":
    main()
