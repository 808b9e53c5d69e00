"""The projector view: the picture, the round bar and one sentence, large enough for the back of a room."""

from deliberate.window.projector.choice import ProjectorChoice
from deliberate.window.projector.view import ProjectorView

__all__ = ["ProjectorChoice", "ProjectorView"]
