"""Ingle in LibreOffice Calc: the extension, what it runs (``inside``), the worker behind it, its installation and check."""
