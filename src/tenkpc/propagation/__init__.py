"""What happens to neutrinos on their way from the core of the star to the detector."""
