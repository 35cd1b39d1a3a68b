"""The one exception of the library: bad input or an impossible request, told in one line."""


class VibsymError(Exception):
    """Something the user can mend; the message names the thing, the value and the next step."""
