"""Pseudo-experiments in shards under a real dask.distributed local cluster, merged, against one run: the same bits.

`python shards_dask.py BATCH SHEET.json` runs `BATCH trials SHEET --from A --to B` for ranges of trial numbers on two
worker processes and merges them with `BATCH merge`; the merged text has to equal that of one run over the whole range.
This is also the way to use a Dask cluster: the worker needs nothing but the program and the sheet.
"""
import subprocess
import sys
import tempfile
from pathlib import Path

TRIALS, SHARD, SEED = 24, 5, 7


def run(batch, *words):
    done = subprocess.run([batch, *words], capture_output=True, text=True)
    if done.returncode:
        raise RuntimeError(f"{' '.join(words)}: {done.stderr.strip()}")
    return done.stdout


def shard(batch, sheet, first, last):
    """Runs on a worker: trials first (included) to last (not included)."""
    return run(batch, "trials", sheet, "--seed", str(SEED), "--from", str(first), "--to", str(last))


def merged(batch, sheet):
    from distributed import Client, LocalCluster
    ranges = [(a, min(a + SHARD, TRIALS)) for a in range(0, TRIALS, SHARD)]
    with tempfile.TemporaryDirectory() as folder, LocalCluster(n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None, local_directory=folder) as cluster, Client(cluster) as client:
        futures = [client.submit(shard, batch, sheet, a, b) for a, b in reversed(ranges)]   # in the wrong order on purpose
        files = []
        for i, text in enumerate(client.gather(futures)):
            files.append(str(Path(folder) / f"shard{i}.json"))
            Path(files[-1]).write_text(text)
        return run(batch, "merge", *files)


def same_bits(batch, sheet):
    return merged(batch, sheet) == shard(batch, sheet, 0, TRIALS)


if __name__ == "__main__":
    ok = same_bits(sys.argv[1], sys.argv[2])
    print("shards under dask.distributed merge to the bits of one run" if ok else "shards differ from one run")
    print("1 passed, 0 failed" if ok else "0 passed, 1 failed")
    sys.exit(not ok)
