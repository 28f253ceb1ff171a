"""Pictures of a shed as PNG and SVG bytes, drawn with numpy alone: no screen, browser or graphics card."""
