"""How the invented sample tests are made: combustion, a test day at the analyzers, and the field workbook."""
