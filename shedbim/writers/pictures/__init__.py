"""Pictures of a shed as PNG bytes, drawn with numpy alone: no screen, browser or graphics card."""
