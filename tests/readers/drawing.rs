//! DXF files through the dxf crate.
