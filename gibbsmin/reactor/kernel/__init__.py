"""Loops over the states of a stage, written for the compiler; they also run as they stand."""
