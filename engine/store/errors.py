"""What is refused."""


class StoreError(ValueError):
    """Why a text is no project this program can open, or a project no text. The message names the place."""
