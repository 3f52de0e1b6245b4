"""The Torque page: what is entered about the drive, and what it asks of it."""
