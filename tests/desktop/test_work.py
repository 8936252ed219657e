"""Long work: where it runs, where its results arrive, and that stopping leaves nothing behind."""

from __future__ import annotations

import threading

import pytest

from panelview.desktop import work


def run_and_wait(qtbot, task):
    """Run a task; the calls made, in order, each with whether it came on the main thread."""
    calls = []

    def told(name):
        return lambda *arguments: calls.append((name, arguments, threading.current_thread() is threading.main_thread()))

    token = work.run(task, told("done"), told("failed"), told("progress"), told("cancelled"))
    qtbot.waitUntil(lambda: any(name != "progress" for name, _, _ in calls))
    return token, calls


def test_a_task_runs_off_the_main_thread_and_its_result_arrives_on_it(qtbot):
    _, calls = run_and_wait(qtbot, lambda _: threading.current_thread() is threading.main_thread())
    assert calls == [("done", (False,), True)]


def test_an_error_of_the_task_arrives_as_itself(qtbot):
    error = ValueError("two decimal marks")

    def fail(_):
        raise error

    _, calls = run_and_wait(qtbot, fail)
    assert calls == [("failed", (error,), True)]


def test_progress_arrives_in_order_before_the_result(qtbot):
    def task(token):
        token.report(1, 2, "steps.csv")
        token.report(2, 2, "state.csv")
        return "all"

    _, calls = run_and_wait(qtbot, task)
    assert calls == [
        ("progress", (1, 2, "steps.csv"), True),
        ("progress", (2, 2, "state.csv"), True),
        ("done", ("all",), True),
    ]


def test_a_cancelled_task_delivers_nothing_but_that_it_was_cancelled(qtbot):
    go_on = threading.Event()

    def task(token):
        go_on.wait(5)
        token.report(1, 2, "steps.csv")
        return "all"

    calls = []
    token = work.run(
        task,
        lambda _: calls.append("done"),
        lambda _: calls.append("failed"),
        lambda *_: calls.append("progress"),
        lambda: calls.append("cancelled"),
    )
    token.cancel()
    go_on.set()
    qtbot.waitUntil(lambda: bool(calls))
    assert calls == ["cancelled"]


def test_a_result_that_comes_after_cancelling_is_not_delivered(qtbot):
    """A task that never asks whether it is cancelled still cannot change the window."""
    started, go_on = threading.Event(), threading.Event()

    def task(_):
        started.set()
        go_on.wait(5)
        return "all"

    calls = []
    token = work.run(task, calls.append, calls.append, on_cancelled=lambda: calls.append("cancelled"))
    assert started.wait(5)
    token.cancel()
    go_on.set()
    qtbot.waitUntil(lambda: bool(calls))
    assert calls == ["cancelled"]


def test_check_raises_only_after_cancelling():
    token = work.Token(lambda *_: None)
    token.check()
    token.cancel()
    with pytest.raises(work.Cancelled):
        token.check()


@pytest.mark.usefixtures("qapp")
def test_shutting_down_waits_for_what_runs():
    started, ended = threading.Event(), threading.Event()

    def task(token):
        started.set()
        while not token.cancelled:
            pass
        ended.set()

    work.run(task, lambda _: None, lambda _: None)
    assert started.wait(5)
    work.shut_down()
    assert ended.is_set()
