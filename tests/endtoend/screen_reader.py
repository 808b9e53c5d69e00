"""A screen reader's view of the programs on a session bus, by the AT-SPI 2 protocol that real ones speak."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any, Self

from jeepney import DBusAddress, DBusErrorResponse, MessageType, new_method_call
from jeepney.io.blocking import DBusConnection, open_dbus_connection

ACCESSIBLE, COMPONENT = "org.a11y.atspi.Accessible", "org.a11y.atspi.Component"
ROOT = ("org.a11y.atspi.Registry", "/org/a11y/atspi/accessible/root")
ON_SCREEN = 0  # of AT-SPI's coordinate types
FOCUSED_BIT, SHOWING_BIT = 12, 25  # of AT-SPI's states


@dataclass(frozen=True)
class Item:
    """One thing on screen as it is spoken: what it is, what it is called, what is said about it, and where it is."""

    role: str
    name: str
    description: str
    left: int
    top: int
    width: int
    height: int
    states: int

    @property
    def middle(self) -> tuple[int, int]:
        return self.left + self.width // 2, self.top + self.height // 2

    @property
    def showing(self) -> bool:
        """Whether it can be seen."""
        return bool(self.states >> SHOWING_BIT & 1)

    @property
    def focused(self) -> bool:
        """Whether keys go to it."""
        return bool(self.states >> FOCUSED_BIT & 1)


class ScreenReader:
    """Reads all programs on the accessibility bus that belongs to the session bus at `session`."""

    def __init__(self, session: str) -> None:
        with open_dbus_connection(session) as connection:
            service = DBusAddress("/org/a11y/bus", "org.a11y.Bus", "org.a11y.Bus")
            (address,) = _body(connection.send_and_get_reply(new_method_call(service, "GetAddress")))
        self._bus: DBusConnection = open_dbus_connection(address)
        self._ask(*ROOT, ACCESSIBLE, "GetChildren")  # wakes the registry, which programs look for when they start

    def __enter__(self) -> Self:
        return self

    def __exit__(self, *reason: object) -> None:
        self._bus.close()

    def items(self) -> list[Item]:
        """All that can be seen, in the order in which it would be walked through. What vanishes meanwhile is left
        out."""
        return list(self._under(*ROOT))

    def find(self, name: str, role: str = "") -> Item | None:
        """The first item that has this whole name and (if given) this role."""
        return next((item for item in self._under(*ROOT) if item.name == name and role in ("", item.role)), None)

    def says(self, part: str) -> bool:
        """Whether any item's name or description has `part` in it."""
        return any(part in item.name or part in item.description for item in self._under(*ROOT))

    def _under(self, program: str, path: str) -> Iterator[Item]:
        try:
            (children,) = self._ask(program, path, ACCESSIBLE, "GetChildren")
        except DBusErrorResponse:
            return
        for place in children:
            try:
                item = self._item(*place)
            except DBusErrorResponse:
                continue
            if item.showing or item.role == "application":
                yield item
                yield from self._under(*place)

    def _item(self, program: str, path: str) -> Item:
        (role,) = self._ask(program, path, ACCESSIBLE, "GetRoleName")
        try:
            (place,) = self._ask(program, path, COMPONENT, "GetExtents", "u", ON_SCREEN)
        except DBusErrorResponse:
            place = (0, 0, 0, 0)  # a program as such is nowhere
        ((low, high),) = self._ask(program, path, ACCESSIBLE, "GetState")
        texts = (self._property(program, path, name) for name in ("Name", "Description"))
        return Item(role, *texts, *place, states=high << 32 | low)

    def _property(self, program: str, path: str, name: str) -> str:
        body = self._ask(program, path, "org.freedesktop.DBus.Properties", "Get", "ss", ACCESSIBLE, name)
        return str(body[0][1])

    def _ask(self, program: str, path: str, interface: str, method: str, types: str = "", *values: object) -> Any:
        message = new_method_call(DBusAddress(path, program, interface), method, types or None, values)
        return _body(self._bus.send_and_get_reply(message))


def _body(reply: Any) -> Any:
    if reply.header.message_type is MessageType.error:
        raise DBusErrorResponse(reply)
    return reply.body
