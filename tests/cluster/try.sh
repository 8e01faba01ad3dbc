#!/usr/bin/env bash
# Runs the examples for real and compares: an array of four Slurm shards and a Snakemake workflow must give the bytes of
# one run without shards; then the result is read. try.sh FOLDER, with `orbsieve` (built with Parquet) on the PATH; needs root,
# Debian's slurm-wlm and munge, and from Python snakemake, duckdb and polars. FOLDER must not be there yet.
set -euo pipefail

here=$(dirname "$(realpath "$0")")
mkdir "$1"
cd "$1"

# The fixtures of this repository as runs, one of them cut short.
ln -s "$here/../molecules" runs
ls runs/{nwchem,psi3,openmolcas}_*.molden > files.list
echo "\$ wc -l < files.list"
wc -l < files.list
echo "\$ orbsieve batch --files-from files.list --output whole.jsonl"
orbsieve batch --files-from files.list --output whole.jsonl 2>&1 || echo "exit status $?"

"$here/one-node-slurm.sh" start "$PWD/slurm" > /dev/null
trap "'$here/one-node-slurm.sh' stop '$PWD/slurm'" EXIT
export SLURM_CONF=$PWD/slurm/slurm.conf
echo "\$ sinfo"
sinfo
echo "\$ submit.sh files.list 4"
merge=$("$here/submit.sh" files.list 4)
echo "$merge"
echo "\$ squeue --format='%i %j %T %E'"
squeue --format='%i %j %T %E'
while squeue --noheader --job "$merge" 2> /dev/null | grep -q .; do sleep 0.5; done
echo "\$ tail -n +1 logs/*"
tail -n +1 logs/*
echo "\$ cmp labels.jsonl whole.jsonl && echo same"
cmp labels.jsonl whole.jsonl && echo same

mkdir workflow
cd workflow
ln -s ../runs ../files.list .
echo "\$ snakemake --snakefile Snakefile --cores 2 --config list=files.list shards=4"
snakemake --snakefile "$here/Snakefile" --cores 2 --config list=files.list shards=4 --quiet all 2>&1
echo "\$ cmp labels.jsonl ../whole.jsonl && echo same"
cmp labels.jsonl ../whole.jsonl && echo same

cd ..
echo "\$ orbsieve batch --merge labels.jsonl --format parquet --output labels.parquet --quiet"
orbsieve batch --merge labels.jsonl --format parquet --output labels.parquet --quiet || echo "exit status $?"
echo "\$ python read_with_duckdb.py"
python3 "$here/read_with_duckdb.py"
echo "\$ python read_with_polars.py"
python3 "$here/read_with_polars.py"
