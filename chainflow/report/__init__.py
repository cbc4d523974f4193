"""What people and programs get to see: the document, tables and the printed answer."""
