"""What is written: JSON, workbook, PDF; each from the same outcome."""
