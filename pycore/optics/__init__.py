"""Physics on plain values; knows no shop, no order and no standard."""
