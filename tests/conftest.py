"""What every test stands on: its own user folders, a Qt that is set up once, and a count of the GUI tests."""

from __future__ import annotations

import gc
import importlib.util
import json
import os
import sys
import threading
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Iterator

    from PySide6.QtCore import QObject

HAS_QT = importlib.util.find_spec("PySide6") is not None
HAS_DISPLAY = bool(os.environ.get("DISPLAY"))
RECORD = Path(__file__).with_name("gui_count.json")
GUI_FIXTURES = {"qtbot", "qapp", "qtmodeltester"}
GRACE_MS = 100  # for pool work that is just ending
COUNT_LINES = pytest.StashKey[list[str]]()
counted: dict[str, set[str]] = {"gui": set(), "opengl": set()}


def pytest_addoption(parser: pytest.Parser) -> None:
    parser.addoption(
        "--gui-count",
        choices=["show", "check", "record"],
        default="show",
        help="check: fail when fewer GUI tests ran than gui_count.json says; record: write that file",
    )
    if not HAS_QT:  # pyproject.toml speaks to pytest-qt, which is not there either
        parser.addini("qt_api", "unused without Qt")
        parser.addini("qt_log_level_fail", "unused without Qt")


def pytest_configure(config: pytest.Config) -> None:
    if not config.getoption("benchmark_only", None):
        config.option.benchmark_skip = True
    if not HAS_QT:
        from hypothesis import settings

        # The same tests run in full beside Qt; here they only show that core needs none of it.
        settings.register_profile("few", parent=settings(), max_examples=10)
        settings.load_profile("few")
        return
    if not HAS_DISPLAY:
        os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    from PySide6.QtCore import QCoreApplication, Qt

    # Before any QApplication: without it a second OpenGL view stays blank or crashes.
    QCoreApplication.setAttribute(Qt.ApplicationAttribute.AA_ShareOpenGLContexts)


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    for item in items:
        if item.get_closest_marker("opengl"):
            item.add_marker("gui")
            if not HAS_DISPLAY:
                item.add_marker(pytest.mark.skip(reason="no display, so no OpenGL; .dev/test.py brings one"))
        elif GUI_FIXTURES & set(getattr(item, "fixturenames", ())):
            item.add_marker("gui")
        if item.get_closest_marker("gui") and not item.get_closest_marker("timeout"):
            # A signal never gets through to Python while Qt's own event loop hangs.
            item.add_marker(pytest.mark.timeout(method="thread"))


# --- the count: a GUI test may not vanish by being skipped ---------------------------------------------------


@pytest.hookimpl(wrapper=True)
def pytest_runtest_makereport(item: pytest.Item) -> Iterator[None]:
    report = yield
    if report.when == "call" and report.outcome != "skipped":
        for marker, ran in counted.items():
            if item.get_closest_marker(marker):
                ran.add(item.nodeid)
    return report


def is_whole_suite(config: pytest.Config) -> bool:
    """Say whether nobody asked for only some of the tests, so that the count can be held against the record."""
    if config.args_source is not pytest.Config.ArgsSource.TESTPATHS:
        return False
    narrowing = ("keyword", "markexpr", "deselect", "ignore", "ignore_glob", "lf", "stepwise", "collectonly")
    return not any(config.getoption(name, None) for name in (*narrowing, "benchmark_only"))


def pytest_sessionfinish(session: pytest.Session, exitstatus: int) -> None:
    config = session.config
    wanted = config.getoption("--gui-count")
    ran = {marker: len(tests) for marker, tests in counted.items()}
    recorded = json.loads(RECORD.read_text())
    whole = is_whole_suite(config)
    if wanted == "record" and whole and exitstatus == pytest.ExitCode.OK:
        RECORD.write_text(json.dumps(ran) + "\n")
        recorded = ran
    elif wanted != "show" and whole and any(ran[marker] < recorded[marker] for marker in ran):
        session.exitstatus = exitstatus or pytest.ExitCode.TESTS_FAILED
    config.stash[COUNT_LINES] = count_lines(ran, recorded, whole=whole)


