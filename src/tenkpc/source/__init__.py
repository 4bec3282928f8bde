"""What the star emits: spectra, the parts of a burst, and bursts."""
