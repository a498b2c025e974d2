"""The calculation of Hexlipse: projects, margins, files. It never imports the screen."""
