"""What the machine does when the drive is gone, at every crank angle: it unwinds, stays, or runs on."""
