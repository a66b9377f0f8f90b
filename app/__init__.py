"""The studio: what a person sees and touches. Everything here may import `solver`; nothing there imports this."""
