"""Multiparameter equations of state explicit in the Helmholtz energy, one file a term form."""
