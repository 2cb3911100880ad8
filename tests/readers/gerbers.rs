//! Gerber and drill files through gerber_parser and a plain reader of XNC: areas, extents, nets, pads and the hole table.
