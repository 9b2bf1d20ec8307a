"""The local web page: drop a clip in, read the number. It holds no physics; it calls `measure.py`."""
