"""The guard of a supervisor: a process of its own that outlives it by a moment.

It reads process group numbers from its standard input: "+123" starts to watch a group, "-123" ends it. When the input
ends, the supervisor is gone, whatever killed it: the guard then ends every group it watches, asking first, then
by force. Run by its path, with the standard library only: it starts in milliseconds. Argument: the grace in seconds.
"""

import os
import signal
import sys
import time
from collections.abc import Iterable


def signal_group(group: int, number: int) -> bool:
    """Send a signal to a process group; False if nobody is left in it."""
    try:
        os.killpg(group, number)
    except (ProcessLookupError, PermissionError):  # macOS says EPERM when only zombies are left
        return False
    return True


def end_groups(groups: Iterable[int], grace: float) -> None:
    """Ask every group to end; after the grace kill what is left."""
    left = [group for group in groups if signal_group(group, signal.SIGTERM)]
    deadline = time.monotonic() + grace
    while left and time.monotonic() < deadline:
        time.sleep(0.05)
        left = [group for group in left if signal_group(group, 0)]
    for group in left:
        signal_group(group, signal.SIGKILL)


def main() -> None:
    """Watch until the input ends."""
    for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
        signal.signal(number, signal.SIG_IGN)
    groups: set[int] = set()
    for line in sys.stdin:
        group = int(line[1:])
        if line.startswith("+"):
            groups.add(group)
        else:
            groups.discard(group)
    end_groups(groups, grace=float(sys.argv[1]))


if __name__ == "__main__":
    main()
