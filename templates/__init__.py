"""Starter designs, and the templates of the documents."""
