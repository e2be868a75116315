"""DXF in and out. The only place that imports ezdxf."""
