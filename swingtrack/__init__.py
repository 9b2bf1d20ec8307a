"""Moment of inertia, period and damping of a hanging article from a clip of its swing."""
