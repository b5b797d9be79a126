"""A request that is refused for a reason that its user can mend."""

from __future__ import annotations

from lsprotocol import types
from pygls.exceptions import JsonRpcException


class Refusal(JsonRpcException):
    """The client shows its sentence; it is no defect, and is not logged as one."""

    CODE = types.LSPErrorCodes.RequestFailed.value
