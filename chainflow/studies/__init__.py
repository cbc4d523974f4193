"""Many solves, or many questions to one: sensitivities, reasons, comparisons."""
