"""The thinking: one question, one module. Values in, values out; no text, no pictures."""
