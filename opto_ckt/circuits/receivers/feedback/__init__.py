"""What receivers share whose op amp closes a resistive feedback loop around the detector: R1, C1, levels, faults."""
