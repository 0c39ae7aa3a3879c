"""Parts of the flow curve stop: ranking, pictures, choice of the model, what to measure next."""
