"""The people: body sizes and strengths of a population's virtual operators."""
