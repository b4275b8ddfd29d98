"""Genotype tables, pedigrees, counts and sheets: reading, checking, summarising."""
