"""Where the data folder lies."""

from pathlib import Path

from app.desk.folder import data_folder


def test_linux():
    assert data_folder("linux", {"HOME": "/home/x"}) == Path("/home/x/.local/share/polewright")
    assert data_folder("linux", {"HOME": "/home/x", "XDG_DATA_HOME": "/data"}) == Path("/data/polewright")


def test_a_relative_xdg_folder_is_ignored():
    assert data_folder("linux", {"HOME": "/home/x", "XDG_DATA_HOME": "data"}) == Path("/home/x/.local/share/polewright")


def test_mac():
    assert data_folder("darwin", {"HOME": "/Users/x"}) == Path("/Users/x/Library/Application Support/polewright")


def test_windows():
    assert data_folder("win32", {"LOCALAPPDATA": "/local"}) == Path("/local/polewright")
    assert data_folder("win32", {"USERPROFILE": "/u"}) == Path("/u/AppData/Local/polewright")
