//! Pure numerics, one method a file: interval arithmetic and what rests on it. Knows nothing of models.
