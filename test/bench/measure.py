"""Runs one command and prints, as JSON, what the system counted for it: wall and processor seconds,
peak resident memory in bytes, exit status. The command's own output is thrown away, its messages kept.

usage: measure.py command argument ...
"""
import json
import os
import sys
import time

devnull = os.open(os.devnull, os.O_WRONLY)
begin = time.perf_counter()
child = os.posix_spawnp(sys.argv[1], sys.argv[1:], os.environ, file_actions=[(os.POSIX_SPAWN_DUP2, devnull, 1)])
_, status, usage = os.wait4(child, 0)
seconds = time.perf_counter() - begin
# Linux counts the peak in kB. It includes what this process held before the command took its place, about 10 MB.
print(
    json.dumps(
        {
            "seconds": seconds,
            "processor": usage.ru_utime + usage.ru_stime,
            "peak": usage.ru_maxrss * 1024,
            "status": os.waitstatus_to_exitcode(status),
        }
    )
)
