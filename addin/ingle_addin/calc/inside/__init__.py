"""What runs inside the office, in the office's own Python: the standard library only, for Python 3.8 and newer.

The builder packs these files into the extension under a package name of their own.
"""
