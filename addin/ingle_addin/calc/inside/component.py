"""The services that the office loads: the worksheet functions, and the commands of the menu.

Standard library only; every method of a function hands its arguments to the worker as they came.
"""

from __future__ import annotations

import json
import os
from typing import Any

import uno
import unohelper
from com.sun.star.frame import XDispatchProvider, XNotifyingDispatch
from com.sun.star.lang import XInitialization, XServiceInfo

from ingle_addin.calc.inside.client import Client, WorkerError
from ingle_addin.calc.inside.commands import carry_out
from ingle_addin.calc.inside.errors import FAILED, error_value
from ingle_addin.calc.inside.sheets import WHOLE, whole_columns

with open(os.path.join(os.path.dirname(os.path.dirname(__file__)), "ingle.json"), encoding="utf-8") as file:
    SETTINGS = json.load(file)
CLIENT = Client(SETTINGS["command"], SETTINGS["seconds"])
_NO_ANSWER = ((error_value("#N/A"),),)
_REFUSED = ((error_value("#VALUE!"),),)
_TOO_MANY = "There are too many value arguments for an answer of several cells; pass one range of several columns"
_LONGEST = 255


def _answered(context: Any, name: str, args: tuple[Any, ...], rest: bool = False) -> Any:
    """The worker's rows for a call; where there are none, an error, and the reason from INGLE.WHY.

    ``rest`` is whether arguments fell into the last parameter: in an array formula Calc then calls cell by cell and keeps
    the first value of each answer, so that an answer of more cells is refused.
    """
    whole, cells = False, 0
    for arg in args:
        if type(arg) is tuple:
            if len(arg) >= WHOLE:
                whole, args = whole_columns(context, name, args)
                break
            cells += len(arg)
    try:
        answer = CLIENT.ask((name, args, whole), cells)
    except WorkerError as error:
        answer, failed = str(error), _NO_ANSWER
    except Exception as error:  # whatever it is, a cell shows an error of ours and a reason
        answer, failed = FAILED.format(type(error).__name__, error), _REFUSED
    else:
        if type(answer) is tuple and not (rest and (len(answer) > 1 or len(answer[0]) > 1)):
            return answer
        answer, failed = answer if type(answer) is str else _TOO_MANY, _REFUSED
    return ((answer[:_LONGEST],),) if name == "INGLE.WHY" else failed


def _method(name: str, repeats: bool) -> Any:
    if not repeats:
        return lambda self, *args: _answered(self.context, name, args)

    def method(self: Any, *args: Any) -> Any:
        rest = args[-1]
        if rest:
            return _answered(self.context, name, args[:-1] + tuple(rest), True)
        count = len(args) - 1
        while count and args[count - 1] is None:  # left out at the end
            count -= 1
        return _answered(self.context, name, args[:count])

    return method


class _Service(unohelper.Base, XServiceInfo):  # type: ignore[misc]
    implementation = ""
    service = ""

    def getImplementationName(self) -> str:
        return self.implementation

    def supportsService(self, name: str) -> bool:
        return name == self.service

    def getSupportedServiceNames(self) -> tuple[str, ...]:
        return (self.service,)


class Functions(_Service, uno.getClass(SETTINGS["interface"])):  # type: ignore[misc]
    """The worksheet functions; one method each, put in below from the extension's table."""

    implementation = service = SETTINGS["service"]

    def __init__(self, context: Any) -> None:
        self.context = context


for _each in SETTINGS["functions"]:
    setattr(Functions, _each["method"], _method(_each["name"], _each["repeats"]))


class Commands(_Service, XInitialization, XDispatchProvider, XNotifyingDispatch):  # type: ignore[misc]
    """The commands of the menu, carried out on the document of one window."""

    implementation = SETTINGS["handler"]
    service = "com.sun.star.frame.ProtocolHandler"

    def __init__(self, context: Any, *args: Any) -> None:
        self.context = context
        self.frame = args[0] if args else None

    def initialize(self, args: tuple[Any, ...]) -> None:
        """Take the window."""
        self.frame = args[0] if args else self.frame

    def queryDispatch(self, url: Any, target: str, flags: int) -> Any:  # noqa: ARG002
        """Who carries out a command: we do, if it is one of ours."""
        return self if url.Protocol == SETTINGS["protocol"] else None

    def queryDispatches(self, requests: tuple[Any, ...]) -> tuple[Any, ...]:
        """The same for many."""
        return tuple(self.queryDispatch(each.FeatureURL, each.FrameName, each.SearchFlags) for each in requests)

    def addStatusListener(self, listener: Any, url: Any) -> None:
        """Our commands have no state to tell of."""

    def removeStatusListener(self, listener: Any, url: Any) -> None:
        """There is none to remove."""

    def dispatch(self, url: Any, args: tuple[Any, ...]) -> None:
        """Carry out a command."""
        carry_out(self.context, self.frame, CLIENT, SETTINGS, url.Complete, args)

    def dispatchWithNotification(self, url: Any, args: tuple[Any, ...], listener: Any) -> None:
        """Carry out a command and hand what it says to the listener."""
        said = carry_out(self.context, self.frame, CLIENT, SETTINGS, url.Complete, args)
        if listener is not None:
            event = uno.createUnoStruct("com.sun.star.frame.DispatchResultEvent")
            event.Source, event.State, event.Result = self, 1, said
            listener.dispatchFinished(event)


g_ImplementationHelper = unohelper.ImplementationHelper()  # noqa: N816 - the name that the office looks for
for _class in (Functions, Commands):
    g_ImplementationHelper.addImplementation(_class, _class.implementation, (_class.service,))
