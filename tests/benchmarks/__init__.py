"""Benchmarks: run a script of this folder to print its table."""
