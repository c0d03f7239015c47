"""The window, the printed sheets and the command line of Gainwright."""
