"""The block: from a mesh file or a shape to named volumes, materials, attachments and masses."""
