"""The measured side: band lists, coincidences, screening and assignment."""
