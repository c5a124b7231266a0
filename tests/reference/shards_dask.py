"""Pseudo-experiments in shards under a real dask.distributed local cluster, against one run: the same bits.

`python shards_dask.py BATCH SHEET.json` runs `BATCH trials SHEET --seed S --first A --count N` for ranges of trial numbers on
two worker processes and joins their rows; they have to equal the rows of one run over the whole range. This is also the
way to use a Dask cluster: a worker needs nothing but the program and the sheet.
"""
import json
import subprocess
import sys
import tempfile

TRIALS, SHARD, SEED = 24, 5, 7


def shard(batch, sheet, first, count):
    """Runs on a worker: the rows of trials first .. first + count - 1."""
    words = [batch, "trials", sheet, "--seed", str(SEED), "--first", str(first), "--count", str(count)]
    done = subprocess.run(words, capture_output=True, text=True)
    if done.returncode:
        raise RuntimeError(f"{' '.join(words)}: {done.stderr.strip()}")
    return json.loads(done.stdout)["rows"]       # the shortest decimals of a double: text keeps the bits


def pairs(batch, sheet):
    """(row of the shards, row of one run) for every trial."""
    from distributed import Client, LocalCluster
    starts = range(0, TRIALS, SHARD)
    with tempfile.TemporaryDirectory() as folder, LocalCluster(n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None, local_directory=folder) as cluster, Client(cluster) as client:
        futures = {a: client.submit(shard, batch, sheet, a, min(SHARD, TRIALS - a)) for a in reversed(starts)}   # in the wrong order on purpose
        joined = [row for a in starts for row in futures[a].result()]
    whole = shard(batch, sheet, 0, TRIALS)
    if len(joined) != len(whole):
        raise RuntimeError(f"{len(joined)} rows from shards, {len(whole)} from one run")
    return list(zip(joined, whole))


if __name__ == "__main__":
    different = sum(a != b for a, b in pairs(sys.argv[1], sys.argv[2]))
    print(f"{TRIALS} trials in shards of {SHARD} under dask.distributed: {different} differ from one run")
    print("0 passed, 1 failed" if different else "1 passed, 0 failed")
    sys.exit(different > 0)
