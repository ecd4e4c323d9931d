"""The ground floor: faults, units, notation, the kernel decorator."""
