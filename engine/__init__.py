"""The arithmetic of gain structure: a library on its own, without Qt, that reads only the files it is given."""
