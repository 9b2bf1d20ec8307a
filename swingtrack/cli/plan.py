def plan() -> None:
    """x"""
