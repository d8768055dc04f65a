"""Component kinds: what each is to the network, one module for each table of the workbook."""
