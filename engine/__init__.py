"""The arithmetic of gain structure: a library on its own, without Qt, reading only the files it is given."""
