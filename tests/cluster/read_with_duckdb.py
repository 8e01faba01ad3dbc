import duckdb
duckdb.sql("select geometry.point_group, count(*) as files from 'labels.jsonl' group by all order by files desc, 1 limit 4").show()
duckdb.sql("select file, label, energy_hartree from 'labels.parquet' where occupation = 0 and spin = 'alpha' qualify row_number() over (partition by file order by energy_hartree) = 1 order by energy_hartree limit 4").show()
