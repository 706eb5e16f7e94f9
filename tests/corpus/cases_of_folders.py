"""Cases of whole folders (to come)."""


def readme() -> str:
    return ""
