"""Motor constants and their bases, torque-speed envelope, thermal bodies, drive and DC link."""
