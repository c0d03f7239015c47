"""What stages share: section types, filters, converters, dynamics, two-ports, attenuator laws."""
