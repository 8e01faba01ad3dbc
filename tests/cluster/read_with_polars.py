import polars as pl
orbitals = pl.read_parquet("labels.parquet")
print(orbitals.group_by("point_group", "irrep").len().sort("len", "point_group", "irrep", descending=[True, False, False]).head(4))
