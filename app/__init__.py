"""The studio: what a person sees and touches. It imports `solver`; nothing there imports this."""
