#!/usr/bin/env bash
# Labels the files of a list in N shards as a Slurm job array, then merges: submit.sh LIST N
# `orbsieve` must be on the PATH of the nodes; run it in the folder that shall hold the result.
set -euo pipefail

here=$(dirname "$(realpath "$0")")
list=$1
shards=$2

mkdir -p logs
for i in $(seq "$shards"); do printf 'shards/%04d.jsonl\n' "$i"; done > shards.list
array=$(sbatch --parsable --array="1-$shards" "$here/label.sbatch" "$list")
# afterany, not afterok: a task whose files did not all get labels ends with status 3 or 4, its shard is whole nevertheless.
sbatch --parsable --dependency="afterany:$array" "$here/merge.sbatch"