def count_lines(ran: dict[str, int], recorded: dict[str, int], *, whole: bool) -> list[str]:
    lines = []
    for marker, title in (("gui", "GUI"), ("opengl", "OpenGL")):
        line = f"{title} tests run: {ran[marker]} (recorded {recorded[marker]})"
        if not whole:
            line += ", not compared: only some tests were asked for"
        elif ran[marker] < recorded[marker]:
            line += f": {recorded[marker] - ran[marker]} TOO FEW, look for skipped or lost ones"
        lines.append(line)
    return lines


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter, config: pytest.Config) -> None:
    if HAS_QT:
        for line in config.stash.get(COUNT_LINES, []):
            terminalreporter.write_line(line)


# --- what each test finds and must leave -----------------------------------------------------------------------


@pytest.fixture(autouse=True)
def user_folders(tmp_path_factory: pytest.TempPathFactory, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Give the test a home of its own, so that it neither reads nor writes the real user's settings and files."""
    home = tmp_path_factory.mktemp("home")
    monkeypatch.setenv("HOME", str(home))
    for name in ("CONFIG", "DATA", "CACHE", "STATE", "RUNTIME"):
        folder = home / name.lower()
        folder.mkdir(mode=0o700)  # Qt refuses a runtime folder that others can read
        monkeypatch.setenv(f"XDG_{name}_{'DIR' if name == 'RUNTIME' else 'HOME'}", str(folder))
    if "PySide6.QtCore" in sys.modules:
        from PySide6.QtCore import QSettings

        # QSettings looks at the environment only once per process.
        for settings_format in (QSettings.Format.NativeFormat, QSettings.Format.IniFormat):
            QSettings.setPath(settings_format, QSettings.Scope.UserScope, str(home / "config"))
    return home


@pytest.fixture(autouse=True)
def nothing_left_behind(request: pytest.FixtureRequest) -> Iterator[None]:
    """Fail a GUI test that leaves a window, a running thread, pool work or a ticking timer to the next one."""
    if not HAS_QT or request.node.get_closest_marker("gui") is None:
        yield
        return
    windows_before = set(open_windows())
    threads_before = set(threading.enumerate())
    yield
    if leftovers(windows_before, threads_before):
        gc.collect()  # a cycle of Python objects may hold what the test let go of
    left = leftovers(windows_before, threads_before)
    clear(left)
    if left:
        pytest.fail("the test left behind: " + ", ".join(map(str, left)), pytrace=False)


def open_windows() -> dict[int, QObject]:
    """Return the top-level widgets by their address in C++: their Python faces come and go."""
    widgets = sys.modules.get("PySide6.QtWidgets")
    if widgets is None or widgets.QApplication.instance() is None:
        return {}
    import shiboken6
    from PySide6.QtCore import QCoreApplication, QEvent

    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete.value)
    QCoreApplication.processEvents()
    return {shiboken6.getCppPointer(window)[0]: window for window in widgets.QApplication.topLevelWidgets()}


def leftovers(windows_before: set[int], threads_before: set[threading.Thread]) -> list[object]:
    import shiboken6
    from PySide6.QtCore import QThread, QThreadPool, QTimer

    left: list[object] = [window for place, window in open_windows().items() if place not in windows_before]
    left += [thread for thread in threading.enumerate() if thread not in threads_before]
    pools = {QThreadPool.globalInstance()}
    for thing in gc.get_objects():
        if not isinstance(thing, (QTimer, QThread, QThreadPool)) or not shiboken6.isValid(thing):
            continue
        if isinstance(thing, QThreadPool):
            pools.add(thing)
        elif thing.isActive() if isinstance(thing, QTimer) else thing.isRunning():
            left.append(thing)
    return left + [pool for pool in pools if not pool.waitForDone(GRACE_MS)]


def clear(left: list[object]) -> None:
    """Put away what can be, so that only the test that left it is blamed."""
    from PySide6.QtCore import QThread, QTimer
    from PySide6.QtWidgets import QWidget

    for thing in left:
        if isinstance(thing, QTimer):
            thing.stop()
        elif isinstance(thing, QThread):
            thing.requestInterruption()
            thing.quit()
            thing.wait(GRACE_MS)
        elif isinstance(thing, QWidget):
            thing.close()
            thing.deleteLater()
