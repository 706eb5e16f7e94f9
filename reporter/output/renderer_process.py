"""The renderer in a process of its own: it is loaded, and lays pages out, while this process reads and computes.

Run as a module this is that process: it reads messages from its standard input and answers on its standard
output, both pickled by this program for this program.  It ends when its input does.
"""

from __future__ import annotations

import os
import pickle
import subprocess
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager, suppress
from pathlib import Path
from typing import IO, TYPE_CHECKING, Any

from reporter.errors import OutputError

if TYPE_CHECKING:
    from reporter.output.renderer import Enclosure, PageRenderer, Pages

_READY = "ready"
#: A renderer that was loaded here already is not loaded a second time.
_LOADED = "weasyprint"


@contextmanager
def renderer_beside() -> Iterator[PageRenderer | None]:
    """A renderer in a process of its own, ended with the block; None where one is loaded in this process already,
    or no process can be started."""
    if _LOADED in sys.modules or not sys.executable:
        yield None
        return
    try:
        beside = RendererProcess()
    except OSError:
        yield None
        return
    try:
        yield beside
    finally:
        beside.close()


class RendererProcess:
    """The near end: hands pages and enclosures over, and takes the PDF.

    A process that does not come up is replaced by the renderer in this process; one that ends in its work is
    replaced by a new one, and its document is an `OutputError`.
    """

    def __init__(self) -> None:
        self._process = _started()
        self._ready = False
        self._here: PageRenderer | None = None

    def lay_out(self, pages: Pages, overlay: Path | None) -> None:
        """Hand the pages over; errors of the layout are raised by `finish`."""
        if self._here is None and not self._came_up():
            from reporter.output.renderer import Renderer

            self._here = Renderer()
        if self._here is not None:
            self._here.lay_out(pages, overlay)
            return
        with suppress(OSError):  # a process that has ended is met when its answer is awaited
            self._send(("lay_out", pages, overlay))

    def finish(self, enclosed: Sequence[Enclosure]) -> bytes:
        """The PDF."""
        if self._here is not None:
            return self._here.finish(enclosed)
        try:
            self._send(("finish", tuple(enclosed)))
            answer = self._receive()
        except (OSError, EOFError, pickle.UnpicklingError):
            self.close()
            self._process, self._ready = _started(), False
            raise OutputError("the renderer ended before the report was laid out", "PDF") from None
        if isinstance(answer, BaseException):
            raise answer
        return bytes(answer)

    def close(self) -> None:
        """End the process, whatever it does."""
        self._process.kill()
        for stream in (self._process.stdin, self._process.stdout):
            if stream is not None:
                with suppress(OSError):
                    stream.close()
        self._process.wait()

    def _came_up(self) -> bool:
        if not self._ready:
            with suppress(OSError, EOFError, pickle.UnpicklingError):
                self._ready = self._receive() == _READY
        return self._ready

    def _send(self, message: tuple[Any, ...]) -> None:
        assert self._process.stdin is not None
        pickle.dump(message, self._process.stdin, pickle.HIGHEST_PROTOCOL)
        self._process.stdin.flush()

    def _receive(self) -> Any:
        assert self._process.stdout is not None
        return pickle.load(self._process.stdout)


def _started() -> subprocess.Popen[bytes]:
    command = [sys.executable, "-m", "reporter.output.renderer_process"]
    return subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE)


# ---- the far end ----------------------------------------------------------------------------------------


def _serve(messages: IO[bytes], answers: IO[bytes]) -> None:
    """Answer messages until there are no more."""
    import gc

    from reporter.output.renderer import Renderer

    gc.disable()
    _answer(answers, _READY)
    renderer, fault = Renderer(), None
    renderer.warm_up()
    while True:
        kind, *values = pickle.load(messages)
        try:
            if kind == "lay_out":
                fault = None
                renderer.lay_out(*values)
                continue
            if fault is not None:
                raise fault
            made: bytes | Exception = renderer.finish(*values)
        except Exception as error:  # said at the near end, which awaits an answer to `finish` alone
            if kind == "lay_out":
                fault = error
                continue
            made = error
        _answer(answers, made)
        gc.collect()


def _answer(answers: IO[bytes], what: Any) -> None:
    try:
        content = pickle.dumps(what, pickle.HIGHEST_PROTOCOL)
    except Exception:  # an error that cannot be handed over as it is
        content = pickle.dumps(OutputError(f"{type(what).__name__}: {what}", "PDF"))
    answers.write(content)
    answers.flush()


def _main() -> None:
    """Serve on the standard streams; whatever else is printed goes where errors go."""
    import signal

    signal.signal(signal.SIGINT, signal.SIG_IGN)  # the near end decides when to stop
    answers = os.fdopen(os.dup(1), "wb")
    os.dup2(2, 1)
    with suppress(EOFError, OSError):
        _serve(sys.stdin.buffer, answers)
    os._exit(0)


if __name__ == "__main__":
    _main()
