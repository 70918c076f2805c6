"""The state words of the package. Every screen, sheet and file takes them from here."""

from enum import StrEnum


class Verdict(StrEnum):
    """Headline of a design."""

    FLEXIBLE = "Flexible enough"
    STIFF = "Too stiff"
    NO_ROOM = "No room"
    UNKNOWN = "Cannot say"


class Judgement(StrEnum):
    """State of one check."""

    HOLDS = "holds"
    EXCEEDED = "exceeded"
    NOT_JUDGED = "not judged"


class Standing(StrEnum):
    """State of a method for a design."""

    INSIDE = "inside its limits"
    OUTSIDE = "outside its limits"


class State(StrEnum):
    """States of the line, and the two ways between them."""

    INSTALLED = "installed"
    COLDEST = "coldest"
    HOTTEST = "hottest"
    WATER_TEST = "water test"
    EMPTY = "empty"
    HEATING = "heating up"
    COOLING = "cooling down"


class Origin(StrEnum):
    """Where a value comes from."""

    READ = "read"
    MEMORY = "from memory, confirm"
    USER = "user table"
    DEMO = "demo value"
    GIVEN = "given"
    DEFAULT = "default, common practice"


class Concern(StrEnum):
    """What a check is about: it decides the verdict's word."""

    STRESS = "stress"
    REACTION = "reaction"
    ROOM = "room"
    SHOE = "shoe"
