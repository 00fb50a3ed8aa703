"""`rtfx play` as a process of its own, seen through its JSON lines."""

import json
import queue
import subprocess
import sys
import threading
import time


class Program:
    """Within ``with``, `rtfx play ARGUMENTS --json` in the environment *env*; its facts come by `until`."""

    def __init__(self, *arguments, env):
        command = [sys.executable, "-c", "from rtfx.cli.main import run; run()", "play", *arguments, "--json"]
        self.process = subprocess.Popen(
            command, env=env, stdin=subprocess.DEVNULL, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True
        )
        self.lines = queue.Queue()
        threading.Thread(target=self._read, daemon=True).start()

    def _read(self):
        for line in self.process.stdout:
            self.lines.put(json.loads(line))
        self.lines.put(None)

    def until(self, wanted, seconds=30.0):
        """Return the first fact for which *wanted* is true, read from now on."""
        end = time.monotonic() + seconds
        while (left := end - time.monotonic()) > 0:
            try:
                fact = self.lines.get(timeout=left)
            except queue.Empty:
                break
            if fact is None:
                raise AssertionError(f"rtfx play has ended: {self.process.stderr.read()}")
            if wanted(fact):
                return fact
        raise AssertionError(f"nothing like that within {seconds} s")

    def until_message(self, words, seconds=30.0):
        """Return the first message that holds *words*."""
        return self.until(lambda fact: words in fact.get("message", ""), seconds)

    def end(self, seconds=10.0):
        """Ask it to end; returns the exit code."""
        self.process.terminate()
        return self.process.wait(seconds)

    def __enter__(self):
        return self

    def __exit__(self, *_):
        if self.process.poll() is None:
            self.process.terminate()
        try:
            self.process.wait(5)
        except subprocess.TimeoutExpired:
            self.process.kill()
            self.process.wait()
        self.process.stdout.close()
        self.process.stderr.close()
