"""How the fields of the public records are described."""


def about(text: str) -> object:
    """Give a description for the JSON Schema; annotations are evaluated when that is made."""
    from pydantic import Field

    return Field(description=text)
