"""Pictures of one spec, drawn from the engine's own numbers: one module each, and their tools."""
