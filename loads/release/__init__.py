"""The release: what happens from the moment the link lifts off its stop until the chain holds everything again."""
