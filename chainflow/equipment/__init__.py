"""Every kind of equipment: frozen settings and one verb, streams in, streams out."""
