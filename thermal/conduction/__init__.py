"""Heat in the section: finite volumes in space, enthalpy as the state, one linear step in time."""
