"""Results for people and programs: the report workbook, charts, json, csv and the terminal."""
