"""Surveys and their sites: setting up."""
