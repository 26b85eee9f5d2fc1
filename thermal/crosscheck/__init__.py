"""The solver held against closed solutions, a second engine and other integrators."""
