"""The sections of the Case page: plain functions that put fields into a section."""
