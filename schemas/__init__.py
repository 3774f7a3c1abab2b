"""What the caller sends and gets: quantities, units, samples, results and problems, without a word of the service."""
