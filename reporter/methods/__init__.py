"""Published methods: one file per method, one function per printed equation, tables as data with their source."""
