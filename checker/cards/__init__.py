"""Device cards: what data sheets say of common parts, and a model fitted to each."""
