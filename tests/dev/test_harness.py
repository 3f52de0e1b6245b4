"""The harness in tests/conftest.py, tried on small suites of its own: it must catch what it promises to catch."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import pytest

pytest.importorskip("PySide6")
pytest_plugins = ["pytester"]

CONFTEST = Path(__file__).parents[1] / "conftest.py"
INI = """
[pytest]
addopts = --strict-markers -p no:hypothesispytest
testpaths = .
timeout = 60
qt_api = pyside6
qt_log_level_fail = WARNING
markers =
    gui: opens a widget
    opengl: draws with OpenGL
"""


@pytest.fixture
def suite(pytester: pytest.Pytester) -> pytest.Pytester:
    """Give an empty suite that stands on the real conftest.py and has two GUI tests on record."""
    shutil.copy(CONFTEST, pytester.path)
    pytester.makeini(INI)
    (pytester.path / "gui_count.json").write_text(json.dumps({"gui": 2, "opengl": 0}))
    return pytester


TWO_GUI_TESTS = """
    import pytest

    @pytest.mark.gui
    def test_marked():
        pass

    def test_not_marked_but_with_a_bot(qtbot):
        pass
"""


def test_a_skipped_gui_test_is_missed_in_the_count_and_fails_the_check(suite: pytest.Pytester) -> None:
    suite.makepyfile(TWO_GUI_TESTS.replace("pass", "pytest.skip('not today')", 1))
    result = suite.runpytest_subprocess("--gui-count=check")
    assert result.ret == pytest.ExitCode.TESTS_FAILED
    result.stdout.fnmatch_lines(["GUI tests run: 1 (recorded 2): 1 TOO FEW*"])
    # Without being asked to check, pytest reports the same number and leaves its verdict alone.
    assert suite.runpytest_subprocess().ret == pytest.ExitCode.OK


def test_a_part_of_the_suite_is_not_held_against_the_record_of_the_whole(suite: pytest.Pytester) -> None:
    suite.makepyfile(TWO_GUI_TESTS)
    result = suite.runpytest_subprocess("--gui-count=check", "-k", "not_marked")
    assert result.ret == pytest.ExitCode.OK
    result.stdout.fnmatch_lines(["GUI tests run: 1 (recorded 2), not compared*"])


def test_recording_writes_what_ran_unless_a_test_failed(suite: pytest.Pytester) -> None:
    suite.makepyfile(TWO_GUI_TESTS.replace("pass", "raise AssertionError", 1))
    suite.runpytest_subprocess("--gui-count=record")
    assert json.loads((suite.path / "gui_count.json").read_text()) == {"gui": 2, "opengl": 0}

    suite.makepyfile(TWO_GUI_TESTS + "    def test_third(qtbot): pass\n")
    assert suite.runpytest_subprocess("--gui-count=record").ret == pytest.ExitCode.OK
    assert json.loads((suite.path / "gui_count.json").read_text()) == {"gui": 3, "opengl": 0}


LEFTOVERS = """
import threading, time
import pytest
from PySide6.QtCore import QThread, QThreadPool, QTimer
from PySide6.QtWidgets import QWidget

kept = []

def test_leaves_a_window(qtbot):
    kept.append(QWidget())
    kept[-1].show()

def test_leaves_a_timer(qtbot):
    kept.append(QTimer())
    kept[-1].start(1000)

def test_leaves_a_thread(qtbot):
    kept.append(QThread())
    kept[-1].start()

def test_leaves_a_python_thread(qtbot):
    kept.append(threading.Thread(target=time.sleep, args=(0.5,)))
    kept[-1].start()

def test_leaves_pool_work(qtbot):
    QThreadPool.globalInstance().start(lambda: time.sleep(0.5))

def test_tidy(qtbot):
    QThreadPool.globalInstance().waitForDone()
    window = QWidget()
    qtbot.addWidget(window)
    window.show()
    timer = QTimer(window)
    timer.start(1000)
    thread = QThread()
    thread.start()
    thread.quit()
    thread.wait()

def test_lets_go_of_a_cycle(qtbot):
    window = QWidget()
    window.itself = window
    window.timer = QTimer()
    window.timer.start(1000)
"""


def test_every_kind_of_leftover_fails_the_test_that_left_it_and_no_other(suite: pytest.Pytester) -> None:
    suite.makepyfile(LEFTOVERS)
    result = suite.runpytest_subprocess()
    result.assert_outcomes(passed=7, errors=5)
    for what in ("a_window", "a_timer", "a_thread", "a_python_thread", "pool_work"):
        result.stdout.fnmatch_lines_random([f"ERROR *::test_leaves_{what}*"])
    assert sum(line.startswith("the test left behind: ") for line in result.stdout.lines) == 5


def test_a_warning_from_qt_fails_the_test(suite: pytest.Pytester) -> None:
    suite.makepyfile(
        """
        from PySide6.QtCore import QObject

        def test_warns(qtbot):
            QObject().startTimer(-1)
        """
    )
    suite.runpytest_subprocess().assert_outcomes(failed=1)


def test_a_dialogue_that_nobody_closes_does_not_hang_the_run(suite: pytest.Pytester) -> None:
    suite.makepyfile(
        """
        from PySide6.QtWidgets import QDialog

        def test_hangs(qtbot):
            QDialog().exec()
        """
    )
    result = suite.runpytest_subprocess("-o", "timeout=2", timeout=60)
    assert result.ret != pytest.ExitCode.OK
    assert "Timeout" in result.stdout.str() + result.stderr.str()


def test_no_test_sees_the_real_home(user_folders: Path, tmp_path: Path) -> None:
    import platformdirs
    from PySide6.QtCore import QSettings, QStandardPaths

    assert list(tmp_path.iterdir()) == []
    assert Path.home() == user_folders
    for folder in (
        platformdirs.user_data_dir("masswright"),
        platformdirs.user_state_dir("masswright"),
        QStandardPaths.writableLocation(QStandardPaths.StandardLocation.CacheLocation),
        QSettings("masswright", "masswright").fileName(),
    ):
        assert Path(folder).is_relative_to(user_folders)
