"""Long work off the GUI thread: one way to run it, cancel by token, results delivered on the GUI thread."""

from __future__ import annotations

from collections.abc import Callable
from threading import Event
from typing import Any, Generic, TypeVar

from PySide6.QtCore import QCoreApplication, QObject, QRunnable, Qt, QThreadPool, Signal, Slot

T = TypeVar("T")


class Cancelled(Exception):
    """Raised inside a task by `Token.check` when the user has cancelled it."""


class Token:
    """What a running task and its starter share: a way to cancel and a way to report progress."""

    def __init__(self, report: Callable[[int, int, str], None]) -> None:
        self._cancelled = Event()
        self._report = report

    def cancel(self) -> None:
        """Ask the task to stop; nothing of it is delivered any more."""
        self._cancelled.set()

    @property
    def cancelled(self) -> bool:
        return self._cancelled.is_set()

    def check(self) -> None:
        """Raise Cancelled if the user has cancelled; tasks call this between units of work."""
        if self.cancelled:
            raise Cancelled

    def report(self, done: int, total: int, what: str = "") -> None:
        """Tell how far the task is (total 0: not known); raises Cancelled like `check`."""
        self.check()
        self._report(done, total, what)


class _Relay(QObject):
    """Lives on the GUI thread; its queued signals carry a worker's results over to it."""

    ended = Signal(object, object)
    progressed = Signal(int, int, str)

    def __init__(
        self,
        on_done: Callable[[Any], None],
        on_failed: Callable[[Exception], None],
        on_progress: Callable[[int, int, str], None] | None,
        on_cancelled: Callable[[], None] | None,
    ) -> None:
        super().__init__(QCoreApplication.instance())
        self.token = Token(self.progressed.emit)
        self._on_done = on_done
        self._on_failed = on_failed
        self._on_progress = on_progress
        self._on_cancelled = on_cancelled
        self.ended.connect(self._deliver, Qt.ConnectionType.QueuedConnection)
        self.progressed.connect(self._progress, Qt.ConnectionType.QueuedConnection)

    @Slot(int, int, str)
    def _progress(self, done: int, total: int, what: str) -> None:
        if self._on_progress is not None and not self.token.cancelled:
            self._on_progress(done, total, what)

    @Slot(object, object)
    def _deliver(self, result: object, error: Exception | None) -> None:
        _running.discard(self)
        self.deleteLater()
        if self.token.cancelled:
            if self._on_cancelled is not None:
                self._on_cancelled()
        elif error is not None:
            self._on_failed(error)
        else:
            self._on_done(result)


class _Work(QRunnable, Generic[T]):
    def __init__(self, task: Callable[[Token], T], relay: _Relay) -> None:
        super().__init__()
        self._task = task
        self._relay = relay

    def run(self) -> None:
        result: T | None = None
        error: Exception | None = None
        try:
            self._relay.token.check()
            result = self._task(self._relay.token)
        except Exception as caught:
            error = caught
        self._relay.ended.emit(result, error)


_running: set[_Relay] = set()


def run(
    task: Callable[[Token], T],
    on_done: Callable[[T], None],
    on_failed: Callable[[Exception], None],
    on_progress: Callable[[int, int, str], None] | None = None,
    on_cancelled: Callable[[], None] | None = None,
) -> Token:
    """Run `task(token)` in a worker thread; the callbacks are called on the GUI thread.

    Exactly one of on_done(result), on_failed(exception) and on_cancelled() follows. Call from the GUI thread.
    """
    relay = _Relay(on_done, on_failed, on_progress, on_cancelled)
    _running.add(relay)
    QThreadPool.globalInstance().start(_Work(task, relay))
    return relay.token


def shut_down() -> None:
    """Cancel everything that runs and wait for it; for leaving the program."""
    for relay in tuple(_running):
        relay.token.cancel()
    QThreadPool.globalInstance().waitForDone()
