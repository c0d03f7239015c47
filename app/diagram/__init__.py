"""The level diagram: what stands where (no Qt), and one painter for window, PNG, SVG, PDF and printer."""
