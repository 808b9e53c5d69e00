"""Which change of process helps: remedies for neutral aims."""

from deliberate.rehearsal.remedies.aims import AIMS, IN_WORDS, Aim
from deliberate.rehearsal.remedies.search import Remedy, aims_here, best_for_each_aim, remedies

__all__ = ["AIMS", "IN_WORDS", "Aim", "Remedy", "aims_here", "best_for_each_aim", "remedies"]
