def combine() -> None:
    """x"""
