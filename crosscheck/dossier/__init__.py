"""The dossier: what an engineer attaches to a stress report, as PDF and as a page."""
