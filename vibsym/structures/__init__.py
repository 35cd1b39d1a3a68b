"""Structures: reading them, finding their point group and the frame of its axes. No vibrations."""
