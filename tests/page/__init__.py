"""Report pages."""
