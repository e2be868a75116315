"""Curves → chains → loops → regions with voids. The only place that imports shapely."""
