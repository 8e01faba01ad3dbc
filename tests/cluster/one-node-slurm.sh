#!/usr/bin/env bash
# A Slurm of one node on this machine, to try array jobs without a cluster. Needs root and Debian's packages:
#   apt-get install slurm-wlm munge
# Everything it writes lies in the folder given; `one-node-slurm.sh stop FOLDER` ends the daemons it started.
set -euo pipefail

action=$1
folder=$(realpath -m "$2")

if [[ $action == stop ]]; then
    for daemon in slurmd slurmctld munged; do
        if [[ -s $folder/$daemon.pid ]]; then kill "$(cat "$folder/$daemon.pid")" || true; fi
    done
    exit 0
fi

mkdir -p "$folder/state" "$folder/spool"
host=$(hostname -s)
cores=$(nproc)
memory=$(awk '/MemTotal/ { print int($2 / 1024 * 0.8) }' /proc/meminfo)

# Messages between the daemons are signed; key, socket and log stay in the folder.
dd if=/dev/urandom of="$folder/munge.key" bs=32 count=32 status=none
chmod 400 "$folder/munge.key"
munged --force --key-file="$folder/munge.key" --socket="$folder/munge.socket" --pid-file="$folder/munged.pid" \
    --log-file="$folder/munged.log" --seed-file="$folder/munge.seed"

cat > "$folder/slurm.conf" <<CONF
ClusterName=one-node
SlurmctldHost=$host(127.0.0.1)
SlurmUser=root
AuthType=auth/munge
AuthInfo=socket=$folder/munge.socket
StateSaveLocation=$folder/state
SlurmdSpoolDir=$folder/spool
SlurmctldPidFile=$folder/slurmctld.pid
SlurmdPidFile=$folder/slurmd.pid
SlurmctldLogFile=$folder/slurmctld.log
SlurmdLogFile=$folder/slurmd.log
# No control groups and no accounting: a plain machine has neither.
ProctrackType=proctrack/linuxproc
TaskPlugin=task/none
JobAcctGatherType=jobacct_gather/none
AccountingStorageType=accounting_storage/none
SelectType=select/cons_tres
SelectTypeParameters=CR_Core
SchedulerParameters=sched_interval=1,bf_interval=1
MpiDefault=none
ReturnToService=2
NodeName=node1 NodeHostname=$host NodeAddr=127.0.0.1 CPUs=$cores RealMemory=$memory State=UNKNOWN
PartitionName=main Nodes=node1 Default=YES MaxTime=INFINITE State=UP
CONF

export SLURM_CONF=$folder/slurm.conf
slurmctld
slurmd
for _ in $(seq 60); do
    if [[ $(sinfo --noheader --format=%t 2> /dev/null) == idle ]]; then
        echo "ready; export SLURM_CONF=$folder/slurm.conf"
        exit 0
    fi
    sleep 0.5
done
echo "the node does not come up; see the logs in $folder" >&2
exit 1
