"""The version of the program, in one place without reading package metadata."""

VERSION = "0.1.0"
