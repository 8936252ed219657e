"""Panels to reviews: Γ, K′eq, ΔG′ and what may be said of them; pure functions on arrays."""
