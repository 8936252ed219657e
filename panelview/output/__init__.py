"""Reviews to tables, figures and pages."""
