"""What a reviewer would say: one module a topic, one function a question."""
