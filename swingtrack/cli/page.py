def page() -> None:
    """x"""
