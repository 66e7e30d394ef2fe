"""Where the desk is kept: the data folder of the user on this platform."""

import os
import sys
from collections.abc import Mapping
from pathlib import Path

from app import NAME


def data_folder(platform: str = sys.platform, environment: Mapping[str, str] = os.environ) -> Path:
    """The folder for this program's data, not created.

    Windows: LOCALAPPDATA; macOS: ~/Library/Application Support; elsewhere XDG_DATA_HOME, by default
    ~/.local/share.  A relative XDG_DATA_HOME is ignored, as the XDG base directory specification asks.
    """
    home = Path(environment.get("HOME") or environment.get("USERPROFILE") or Path.home())
    if platform == "win32":
        return Path(environment.get("LOCALAPPDATA") or home / "AppData" / "Local") / NAME
    if platform == "darwin":
        return home / "Library" / "Application Support" / NAME
    chosen = environment.get("XDG_DATA_HOME", "")
    return (Path(chosen) if os.path.isabs(chosen) else home / ".local" / "share") / NAME
