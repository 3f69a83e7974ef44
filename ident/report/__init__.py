"""Answers as text, JSON Lines and CSV. Nothing is worked out here, and everything from outside is escaped."""

from __future__ import annotations
