def solids() -> None:
    """x"""
