"""Numbers from regions: numpy only, no DXF and no PDF."""
