"""Laws of parts as plain functions of SI arrays: wire, coils, cores, capacitor zones, heat. Knows no circuits."""
