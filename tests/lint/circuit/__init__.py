"""What a netlist means: kinds, controllers, potentials, and the networks that are solved."""
