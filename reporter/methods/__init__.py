"""Published methods: one file per method, one function per printed equation; tables are data files."""
