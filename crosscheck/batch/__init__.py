"""Many points in worker processes or on a cluster, one journal line each; nothing here knows of sections."""
