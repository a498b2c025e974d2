"""The screen and the command of Hexlipse. It computes nothing that an engineer would check."""
