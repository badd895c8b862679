"""Plots: figures of scans, onsets and trains, for the page and the screen."""
