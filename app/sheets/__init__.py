"""The printed sheets: one family, drawn as vectors on any paged device. No widgets here.

A sheet is laid out as data first (`page.Page` holds what stands where, in points), so the number of pages is known
before the first one is painted.
"""
