"""Temporary bridge."""

from ..records import Frame
from .planes import view_planes, is_direct


def frame_of(picture, index, t_s):
    p = view_planes(picture)
    return Frame(index, t_s, p.luma, p.chroma_u, p.chroma_v, p.depth), not is_direct(picture.format.name)
