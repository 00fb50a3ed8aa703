"""What can go wrong at the doors to the outside.

DeviceError           the message says what, and the way out
  DeviceGone          the device or its server is not there now; it may come back
"""


class DeviceError(Exception):
    """A device cannot be used as asked for."""


class DeviceGone(DeviceError):
    """The device is not there at present."""
