"""Sub-commands, one file each: ``add`` declares arguments, ``run`` works and returns the status."""
