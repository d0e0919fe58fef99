"""Surveys, their sites, and a survey that comes as a folder of files."""
