"""Values with units: numbers, SI prefixes, value codes, ranges and tolerances, from text and back to text."""
