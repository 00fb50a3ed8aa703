"""What several commands need: a patch with its overrides, and where a player's files live."""

from __future__ import annotations

from pathlib import Path


def load_with(path: Path, settings: list[str] | None):
    """Return the patch at *path* with every "block.param=value" of *settings* applied.

    Raises
    ------
    PatchError
        With all faults of the file, or of the settings.
    ValueError
        If a setting has no "=".
    """
    from rtfx.patch import load
    from rtfx.patch.read import set_value

    patch = load(path)
    for setting in settings or ():
        target, equals, value = setting.partition("=")
        if not equals:
            raise ValueError(f"--set {setting}: wanted block.param=value, as --set tone.pitch=C5")
        patch = set_value(patch, target.strip(), value.strip())
    return patch


def takes_folder() -> Path:
    """Return where takes are kept: the platform's place for a user's data."""
    import platformdirs

    return Path(platformdirs.user_data_dir("rtfx")) / "takes"


def setup_file() -> Path:
    """Return the file that remembers this machine's devices."""
    import platformdirs

    return Path(platformdirs.user_config_dir("rtfx")) / "setup.toml"
