"""The canvas: shows the picture, follows the session, and hands mouse, keys and commands to those who know them."""

from __future__ import annotations

import html

import numpy as np
from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt, QTimer, Signal
from PySide6.QtGui import (
    QContextMenuEvent,
    QFocusEvent,
    QFontMetricsF,
    QHelpEvent,
    QKeyEvent,
    QMouseEvent,
    QNativeGestureEvent,
    QPainter,
    QPaintEvent,
    QResizeEvent,
    QShowEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QToolTip, QWidget

from deliberate.window.canvas import accessible, overlays
from deliberate.window.canvas.choosing import Choosing
from deliberate.window.canvas.commands import Commands
from deliberate.window.canvas.editors import Editors
from deliberate.window.canvas.follow import Follower
from deliberate.window.canvas.glide import Glide
from deliberate.window.canvas.keys import Keys
from deliberate.window.canvas.picture import Floats, Hit, Picture
from deliberate.window.canvas.tools import Mouse
from deliberate.window.canvas.viewport import ZOOM_STEP, Viewport
from deliberate.window.session import Session
from deliberate.window.theme import Look

LEAST_LEGEND = 190  # pixels beside the colour scale: in less the scale is left out
REST_MS = 120  # after the last movement the picture is painted fine


class Canvas(QWidget):
    """People, arrows and listening rings of the shown variant, and their editing in place."""

    hint_changed = Signal(str)  # the sentence at the foot
    zoom_changed = Signal(float)
    choosing_changed = Signal(bool)

    def __init__(self, session: Session, look: Look, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.session, self.look = session, look
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.setAccessibleName("Picture of the committee")
        accessible.install(Canvas)
        self.items: accessible.AccessibleCanvas | None = None  # once somebody asks for it
        self.follows_size = True
        self.scale = 1.0  # pixels of the widget to one of the picture
        self._hint = ""
        self.follow = Follower(self, session)
        self.picture = Picture(self.follow.first_scene, look.theme)
        self.picture.font = self.font()
        self._rest = QTimer(self, singleShot=True, interval=REST_MS)
        self._rest.timeout.connect(self.update)
        self._glide = Glide(self)
        self.editors, self.commands = Editors(self), Commands(self)
        self.mouse, self.keys, self.choosing = Mouse(self), Keys(self), Choosing(self)
        look.changed.connect(self._dress)
        self.follow.begin()

    # Commands for menus

    def add_person(self) -> None:
        """Put an editor for a new person's name on free ground."""
        self.commands.add_person()

    def rename_selected(self) -> None:
        """Edit the selected person's name in place."""
        self.commands.rename_selected()

    def delete_selected(self) -> None:
        """Remove the selected people and arrows."""
        self.commands.delete_selected()

    def select_all(self) -> None:
        """Select all people."""
        self.commands.select_all()

    def cut(self) -> None:
        """Copy the selected people, then remove them."""
        self.commands.cut()

    def copy(self) -> None:
        """Put the selected people and the arrows among them on the clipboard."""
        self.commands.copy()

    def paste(self) -> None:
        """Add the people on the clipboard."""
        self.commands.paste()

    def duplicate(self) -> None:
        """Add copies of the selected people."""
        self.commands.duplicate()

    def turn_round(self) -> None:
        """Turn the selected arrows round."""
        self.commands.turn_round()

    def arrange(self, kind: str) -> None:
        """Place everybody anew: "circle", "groups", "hearing" or "grid"; one undoable step."""
        before = self.picture.scene.places
        if self.commands.arrange(kind):
            self.fit()
            self._glide.begin(before)

    def begin_choosing(self, stage: int) -> None:
        """Let tables, speakers or pairs of a stage be chosen on the picture."""
        self.choosing.begin(stage)

    def end_choosing(self) -> None:
        """Back to drawing."""
        self.choosing.end()

    def zoom_in(self) -> None:
        """Nearer, around the middle."""
        self.zoom_around(ZOOM_STEP, QPointF(self.width() / 2, self.height() / 2))

    def zoom_out(self) -> None:
        """Farther, around the middle."""
        self.zoom_around(1 / ZOOM_STEP, QPointF(self.width() / 2, self.height() / 2))

    def fit(self) -> None:
        """Show everybody, and keep doing so when the window changes its size."""
        self.follows_size = True
        self.picture.fit()
        self._view_changed()

    def set_flow(self, flow: bool) -> None:
        """Let arrows show the way beliefs travel instead of pointing at the person listened to."""
        self.picture.flow = flow
        self.picture.touch()
        self.update()

    def show_leverage(self, strengths: Floats | None, note: str = "") -> None:
        """Draw arrows as thick as what ten points more for each would move the mean, in the order of the variant's.

        With None they are as thick as their shares, and `note` says why in the legend. A change of
        the meeting brings the shares back.
        """
        self.picture.weigh_arrows(strengths, note)
        self.refresh_hint()
        self.update()

    def accept_typing(self) -> None:
        """Take what is typed in the editor on the picture."""
        self.editors.accept()

    def cancel_typing(self) -> None:
        """Leave the editor on the picture, with everything as it was."""
        self.editors.cancel()

    def stop_moving(self) -> None:
        """End what is under way: the picture is another one."""
        self.mouse.forget()
        self._glide.stop()

    def forget_items(self) -> None:
        """People and arrows are others now, for screen readers too."""
        if self.items is not None:
            self.items.forget()

    # The view

    def zoom_around(self, factor: float, at: QPointF) -> None:
        """Zoom with what is at a pixel staying there."""
        self.follows_size = False
        self.picture.look_at(self.picture.view.zoomed(factor, at.x(), at.y(), self.picture.scene.radius))
        self._view_changed()

    def pan(self, dx: float, dy: float) -> None:
        """Move the picture by pixels."""
        self.follows_size = False
        self.picture.look_at(self.picture.view.moved(dx, dy))
        self._view_changed()

    def view(self) -> Viewport:
        """The present zoom and place."""
        return self.picture.view

    def to_scene(self, at: QPointF) -> Floats:
        """A pixel in scene units."""
        return self.picture.view.to_scene(np.array([at.x(), at.y()]))

    def stir(self) -> None:
        """Something moves: paint coarse where that is needed, and fine a moment after the last time."""
        self._rest.start()
        self.update()

    def _view_changed(self) -> None:
        self.editors.follow()
        self.zoom_changed.emit(self.picture.view.zoom)
        self.stir()

    def _dress(self) -> None:
        self.picture.theme = self.look.theme
        self.picture.touch()
        self.stir()

    # What is said

    def hit(self, at: QPointF) -> Hit:
        """What is at a pixel."""
        return self.picture.hit(at.x(), at.y())

    def sentence(self, hit: Hit | None) -> str:
        """A person or an arrow in words."""
        scene = self.picture.scene
        if hit is None or hit.index < 0:
            return ""
        if hit.kind == "arrow":
            counting = self.picture.look().dashed[hit.index]
            return scene.sentence(hit.index) + (", does not count in this stage" if counting else "")
        return scene.about(hit.index, float(self.follow.beliefs()[hit.index]))

    def refresh_hint(self) -> None:
        """Say again what is pointed at, focused or selected, or what to do."""
        marks = self.picture.emphasis
        text = self.editors.hint() or self.mouse.hint() or self.keys.hint()
        text = text or self.sentence(marks.hover) or self.sentence(marks.focus)
        if not text and len(marks.arrows) == 1 and not marks.people:
            text = self.sentence(Hit("arrow", next(iter(marks.arrows))))
        if text != self._hint:
            self._hint = text
            self.hint_changed.emit(text)
            self.update()

    # Qt's events

    def sizeHint(self) -> QSize:
        return QSize(620, 560)

    def minimumSizeHint(self) -> QSize:
        return QSize(160, 160)

    def paintEvent(self, event: QPaintEvent) -> None:
        del event
        picture, player = self.picture, self.session.player
        if picture.ratio != self.devicePixelRatioF():
            picture.resize(self.width(), self.height(), self.devicePixelRatioF())
        position = player.position
        whole = abs(position - round(position)) < 1e-9
        resting = not self._rest.isActive() and picture.moving is None
        with QPainter(self) as painter:
            painter.scale(self.scale, self.scale)
            painter.setFont(self.font())
            picture.paint(painter, self.follow.beliefs(), gliding=not whole, at_start=position < 0.5, resting=resting)
            self.choosing.paint(painter)
            self.mouse.paint(painter)
            painter.setFont(self.font())
            self._paint_words(painter)

    def _paint_words(self, painter: QPainter) -> None:
        theme, question, picture = self.look.theme, self.session.question, self.picture
        if self.choosing.stage is None:
            room = overlays.scale_width(QFontMetricsF(self.font()), question)
            with_scale = bool(picture.scene.ids) and self.width() > room + LEAST_LEGEND
            overlays.paint_legend(painter, self.width(), picture.legend(), theme, room if with_scale else 0.0)
            if with_scale:
                overlays.paint_scale(painter, self.width(), question, theme)
        overlays.paint_foot(painter, self.width(), self.height(), self._hint, theme)
        if not picture.scene.ids and not self.editors.open_for_name:
            overlays.paint_empty(painter, QRectF(0, 0, self.width(), self.height()), theme)
        if self.hasFocus() and self.keys.shows_focus:
            overlays.paint_edge(painter, self.rect(), theme)

    def resizeEvent(self, event: QResizeEvent) -> None:
        self.picture.resize(self.width(), self.height(), self.devicePixelRatioF())
        if self.follows_size:
            self.picture.fit()
        self.choosing.lay_out()
        self._view_changed()
        super().resizeEvent(event)

    def showEvent(self, event: QShowEvent) -> None:
        self._rest.stop()
        super().showEvent(event)

    def changeEvent(self, event: QEvent) -> None:
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.ApplicationFontChange) and hasattr(self, "picture"):
            self.picture.font = self.font()
            self.picture.touch(names=True)
            self.update()
        super().changeEvent(event)

    def event(self, event: QEvent) -> bool:
        if isinstance(event, QHelpEvent) and event.type() == QEvent.Type.ToolTip:
            text = self.sentence(self.hit(QPointF(event.pos())))
            if text:
                QToolTip.showText(event.globalPos(), f"<span>{html.escape(text)}</span>", self)
            else:
                QToolTip.hideText()
            return True
        if isinstance(event, QNativeGestureEvent) and event.gestureType() == Qt.NativeGestureType.ZoomNativeGesture:
            self.zoom_around(1 + event.value(), event.position())
            return True
        return super().event(event)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        self.mouse.press(event)

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        self.mouse.move(event)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        self.mouse.release(event)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        self.mouse.double_click(event)

    def wheelEvent(self, event: QWheelEvent) -> None:
        self.mouse.wheel(event)

    def leaveEvent(self, event: QEvent) -> None:
        self.mouse.leave()
        super().leaveEvent(event)

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        # The mouse's own menu opens at release, because dragging with the right button pans.
        if event.reason() != QContextMenuEvent.Reason.Mouse:
            self.commands.show_menu(self.keys.menu_place())
        event.accept()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if not self.keys.press(event):
            super().keyPressEvent(event)

    def focusNextPrevChild(self, forward: bool) -> bool:
        return self.keys.tab(forward) or super().focusNextPrevChild(forward)

    def focusInEvent(self, event: QFocusEvent) -> None:
        self.keys.focus_in(event.reason())
        super().focusInEvent(event)

    def focusOutEvent(self, event: QFocusEvent) -> None:
        self.keys.focus_out()
        super().focusOutEvent(event)
