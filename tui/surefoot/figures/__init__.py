"""Figures: data, a width, a height and a character set become lines of text. Pure, and without colour."""
